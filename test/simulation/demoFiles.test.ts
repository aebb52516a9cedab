import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { DEMO_SEED, demoFiles, demoScenario } from '../../fixtures/demo/generate.js';
import { distanceTo, HOUSE, isInside, PARCEL, PIPELINE, POND } from '../../fixtures/demo/ground.js';
import { degreesMinutesSeconds } from '../../fixtures/demo/permits.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { SCENARIO_SCHEMA } from '../../src/simulation/scenarioSchema.js';
import { parseCsv } from '../../src/table/parseCsv.js';

const FOLDER = join(import.meta.dirname, '../../fixtures/demo');
const SEEDS = Array.from({ length: 40 }, (_, i) => i + 1);

function near(seed: number): boolean {
  const { scenario } = demoScenario(seed);
  return scenario.scrap.some((piece) => Math.hypot(...piece.moment_am2) >= 60
    && scenario.casings.some((casing) => Math.hypot(casing.at[0] - piece.at[0], casing.at[1] - piece.at[1]) <= 10));
}

function pair(seed: number): boolean {
  const { wells } = demoScenario(seed);
  return wells.some((a, i) => wells.some((b, k) => k > i && Math.hypot(a.at[0] - b.at[0], a.at[1] - b.at[1]) <= 30));
}

describe('the files in fixtures/demo', () => {
  it('are what the generator makes of the demo\'s seed, byte for byte', async () => {
    const files = await demoFiles(DEMO_SEED);
    const bytes = Object.entries(files).map(([name, content]) => [name, Buffer.from(content)] as const);
    // How they come to be written: UPDATE_DEMO=1 with this test.
    if (process.env['UPDATE_DEMO'] === '1') {
      for (const [name, content] of bytes) {
        await mkdir(dirname(join(FOLDER, name)), { recursive: true });
        await writeFile(join(FOLDER, name), content);
      }
    }
    for (const [name, content] of bytes) {
      const stored = await readFile(join(FOLDER, name));
      expect(stored.equals(content), `${name} differs; run the demo's generator again`).toBe(true);
    }
    expect(bytes.reduce((sum, [, content]) => sum + content.length, 0)).toBeLessThan(8e6);
  });

  it('hold a parcel, permits and readings of the size that the demo speaks of', async () => {
    const permits = parseCsv(await readFile(join(FOLDER, 'permits.csv')), 'permits.csv');
    expect(permits.rows).toBeGreaterThanOrEqual(6);
    expect(permits.rows).toBeLessThanOrEqual(10);
    expect(permits.columns.get('lon')!.filter((text) => !text.startsWith('-'))).toHaveLength(1);
    expect(permits.columns.get('datum')!.filter((text) => text === '')).toHaveLength(1);
    const readings = parseCsv(await readFile(join(FOLDER, 'readings.csv')), 'readings.csv');
    expect(readings.rows).toBeGreaterThan(50_000);
  });
});

describe('demoScenario', () => {
  it('is a scenario file that the schema takes as it is', () => {
    const { scenario } = demoScenario(DEMO_SEED);
    const read = readParameters(JSON.parse(JSON.stringify(scenario)), SCENARIO_SCHEMA, { where: 'scenario.json', resolve: (path) => path });
    expect(read).toEqual(JSON.parse(JSON.stringify(scenario)));
  });

  it.each(SEEDS)('lays seed %d out as stated', (seed) => {
    const { scenario, wells } = demoScenario(seed);
    expect(wells.filter((well) => well.permit === 'none' && well.casing)).toHaveLength(1);
    expect(wells.filter((well) => well.permit === 'right' && !well.casing)).toHaveLength(1);
    expect(wells.filter((well) => well.permit === 'unknown_datum' && well.casing)).toHaveLength(1);
    expect(wells.filter((well) => well.permit === 'wrong_sign' && well.casing)).toHaveLength(1);
    expect(scenario.casings.filter((casing) => casing.pole_am < 0)).toHaveLength(1);
    for (const [i, { at }] of wells.entries()) {
      expect(isInside(PARCEL, at)).toBe(true);
      expect(distanceTo(PARCEL, at)).toBeGreaterThanOrEqual(8);
      for (const ring of [HOUSE, POND]) expect(isInside(ring, at) ? 0 : distanceTo(ring, at)).toBeGreaterThanOrEqual(6);
      expect(distanceTo(PIPELINE, at)).toBeGreaterThanOrEqual(12);
      for (const other of wells.slice(i + 1)) expect(Math.hypot(at[0] - other.at[0], at[1] - other.at[1])).toBeGreaterThanOrEqual(20);
    }
    for (const { pole_am, top_depth_m } of scenario.casings) {
      expect(Math.abs(pole_am)).toBeGreaterThanOrEqual(60);
      expect(Math.abs(pole_am)).toBeLessThanOrEqual(350);
      expect(top_depth_m).toBeGreaterThanOrEqual(0.5);
      expect(top_depth_m).toBeLessThanOrEqual(2.2);
    }
    expect(scenario.scrap.length).toBeGreaterThanOrEqual(6);
    expect(scenario.scrap.length).toBeLessThanOrEqual(10);
  });

  it('gives other places for other seeds, and the same for the same', () => {
    const places = SEEDS.map((seed) => JSON.stringify(demoScenario(seed).wells));
    expect(new Set(places).size).toBe(SEEDS.length);
    expect(JSON.stringify(demoScenario(3).wells)).toBe(places[2]);
  });

  it('has strong scrap near a casing in some seeds and a close pair of wells in some', () => {
    for (const has of [near, pair]) {
      const share = SEEDS.filter(has).length / SEEDS.length;
      expect(share).toBeGreaterThan(0.2);
      expect(share).toBeLessThan(0.8);
    }
  });
});

describe('degreesMinutesSeconds', () => {
  it.each([
    [-79.62, 1, '-79°37\'12.0"'],
    [40.8666666, 0, '40°52\'00"'],
    [40.99999999, 1, '41°00\'00.0"'],
    [-0.5, 0, '-0°30\'00"'],
  ])('writes %d to %d decimals as %s', (deg, decimals, text) => {
    expect(degreesMinutesSeconds(deg, decimals)).toBe(text);
  });
});
