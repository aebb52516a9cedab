import { describe, expect, it } from 'vitest';
import type { Grid } from '../../src/raster/types.js';
import { Random } from '../../src/numerics/random.js';
import type { CasingSource, Scenario } from '../../src/simulation/types.js';
import { runDay } from '../support/fieldDay.js';

/**
 * The chance that the detection grid states against what the whole chain finds: casings so weak and deep that many are
 * missed, strewn over a made field day, walked with a wandering position, read, reduced and searched for as any other.
 */
const POLE_AM = [1, 10] as const;
const DEPTH_M = [0, 4] as const;
const APART_M = 45;
const FOUND_M = 2;

function weakCasings(scenario: Scenario, seed: number): CasingSource[] {
  const random = new Random(seed).fork('weak casings');
  const ring = scenario.parcel[0]![0]!;
  const [west, east] = [Math.min(...ring.map(([x]) => x)), Math.max(...ring.map(([x]) => x))];
  const [south, north] = [Math.min(...ring.map(([, y]) => y)), Math.max(...ring.map(([, y]) => y))];
  const list: CasingSource[] = [];
  for (let x = west + 15; x < east - 10; x += APART_M) {
    for (let y = south + 15; y < north - 10; y += APART_M) {
      list.push({
        id: `C${list.length + 1}`, at: [x + 8 * random.uniform(), y + 8 * random.uniform()], top_depth_m: DEPTH_M[0] + (DEPTH_M[1] - DEPTH_M[0]) * random.uniform(),
        pole_am: (random.uniform() < 0.3 ? -1 : 1) * POLE_AM[0] * (POLE_AM[1] / POLE_AM[0]) ** random.uniform(), length_m: 150, tilt_deg: 0.5, tilt_azimuth_deg: 0,
      });
    }
  }
  return list;
}

function valueAt(grid: Grid, x: number, y: number): number {
  const column = Math.floor((x - grid.west) / grid.cellM);
  const row = Math.floor((grid.north - y) / grid.cellM);
  return column >= 0 && column < grid.width && row >= 0 && row < grid.height ? grid.values[row * grid.width + column]! : NaN;
}

describe('the stated chance of detection', () => {
  it('is the share of weak casings that the whole chain finds', async () => {
    const seed = 10;
    const day = await runDay(seed, {
      alter: (scenario) => ({ ...scenario, casings: weakCasings(scenario, seed), scrap: [], pipelines: [] }),
      survey: (survey) => ({ ...survey, target: { pole_am: POLE_AM, depth_m: DEPTH_M } }),
    });
    const searched = day.truth.casings.filter(({ x, y }) => valueAt(day.detection, x, y) > 0);
    const stated = searched.reduce((sum, { x, y }) => sum + valueAt(day.detection, x, y), 0) / searched.length;
    const found = searched.filter(({ x, y }) => day.anomalies.list.some((anomaly) => Math.hypot(anomaly.x - x, anomaly.y - y) < FOUND_M)).length / searched.length;
    expect(searched.length).toBeGreaterThan(25);
    expect(stated).toBeGreaterThan(0.7);
    expect(stated).toBeLessThan(0.95);
    // Three standard errors of some 33 casings.
    expect(Math.abs(stated - found)).toBeLessThan(0.18);
  });
});
