import { mkdirSync, readdirSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { fileSource } from '../../cli/fileSource.js';
import { crs } from '../../src/geodesy/crs.js';
import { MAX_CELLS } from '../../src/grid/gridFrame.js';
import { gridTiled } from '../../src/grid/gridTiled.js';
import { openGeoTiff } from '../../src/raster/openGeoTiff.js';
import type { Readings } from '../../src/readings/types.js';
import type { Site } from '../../src/site/types.js';
import { encodeReadings } from '../../src/survey/readingsCsv.js';
import { encodeValue } from '../../src/survey/valueJson.js';
import { builtProject, runBuilt } from '../support/built.js';
import { newFolder, type Answer } from '../support/cli.js';

const FRAME = crs(26917);
const [WEST, SOUTH] = [500_000, 4_400_000];
/** How far apart the two ends of the survey lie, metres: at a metre a cell more cells than fit into memory. */
const APART = 8100;
/** Few steps: what is asked here is what becomes of the grid, not how good it is. */
const PARAMETERS = ['--cell-m', '1', '--spacing-m', '4', '--reach-m', '3', '--tolerance', '1e-4', '--max-steps', '2'];

/** Five short lines in one corner and five in the other, with nothing in between. */
function readings(): Readings {
  const count = 2 * 5 * 40;
  const at = (n: number): { line: number; end: number; along: number } => ({ line: Math.floor(n / 40), end: Math.floor(n / 200), along: n % 40 });
  const column = (of: (n: number) => number): Float64Array => Float64Array.from({ length: count }, (_, n) => of(n));
  // A whole number of thousandths, as the CSV keeps it.
  const values = column((n) => Math.round(20_000 * Math.sin(at(n).along / 6) + 1000 * at(n).line) / 1000);
  return {
    count, x: column((n) => WEST + APART * at(n).end + at(n).along), y: column((n) => SOUTH + APART * at(n).end + 4 * (at(n).line % 5)),
    heightM: column(() => 2), timeS: column((n) => 1.776e9 + n), line: Int32Array.from({ length: count }, (_, n) => at(n).line),
    lineNames: Array.from({ length: 10 }, (_, line) => `L${line}`), raw: values, steps: [], residual: values, flag: new Uint8Array(count),
    positionSdM: 0.3, positionCorrelationS: 60, warnings: [],
  };
}

describe('a grid of more cells than fit into memory, from the command line', () => {
  let built: string;
  let folder: string;
  const command = (...argv: string[]): Answer => runBuilt(built, folder, argv[0]!, '--survey', 'survey.json', '--out', 'out', ...argv.slice(1));
  beforeAll(() => {
    built = builtProject();
    folder = newFolder();
    const corners = [[0, 0], [1, 0], [1, 1], [0, 1], [0, 0]].map(([a, b]) => FRAME.inverse(WEST + APART * a!, SOUTH + APART * b!));
    writeFileSync(join(folder, 'parcel.geojson'), JSON.stringify({ type: 'Feature', properties: {}, geometry: { type: 'Polygon', coordinates: [corners] } }));
    writeFileSync(join(folder, 'survey.json'), JSON.stringify({ crs: 'EPSG:26917', date: '2026-04-14', parcel: 'parcel.geojson' }));
    const { csv, header } = encodeReadings(readings(), { frame: FRAME } as Site);
    mkdirSync(join(folder, 'out/stages'), { recursive: true });
    writeFileSync(join(folder, 'out/readings.csv'), csv);
    writeFileSync(join(folder, 'out/stages/readings.json'), encodeValue(header));
  });
  afterAll(() => {
    rmSync(built, { recursive: true });
    rmSync(folder, { recursive: true });
  });

  it('is written on threads as it is made on one, and nothing is left beside it', async () => {
    const answer = command('grid', ...PARAMETERS);
    expect(answer.status, answer.err).toBe(0);
    expect(answer.err).toMatch(/warning: grid: The grid's solver stopped after 2 steps/);
    expect(readdirSync(join(folder, 'out')).toSorted()).toEqual(['readings.csv', 'residual.sld', 'residual.tif', 'stages']);
    const { width, height, readWindow } = await openGeoTiff(await fileSource(join(folder, 'out/residual.tif')));
    expect(width * height).toBeGreaterThan(MAX_CELLS);
    const { x, y, residual } = readings();
    const here = gridTiled({ x, y, value: residual }, { cellM: 1, spacingM: 4, reachM: 3, tolerance: 1e-4, maxSteps: 2 });
    expect([here.width, here.height]).toEqual([width, height]);
    const window = await readWindow({ column: 0, row: 0, width, height: 200 });
    expect(window.values.filter((value) => !Number.isNaN(value)).length).toBeGreaterThan(500);
    expect(window.values).toEqual(await here.readRows(0, 200));
    expect(command('grid', ...PARAMETERS, '--method', 'sources')).toMatchObject({ status: 1, err: expect.stringContaining('take "tension"') as string });
  });

  it('is no input of an operation that needs it, and the report does without', () => {
    expect(command('transform', '--kind', 'tilt')).toMatchObject({ status: 1, err: expect.stringMatching(/ironplat transform, residual: found a grid of \d+ × \d+ cells, wanted one that fits into memory/) as string });
    const report = command('report');
    expect(report.status, report.err).toBe(0);
    expect(report.err).toContain('warning: report: goes without "residual" (Residual grid), a grid of');
    expect(statSync(join(folder, 'out/report.html')).size).toBeGreaterThan(1000);
  });

  it('fails with a thread that fails, and leaves the folder as it was', () => {
    rmSync(join(built, 'cli/tileWorker.js'));
    const before = readdirSync(join(folder, 'out')).map((name) => [name, statSync(join(folder, 'out', name)).mtimeMs]);
    const answer = command('grid', ...PARAMETERS);
    expect(answer.status).toBe(70);
    expect(answer.err).toContain('tileWorker');
    expect(readdirSync(join(folder, 'out')).map((name) => [name, statSync(join(folder, 'out', name)).mtimeMs])).toEqual(before);
  });
});
