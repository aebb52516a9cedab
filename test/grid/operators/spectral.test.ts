import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { fillTorus } from '../../../src/grid/operators/fillTorus.js';
import { gradient } from '../../../src/grid/operators/gradient.js';
import { horizontalDerivative } from '../../../src/grid/operators/horizontalDerivative.js';
import { LEAST_INCLINATION_DEG, reductionToPole } from '../../../src/grid/operators/reductionToPole.js';
import { spectral } from '../../../src/grid/operators/spectral.js';
import { upwardContinuation } from '../../../src/grid/operators/upwardContinuation.js';
import { verticalDerivative } from '../../../src/grid/operators/verticalDerivative.js';
import { waveFilter } from '../../../src/grid/operators/waveFilter.js';
import { lineFilter } from '../../../src/grid/operators/lineFilter.js';
import { Random } from '../../../src/numerics/random.js';
import type { Grid } from '../../../src/raster/types.js';
import { along, dipole, downwards, makeGrid, pole, unitOf, worstShare } from './made.js';

const RELATIVE = 1e-9;
const SOURCE = pole(-200, [2, -3, 5]);
const ANOMALY = (x: number, y: number): number => downwards(SOURCE(x, y, 0));
const codeOf = (run: () => unknown): string => {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.code;
    throw error;
  }
  return 'none';
};

describe('spectral', () => {
  const same = { response: (_e: number, _n: number, out: Float64Array) => out.set([1, 0]), plane: <T>(plane: T): T => plane };

  it('gives back what it got with a factor of 1: any size, with noise, with gaps, on a slope', () => {
    const random = new Random(3);
    for (const [width, height] of [[1, 1], [1, 7], [9, 1], [2, 2], [31, 18], [64, 45]] as const) {
      const values = Float64Array.from({ length: width * height }, (_, n) => (n % 7 === 3 ? NaN : 50000 + 3 * (n % width) + random.normal()));
      const grid: Grid = { width, height, west: 10, north: 20, cellM: 0.5, values };
      expect(worstShare(spectral(grid, same), grid)).toBeLessThan(RELATIVE);
    }
  });

  it('takes Float32 values and leaves the input alone', () => {
    const grid = { ...makeGrid(20, 1, ANOMALY) };
    const single: Grid = { ...grid, values: Float32Array.from(grid.values) };
    const before = single.values.slice();
    expect(worstShare(upwardContinuation(single, 1).values, { ...grid, values: upwardContinuation(grid, 1).values })).toBeLessThan(1e-6);
    expect(single.values).toEqual(before);
  });

  it('keeps a plane through continuation and filters, and gives its slopes as derivatives', () => {
    const grid = makeGrid(30, 2, (x, y) => 100 + 0.3 * x - 0.7 * y);
    expect(worstShare(upwardContinuation(grid, 10).values, grid)).toBeLessThan(RELATIVE);
    expect(worstShare(waveFilter(grid, 20).values, grid)).toBeLessThan(RELATIVE);
    expect(worstShare(lineFilter(grid, 30).values, grid)).toBeLessThan(RELATIVE);
    const zero = (got: Float64Array, value: number) => got.reduce((most, v) => Math.max(most, Math.abs(v - value)), 0);
    const { east, north, down } = gradient(grid);
    expect([zero(east, 0.3), zero(north, -0.7), zero(down, 0)].every((error) => error < RELATIVE)).toBe(true);
    expect(zero(horizontalDerivative(grid, 180).values, 0.7)).toBeLessThan(RELATIVE);
  });

  it('leaves gaps and edges as gaps, and is right beside a gap of one depth away from the source', () => {
    const whole = makeGrid(120, 1, ANOMALY);
    const isGap = (x: number, y: number): boolean => Math.hypot(x + 25, y - 20) < 5 || x > 50 + 4 * Math.sin(y / 5) || Math.hypot(x - 10, y + 30) < 0.8;
    const holed = makeGrid(120, 1, (x, y) => (isGap(x, y) ? NaN : ANOMALY(x, y)));
    const masked = (wanted: Grid): Grid => ({ ...wanted, values: Float64Array.from(wanted.values, (value, n) => (Number.isNaN(holed.values[n]!) ? NaN : value)) });
    const lifted = makeGrid(120, 1, (x, y) => downwards(SOURCE(x, y, 2)));
    expect(holed.values.filter(Number.isNaN).length).toBeGreaterThan(500);
    expect(worstShare(upwardContinuation(holed, 2).values, masked(lifted))).toBeLessThan(0.01);
    for (const operator of [(g: Grid) => verticalDerivative(g).values, (g: Grid) => horizontalDerivative(g, 90).values]) {
      expect(worstShare(operator(holed), masked({ ...whole, values: operator(whole) }))).toBeLessThan(0.01);
    }
  });

  it('refuses a grid without values, and one too large', () => {
    expect(codeOf(() => spectral(makeGrid(5, 1, () => NaN), same))).toBe('no_data');
    expect(codeOf(() => spectral({ width: 20000, height: 20000, west: 0, north: 0, cellM: 1, values: new Float32Array(0) }, same))).toBe('value_invalid');
  });

  it('is linear and the same everywhere: a source moved by whole cells moves the result', () => {
    const at = (east: number, north: number) => verticalDerivative(makeGrid(100, 1, (x, y) => downwards(pole(-200, [east, north, 5])(x, y, 0)))).values;
    const one = at(0, 0), moved = at(7, -4);
    const shifted = makeGrid(100, 1, () => 0);
    for (let j = 20; j < 80; j++) for (let i = 20; i < 80; i++) shifted.values[j * 100 + i] = one[(j - 4) * 100 + i - 7]!;
    expect(worstShare(moved, shifted, 20)).toBeLessThan(0.003);
  });
});

describe('fillTorus', () => {
  it('fills a gap in a smooth field, round the torus too', () => {
    const width = 48, height = 40;
    const wanted = Float64Array.from({ length: width * height }, (_, n) => Math.cos((2 * Math.PI * (n % width)) / width) + 2);
    const known = Uint8Array.from(wanted, (_, n) => (Math.hypot(((n % width) + 4) % width - 4, Math.floor(n / width) - 3) < 4 ? 0 : 1));
    const values = wanted.map((value, n) => (known[n] ? value : 1e9));
    fillTorus({ width, height, stride: width, values, known }, 20);
    // A membrane over a hole of radius r misses k² r²/4 = 0.07 of a wave; the decay takes a little more.
    expect(Math.max(...values.map((value, n) => Math.abs(value - wanted[n]!)))).toBeLessThan(0.12);
  });

  it('leaves far cells near zero', () => {
    const width = 100, height = 100;
    const known = Uint8Array.from({ length: 1e4 }, (_, n) => (n < 500 ? 1 : 0));
    const values = Float64Array.from(known, (is) => (is ? 10 : NaN));
    fillTorus({ width, height, stride: width, values, known }, 8);
    expect(Math.abs(values[50 * width + 50]!)).toBeLessThan(0.5);
    expect(values[5 * width + 10]).toBeGreaterThan(8);
  });
});

describe('reduction to the pole in a flat field', () => {
  const grid = (inclinationDeg: number, m: 'pole' | 'dipole') => {
    const unit = unitOf(inclinationDeg, 0);
    const made = m === 'pole' ? pole(-200, [0, 0, 5]) : dipole(unit.map((c) => 1000 * c), [0, 0, 5]);
    return makeGrid(150, 1, (x, y) => along(unit)(made(x, y, 0)));
  };

  it.each([['vertical', 4], ['vertical', -4.9], ['along_field', 17]] as const)('is refused for %s iron at %f°', (magnetisation, inclinationDeg) => {
    const error = codeOf(() => reductionToPole(grid(inclinationDeg, 'pole'), { inclinationDeg, declinationDeg: 0 }, { magnetisation }));
    expect(error).toBe('field_out_of_range');
  });

  it('is steadied, and says so, above that: noise comes out no stronger than in the steeper field', () => {
    const random = new Random(11);
    const noise = makeGrid(150, 1, () => random.normal());
    const rms = (values: Float64Array): number => Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
    const at = (inclinationDeg: number, steadyBelowDeg: number) => reductionToPole(noise, { inclinationDeg, declinationDeg: 0 }, { steadyBelowDeg });
    // White noise grows by 1/√sin I: the mean of 1/(sin² I + cos² I cos² θ) over θ is 1/sin I.
    const gain = (deg: number): number => 1 / Math.sqrt(Math.sin((deg * Math.PI) / 180));
    expect(Math.abs(rms(at(6, 0).values) / rms(noise.values) / gain(6) - 1)).toBeLessThan(0.1);
    expect(Math.abs(rms(at(6, 20).values) / rms(noise.values) / gain(20) - 1)).toBeLessThan(0.1);
    expect(at(6, 20).warnings.join()).toContain('dips only 6.0°');
    expect(at(25, 20).warnings).toEqual([]);
  });

  it('still puts the peak above the casing', () => {
    for (const inclinationDeg of [LEAST_INCLINATION_DEG.vertical, -10, 15]) {
      const { values } = reductionToPole(grid(inclinationDeg, 'pole'), { inclinationDeg, declinationDeg: 0 });
      const best = values.indexOf(Math.max(...values));
      expect([Math.floor(best / 150), best % 150].every((index) => Math.abs(index - 74.5) < 1.1), String(inclinationDeg)).toBe(true);
    }
  });
});
