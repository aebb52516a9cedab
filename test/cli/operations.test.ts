import { existsSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { BUILT_IN_OPERATIONS } from '../../src/operations/index.js';
import { VERSION } from '../../src/version.js';
import { cellsWithGdal, openWithGdal } from '../support/gdal.js';
import { contents, DEMO_FOLDER, demoFolder, edit, editSurvey, ironplat, newFolder } from '../support/cli.js';

/** An operation of a caller's own, as a user would write it in a file beside the survey. */
const MINE = `export default {
  id: 'steepness', version: '1.2.3', title: 'Steepness of the residual', summary: 'Largest difference between a cell and its four neighbours, times a factor.',
  parameters: { type: 'object', additionalProperties: false, properties: { factor: { type: 'number', default: 2, minimum: 0, description: 'Multiplies the result.' }, least_m: { type: 'number', 'x-unit': 'm', default: 0, description: 'Unused length.' } } },
  inputs: { residual: { title: 'Residual grid', form: 'grid' } },
  outputs: { steepness: { title: 'Steepness', form: 'grid', unit: 'nT' } },
  sources: ['Difference quotient'], example: 'ironplat steepness --operations mine.js --survey survey.json --out out',
  async run({ inputs: { residual }, parameters, warn }) {
    const { width, height, values } = residual;
    const out = new Float32Array(values.length).fill(NaN);
    for (let y = 1; y + 1 < height; y++) for (let x = 1; x + 1 < width; x++) {
      const i = y * width + x;
      out[i] = parameters.factor * Math.max(...[i - 1, i + 1, i - width, i + width].map((k) => Math.abs(values[k] - values[i])));
    }
    warn('steep ' + parameters.least_m);
    return { steepness: { ...residual, values: out } };
  },
};
`;

describe('an operation of a caller\'s own', () => {
  let folder: string;
  beforeAll(() => {
    folder = demoFolder({ lines: (line) => line <= 12 });
    writeFileSync(join(folder, 'mine.js'), MINE);
    editSurvey(folder, (survey) => {
      survey.steepness = { least_m: '10 ft' };
      survey.plan = false;
    });
  });

  it('runs with the others, and is in manifest, provenance and report', async () => {
    const answer = await ironplat(folder, '--operations', 'mine.js', 'run', 'survey.json', '--out', 'delivery', '--json');
    expect(answer.status, answer.err).toBe(0);
    expect(answer.err).toContain('warning: steepness: steep 3.048');
    expect((JSON.parse(answer.out) as { files: string[] }).files).toContain('steepness.tif');
    const item = JSON.parse(readFileSync(join(folder, 'delivery/item.json'), 'utf8')) as any;
    expect(item.assets.steepness).toMatchObject({ roles: ['transform', 'data'], title: 'Steepness', bands: [{ unit: 'nT' }] });
    const provenance = JSON.parse(readFileSync(join(folder, 'delivery/provenance.json'), 'utf8')) as any;
    expect(provenance.steps.map((step: any) => step.operation)).toEqual(['locate', 'reduce', 'grid', 'delineate', 'reconcile', 'steepness', 'report']);
    expect(provenance.steps.at(-2)).toMatchObject({ version: '1.2.3', parameters: { factor: 2, least_m: 3.048 } });
    expect(readFileSync(join(folder, 'delivery/report.html'), 'utf8')).toContain('steepness');
    const opened = await openWithGdal({ 'steepness.tif': readFileSync(join(folder, 'delivery/steepness.tif')) });
    expect(opened.raster!.bands[0]).toMatchObject({ type: 'Float32', unit: 'nT', description: 'Steepness' });
  });

  it('is a command with flags and help of its own, on files of an earlier run', async () => {
    const help = await ironplat(folder, '--operations', 'mine.js', 'steepness', '--help');
    expect(help.status).toBe(0);
    for (const part of ['--factor <number>', '--least-m <m>', '--from-residual <file>', 'Difference quotient', 'ironplat steepness']) expect(help.out).toContain(part);
    const before = readFileSync(join(folder, 'delivery/steepness.tif'));
    const answer = await ironplat(folder, '--operations=mine.js', 'steepness', '--survey', 'survey.json', '--from-residual', 'delivery/residual.tif', '--factor', '4', '--out', 'again');
    expect(answer.status, answer.err).toBe(0);
    const maximum = async (bytes: Uint8Array): Promise<number> => (await cellsWithGdal(bytes)).values.reduce((most, value) => (value > most ? value : most), -Infinity);
    expect(await maximum(readFileSync(join(folder, 'again/steepness.tif'))) / await maximum(before)).toBeCloseTo(2, 5);
    const bad = await ironplat(folder, '--operations', 'mine.js', 'steepness', '--survey', 'survey.json', '--from-residual', 'delivery/residual.tif', '--factor', '-1', '--out', 'bad');
    expect(bad).toMatchObject({ status: 2 });
    expect(bad.err).toContain('steepness, factor: found -1, wanted a number >= 0');
    expect(existsSync(join(folder, 'bad'))).toBe(false);
  });

  it('is described, in the survey schema and as a process', async () => {
    const schema = JSON.parse((await ironplat(folder, '--operations', 'mine.js', 'describe', '--schema')).out) as any;
    expect(schema.properties.steepness.oneOf[0].properties.factor).toMatchObject({ minimum: 0, default: 2 });
    const process = JSON.parse((await ironplat(folder, '--operations', 'mine.js', 'describe', 'steepness', '--process')).out) as any;
    expect(process).toMatchObject({ id: 'steepness', version: '1.2.3', inputs: { residual: { minOccurs: 1 }, factor: { minOccurs: 0 } } });
    expect((await ironplat(folder, 'describe', 'steepness')).status).toBe(2);
  });

  it.each([
    ['export default 3;', 'an operation'],
    ['export const x = 1;', 'default export'],
    ['throw new Error("boo");', 'boo'],
    [MINE.replace("'steepness'", "'grid'"), 'taken'],
    [MINE.replace("'steepness'", "'run'"), 'a command'],
    [MINE.replace("version: '1.2.3'", "version: '1'"), 'semantic version'],
  ])('that is none is refused: %#', async (text, says) => {
    writeFileSync(join(folder, 'wrong.mjs'), text);
    const copy = join(folder, `wrong-${says.length}-${text.length}.mjs`);
    writeFileSync(copy, text);
    const answer = await ironplat(folder, '--operations', copy, 'describe');
    expect(answer.err).toContain(says);
    expect(answer.status).toBeGreaterThan(0);
    rmSync(copy);
  });
});

describe('the commands', () => {
  it('stage by stage on files find what a run finds', async () => {
    const folder = demoFolder({ lines: (line) => line <= 16 });
    expect(await ironplat(folder, 'run', 'survey.json', '--out', 'whole', '--quiet')).toMatchObject({ status: 0, out: '' });
    for (const id of ['locate', 'plan', 'reduce', 'grid', 'delineate', 'reconcile', 'report']) {
      const answer = await ironplat(folder, id, '--survey', 'survey.json', '--out', 'parts');
      expect(answer.status, answer.err).toBe(0);
    }
    const findings = (from: string): any[] => JSON.parse(readFileSync(join(folder, from, 'findings.geojson'), 'utf8')).features;
    const [whole, parts] = [findings('whole'), findings('parts')];
    expect(parts.map((feature) => feature.properties.finding)).toEqual(whole.map((feature) => feature.properties.finding));
    // Positions go through the CSV with 0.1 mm, fields with 0.001 nT.
    parts.forEach((feature, i) => {
      if (feature.properties.p_match !== null) expect(feature.properties.p_match).toBeCloseTo(whole[i].properties.p_match, 2);
    });
    const missing = await ironplat(folder, 'grid', '--survey', 'survey.json', '--out', 'nothing');
    expect(missing).toMatchObject({ status: 1 });
    expect(missing.err).toMatch(/nothing\/readings\.csv: found no such file, .*--from-readings/);
  });

  it('check a survey file before it runs, and a delivered folder against its provenance', async () => {
    const folder = demoFolder({ lines: (line) => line <= 4 });
    const before = await ironplat(folder, 'check', 'survey.json');
    expect(before.status, before.err).toBe(0);
    for (const part of ['EPSG:2272', 'US survey foot', 'nT', 'readings.csv']) expect(before.out).toContain(part);
    await ironplat(folder, 'run', 'survey.json', '--out', 'delivery');
    expect(await ironplat(folder, 'check', 'delivery')).toMatchObject({ status: 0 });
    edit(folder, 'delivery/findings.geojson', (text) => text.replace('located', 'looted') + ' ');
    const after = await ironplat(folder, 'check', 'delivery');
    expect(after.status).toBe(1);
    expect(after.err).toMatch(/findings\.geojson: found .* wanted .* that were delivered/);
    rmSync(join(folder, 'delivery/plan.gpx'));
    expect((await ironplat(folder, 'check', 'delivery')).status).toBe(1);
    edit(folder, 'survey.json', (text) => text.replace('"base.csv"', '"bass.csv"'));
    expect((await ironplat(folder, 'check', 'survey.json')).err).toContain('bass.csv');
  });

  it('simulate makes the demo\'s readings from its scenario', async () => {
    const folder = newFolder();
    const answer = await ironplat(folder, 'simulate', join(DEMO_FOLDER, 'truth/scenario.json'), '--out', 'made');
    expect(answer.status, answer.err).toBe(0);
    expect(contents(join(folder, 'made')).get('readings.csv')!.equals(readFileSync(join(DEMO_FOLDER, 'readings.csv')))).toBe(true);
    const other = await ironplat(folder, 'simulate', join(DEMO_FOLDER, 'truth/scenario.json'), '--out', 'other', '--seed', '99');
    expect(other.out).toContain('seed 99');
    expect(contents(join(folder, 'other')).get('readings.csv')!.equals(readFileSync(join(DEMO_FOLDER, 'readings.csv')))).toBe(false);
  });

  it('have help with an example, and say the package\'s version', async () => {
    const folder = newFolder();
    for (const { id, example } of BUILT_IN_OPERATIONS) {
      const answer = await ironplat(folder, id, '--help');
      expect(answer.status).toBe(0);
      expect(answer.out).toContain(example);
      expect(example).toContain(`ironplat ${id}`);
    }
    for (const id of ['run', 'simulate', 'check', 'describe']) expect((await ironplat(folder, id, '--help')).out).toContain(`ironplat ${id} `);
    const version = (await ironplat(folder, '--version')).out.trim();
    expect(version).toBe(VERSION);
    expect((JSON.parse(readFileSync(join(import.meta.dirname, '../../package.json'), 'utf8')) as { version: string }).version).toBe(VERSION);
  });
});
