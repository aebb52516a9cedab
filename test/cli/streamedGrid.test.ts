import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { checkCog } from '../../src/raster/checkCog.js';
import { contents, demoFolder, editSurvey, ironplat, type Answer } from '../support/cli.js';
import { WAVES_MODULE } from '../support/streamedOperation.js';

describe('a grid that is made as its rows are read', () => {
  let folder: string;
  const waves = (as: string, out: string, ...rest: string[]): Promise<Answer> => ironplat(folder, '--operations', 'waves.mjs', 'waves', '--survey', 'survey.json', '--as', as, '--out', out, ...rest);
  const run = (out: string, sections: object): Promise<Answer> => {
    editSurvey(folder, (survey) => {
      for (const id of ['locate', 'plan', 'reduce', 'report']) survey[id] = false;
      delete survey.crests;
      Object.assign(survey, sections);
    });
    return ironplat(folder, '--operations', 'waves.mjs', 'run', 'survey.json', '--out', out);
  };
  const json = (name: string): any => JSON.parse(readFileSync(join(folder, name), 'utf8'));
  beforeAll(() => {
    folder = demoFolder({ lines: () => false });
    writeFileSync(join(folder, 'waves.mjs'), WAVES_MODULE);
  });

  it('is delivered as the same grid from memory is, and leaves nothing else', async () => {
    expect(await waves('held', 'held')).toMatchObject({ status: 0 });
    const answer = await waves('streamed', 'streamed');
    expect(answer.status, answer.err).toBe(0);
    const [held, streamed] = [contents(join(folder, 'held')), contents(join(folder, 'streamed'))];
    expect([...streamed.keys()]).toEqual(['stages/waves.provenance.json', 'waves.sld', 'waves.tif']);
    for (const name of ['waves.sld', 'waves.tif']) expect(streamed.get(name)!.equals(held.get(name)!), name).toBe(true);
    expect(checkCog(streamed.get('waves.tif')!)).toEqual([]);
    expect(json('streamed/stages/waves.provenance.json').outputs).toEqual(json('held/stages/waves.provenance.json').outputs);
  });

  it('says what there is to say once it is written, each thing once', async () => {
    const answer = await waves('streamed', 'told', '--json');
    const warnings = ['waves: waves everywhere', 'waves: 1300 rows were read'];
    expect(JSON.parse(answer.out).warnings).toEqual(warnings);
    expect(answer.err).toBe(warnings.map((warning) => `warning: ${warning}\n`).join(''));
    expect(json('told/stages/waves.provenance.json').warnings).toEqual(warnings);
  });

  it('stands in manifest and provenance with its own size, hash and statistics, and an operation that can do without it does', async () => {
    expect(await run('whole-held', { waves: { as: 'held' } })).toMatchObject({ status: 0 });
    const answer = await run('whole', { waves: { as: 'streamed' } });
    expect(answer.status, answer.err).toBe(0);
    expect(answer.err).toContain('warning: tale: goes without "waves" (Waves), a grid of 700 × 1300 cells that does not fit into memory');
    expect(json('whole-held/tale.json')).toBe('waves');
    expect(json('whole/tale.json')).toBe('none');
    const [held, streamed] = [json('whole-held/item.json').assets.waves, json('whole/item.json').assets.waves];
    const { statistics } = streamed.bands[0];
    for (const [name, value] of Object.entries(held.bands[0].statistics as Record<string, number>)) expect(statistics[name], name).toBeCloseTo(value, 9);
    expect({ ...streamed, bands: [] }).toEqual({ ...held, bands: [] });
    expect(await ironplat(folder, 'check', 'whole')).toMatchObject({ status: 0 });
    writeFileSync(join(folder, 'whole/waves.tif'), readFileSync(join(folder, 'whole/waves.tif')).fill(1, 5000, 5001));
    expect((await ironplat(folder, 'check', 'whole')).err).toMatch(/waves\.tif: found \d+ bytes with SHA-256/);
  });

  it('stops an operation that needs it, which says what to do', async () => {
    const answer = await run('stopped', { waves: { as: 'streamed' }, crests: { least: 3 } });
    expect(answer.status).toBe(1);
    expect(answer.err).toMatch(/ironplat crests, waves: found a grid of 700 × 1300 cells, wanted .* 64 million cells; state a larger cell_m .*"crests": false\./);
    expect(existsSync(join(folder, 'stopped'))).toBe(false);
  });

  it('leaves the folder as it was when it fails half-way', async () => {
    const answer = await waves('lost', 'nowhere/below');
    expect(answer.status).not.toBe(0);
    expect(answer.err).toContain('row 512 is lost');
    expect(existsSync(join(folder, 'nowhere'))).toBe(false);
    const before = contents(join(folder, 'streamed'));
    expect((await waves('lost', 'streamed')).status).not.toBe(0);
    const after = contents(join(folder, 'streamed'));
    expect([...after.keys()]).toEqual([...before.keys()]);
    for (const [name, bytes] of after) expect(bytes.equals(before.get(name)!), name).toBe(true);
  });

  it('leaves the folder as it was when another file cannot be written', async () => {
    mkdirSync(join(folder, 'blocked'));
    // A file where a folder has to be.
    writeFileSync(join(folder, 'blocked/stages'), 'mine');
    const answer = await waves('streamed', 'blocked');
    expect(answer.status).not.toBe(0);
    expect([...contents(join(folder, 'blocked'))]).toEqual([['stages', Buffer.from('mine')]]);
  });
});
