import { describe, expect, it } from 'vitest';
import { gridByMethod, type GridMethod } from '../../src/grid/gridByMethod.js';
import { Random } from '../../src/numerics/random.js';

const SPACING_M = 10;
const CELL_M = 1;
const SIDE_M = 150;
const PEAK_NT = 200;
const NOISE_NT = 0.5;
/** Direction of the feature, clockwise from the lines, which run north. */
const STRIKE = (30 * Math.PI) / 180;

/** Distance across the feature, which runs through the middle of the survey. */
function across(x: number, y: number): number {
  return (x - SIDE_M / 2) * Math.cos(STRIKE) - (y - SIDE_M / 2) * Math.sin(STRIKE);
}

/** Vertical field of a horizontal line of vertical dipoles: the slope with depth of z / (d² + z²), which is that of a line of poles. */
function field(x: number, y: number, depthM: number): number {
  const d2 = across(x, y) ** 2;
  return (PEAK_NT * depthM ** 2 * (depthM ** 2 - d2)) / (depthM ** 2 + d2) ** 2;
}

/** A reading a metre on lines that run north. */
function walk(depthM: number) {
  const random = new Random(15);
  const x: number[] = [], y: number[] = [], line: number[] = [], value: number[] = [];
  for (let l = 0; l <= SIDE_M / SPACING_M; l++) {
    for (let k = 0; k <= SIDE_M; k++) {
      x.push(l * SPACING_M);
      y.push(k);
      line.push(l);
      value.push(field(l * SPACING_M, k, depthM) + NOISE_NT * random.normal());
    }
  }
  return { x, y, line, value };
}

/** Root mean square of grid less field along the crest, over the peak, away from the survey's rim. The field there is the peak everywhere, so what is left is beads. */
async function ripple(method: GridMethod, depthM: number): Promise<number> {
  const { grid: { width, west, north, values } } = await gridByMethod(walk(depthM), { method, cellM: CELL_M, spacingM: SPACING_M });
  let [sum, count] = [0, 0];
  values.forEach((value, k) => {
    const [x, y] = [west + (k % width) + 0.5, north - Math.floor(k / width) - 0.5];
    if (Math.abs(across(x, y)) > CELL_M / 2 || Math.min(x, y, SIDE_M - x, SIDE_M - y) < 2 * SPACING_M) return;
    sum += (value - field(x, y, depthM)) ** 2;
    count++;
  });
  expect(count).toBeGreaterThan(80);
  return Math.sqrt(sum / count) / PEAK_NT;
}

describe('a feature at 30° to the lines', () => {
  // With lines half as far apart as it is deep it hardly beads; with lines twice as far apart no method can know its crest.
  it.each([
    { depthM: 20, most: { tension: 0.03, sources: 0.02, auto: 0.03 }, ofLinear: 0.35 },
    { depthM: 10, most: { tension: 0.21, sources: 0.2, auto: 0.21 }, ofLinear: 0.7 },
    { depthM: 5, most: { tension: 0.58, sources: 0.6, auto: 0.6 }, ofLinear: 0.93 },
  ])('$depthM m deep, lines 10 m apart, beads less than on linear triangles', async ({ depthM, most, ofLinear }) => {
    const linear = await ripple('linear', depthM);
    for (const method of ['tension', 'sources', 'auto'] as const) {
      const ours = await ripple(method, depthM);
      expect(ours, method).toBeLessThan(most[method]);
      expect(ours / linear, method).toBeLessThan(ofLinear);
    }
  });
});
