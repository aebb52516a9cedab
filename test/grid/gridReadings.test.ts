import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import type { GridOptions } from '../../src/grid/gridOptions.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import { roundCell } from '../../src/grid/gridLayout.js';
import { linearOnTriangles } from '../../src/grid/linearOnTriangles.js';
import type { GridFrame, Samples } from '../../src/grid/types.js';
import { Random } from '../../src/numerics/random.js';
import { UserError } from '../../src/errors.js';
import type { Grid } from '../../src/raster/types.js';

const SHARED = new URL('../../../shared/checks/gridding/', import.meta.url);
const shared = (name: string) => new URL(name, SHARED);
const rows = (name: string) => readFileSync(shared(name), 'utf8').trim().split('\n');

/** Value of the cell whose centre is (x, y). */
function at(grid: Grid, x: number, y: number): number {
  const i = Math.floor((x - grid.west) / grid.cellM);
  const j = Math.floor((grid.north - y) / grid.cellM);
  return i < 0 || j < 0 || i >= grid.width || j >= grid.height ? NaN : grid.values[j * grid.width + i]!;
}

function rmse(pairs: ReadonlyArray<readonly [number, number]>): number {
  return Math.sqrt(pairs.reduce((sum, [a, b]) => sum + (a - b) ** 2, 0) / pairs.length);
}

function scattered(count: number, seed: number, f: (x: number, y: number) => number, size = 100): { x: Float64Array; y: Float64Array; value: Float64Array } {
  const random = new Random(seed);
  const x = Float64Array.from({ length: count }, () => size * random.uniform());
  const y = Float64Array.from({ length: count }, () => size * random.uniform());
  return { x, y, value: x.map((_, n) => f(x[n]!, y[n]!)) };
}

/** Source: Franke (1979), NPS-53-79-003, principal test function. */
const franke = (x: number, y: number) => 0.75 * Math.exp(-((9 * x - 2) ** 2 + (9 * y - 2) ** 2) / 4)
  + 0.75 * Math.exp(-((9 * x + 1) ** 2) / 49 - (9 * y + 1) / 10)
  + 0.5 * Math.exp(-((9 * x - 7) ** 2 + (9 * y - 3) ** 2) / 4)
  - 0.2 * Math.exp(-((9 * x - 4) ** 2) - (9 * y - 7) ** 2);

/** Lagrange's quadratic through −1, 0, 1. */
const weights = (t: number) => [(t * (t - 1)) / 2, 1 - t * t, (t * (t + 1)) / 2];

async function code(run: () => Promise<unknown>): Promise<string> {
  try {
    await run();
  } catch (error) {
    return (error as UserError).code;
  }
  return 'none';
}

/** Where the volcano's heights lie: at cell centres, row 0 in the north. */
const place = (r: number, c: number): [number, number] => [10 * c + 5, -10 * r - 5];

const THIN_PLATE = { tension: 0, reachM: 1e3 } satisfies GridOptions;

describe.skipIf(!existsSync(SHARED))('published surfaces', () => {
  it('volcano: every third height gives the rest back to 0.9 m', async () => {
    // Maunga Whau, 87 × 61 heights 10 m apart (R datasets). Thin plate of SciPy: 0.86 m, linear triangles 1.09 m.
    const heights = rows('datasets.volcano.csv').map((row) => row.split(',').map(Number));
    const samples = { x: [] as number[], y: [] as number[], value: [] as number[] };
    heights.forEach((row, r) => row.forEach((height, c) => {
      if (r % 3 || c % 3) return;
      const [x, y] = place(r, c);
      samples.x.push(x);
      samples.y.push(y);
      samples.value.push(height);
    }));
    const frame: GridFrame = { width: 61, height: 87, west: 0, north: 0, cellM: 10 };
    const bounds = { west: 0, south: -870, east: 610, north: 0 };
    const grid = await gridReadings(samples, { ...THIN_PLATE, cellM: 10, spacingM: 30, bounds });
    const linear = linearOnTriangles(samples, frame);
    const pairs: Array<[number, number]> = [];
    const linearPairs: Array<[number, number]> = [];
    heights.forEach((row, r) => row.forEach((height, c) => {
      if (r % 3 === 0 && c % 3 === 0) return expect(at(grid, ...place(r, c))).toBeCloseTo(height, 2);
      pairs.push([at(grid, ...place(r, c)), height]);
      if (Number.isFinite(at(linear, ...place(r, c)))) linearPairs.push([at(linear, ...place(r, c)), height]);
    }));
    expect(grid.converged).toBe(true);
    expect(rmse(pairs)).toBeLessThan(0.9);
    expect(rmse(linearPairs)).toBeCloseTo(1.09, 1);
  });

  it("Franke's function from 100 sites to 33 × 33 places", async () => {
    // SciPy's thin plate: 0.0095, linear triangles 0.029.
    const sites = rows('interp.franke_ds1.csv').slice(1).map((row) => row.split(',').map(Number) as [number, number]);
    // 128 cells to the unit, moved by half a cell so that the 33 × 33 places are cell centres.
    const cell = 1 / 128;
    const samples = { x: sites.map(([x]) => x + cell / 2), y: sites.map(([, y]) => y + cell / 2), value: sites.map(([x, y]) => franke(x, y)) };
    const grid = await gridReadings(samples, { ...THIN_PLATE, cellM: cell, spacingM: 0.1, bounds: { west: -0.25, south: -0.25, east: 1.25, north: 1.25 } });
    const pairs: Array<[number, number]> = [];
    for (let j = 0; j <= 32; j++) for (let i = 0; i <= 32; i++) pairs.push([at(grid, i / 32 + cell / 2, j / 32 + cell / 2), franke(i / 32, j / 32)]);
    expect(grid.converged).toBe(true);
    expect(rmse(pairs)).toBeLessThan(0.0105);
  });
});

describe('gridReadings', () => {
  it.each([0, 0.25, 1])('gives a constant and a plane back, tension %f', async (tension) => {
    for (const f of [() => 48_000, (x: number, y: number) => 100 + 0.3 * x - 0.7 * y]) {
      const grid = await gridReadings(scattered(60, 3, f), { tension, cellM: 4, spacingM: 12, reachM: 1000, bounds: { west: -40, south: -40, east: 140, north: 140 } });
      let worst = 0;
      for (let j = 0; j < grid.height; j++) {
        for (let i = 0; i < grid.width; i++) {
          const expected = f(grid.west + (i + 0.5) * 4, grid.north - (j + 0.5) * 4);
          worst = Math.max(worst, Math.abs(grid.values[j * grid.width + i]! - expected));
        }
      }
      // A 32-bit value near 48,000 is good to 0.004.
      expect(worst).toBeLessThan(0.004);
      expect(grid.filled).toBe(grid.width * grid.height);
    }
  });

  it('keeps symmetry', async () => {
    const half = scattered(30, 8, (x, y) => Math.sin(x / 15) * y);
    const samples = { x: [...half.x, ...half.x.map((x) => -x)], y: [...half.y, ...half.y], value: [...half.value, ...half.value] };
    const grid = await gridReadings(samples, { cellM: 4, spacingM: 15, tolerance: 1e-7, reachM: 20, bounds: { west: -120, south: -20, east: 120, north: 120 } });
    let worst = 0;
    for (let j = 0; j < grid.height; j++) {
      for (let i = 0; i < grid.width; i++) {
        const a = grid.values[j * grid.width + i]!;
        const b = grid.values[j * grid.width + grid.width - 1 - i]!;
        expect(Number.isNaN(a)).toBe(Number.isNaN(b));
        if (!Number.isNaN(a)) worst = Math.max(worst, Math.abs(a - b));
      }
    }
    expect(worst).toBeLessThan(2e-3);
  });

  it('follows scale, level and place of the data', async () => {
    const options = { cellM: 5, spacingM: 20, reachM: 30, tolerance: 1e-8 };
    const samples = scattered(40, 12, (x, y) => Math.cos(x / 20) + Math.sin(y / 11));
    const plain = await gridReadings(samples, options);
    const moved = await gridReadings(
      { x: samples.x.map((v) => v + 415), y: samples.y.map((v) => v - 1_230), value: samples.value.map((v) => 1000 - 50 * v) }, options,
    );
    expect(moved.west).toBe(plain.west + 415);
    expect(moved.north).toBe(plain.north - 1_230);
    expect(moved.width).toBe(plain.width);
    plain.values.forEach((v, k) => {
      if (Number.isNaN(v)) expect(moved.values[k]).toBeNaN();
      else expect(Math.abs(moved.values[k]! - (1000 - 50 * v))).toBeLessThan(1e-3);
    });
  });

  it('honours readings on nodes, and off nodes at their own place', async () => {
    const random = new Random(6);
    const cells = Array.from({ length: 40 }, (_, n) => [(n % 8) * 6 + random.integer(3), Math.floor(n / 8) * 8 + random.integer(4)] as const);
    const value = cells.map(() => random.normal());
    const onNodes = await gridReadings({ x: cells.map(([i]) => i + 0.5), y: cells.map(([, j]) => j + 0.5), value }, { cellM: 1, spacingM: 6, tolerance: 1e-7 });
    cells.forEach(([i, j], n) => expect(at(onNodes, i + 0.5, j + 0.5)).toBeCloseTo(value[n]!, 5));
    // Off nodes: the quadratic through the nine cells around passes through the reading.
    const off = cells.map(() => [random.uniform() - 0.5, random.uniform() - 0.5] as const);
    const grid = await gridReadings({ x: cells.map(([i], n) => i + 0.5 + off[n]![0]), y: cells.map(([, j], n) => j + 0.5 + off[n]![1]), value }, { cellM: 1, spacingM: 6, tolerance: 1e-7 });
    cells.forEach(([i, j], n) => {
      const [dx, dy] = off[n]!;
      let sum = 0;
      weights(dy).forEach((wy, b) => weights(dx).forEach((wx, a) => { sum += wx * wy * at(grid, i + a - 0.5, j + b - 0.5); }));
      expect(sum).toBeCloseTo(value[n]!, 4);
    });
  });

  it('fills exactly the cells within reach of a reading', async () => {
    const samples = scattered(25, 21, () => 1, 200);
    const grid = await gridReadings(samples, { cellM: 3, spacingM: 40, reachM: 17 });
    for (let j = 0; j < grid.height; j++) {
      for (let i = 0; i < grid.width; i++) {
        const x = grid.west + (i + 0.5) * 3;
        const y = grid.north - (j + 0.5) * 3;
        const nearest = Math.min(...Array.from(samples.x, (sx, n) => Math.hypot(sx - x, samples.y[n]! - y)));
        expect(Number.isFinite(grid.values[j * grid.width + i]!)).toBe(nearest <= 17);
      }
    }
  });

  it('has edges on multiples of the cell, in feet too', async () => {
    const foot = 1200 / 3937;
    const samples = scattered(50, 2, (x) => x);
    const moved = { ...samples, x: samples.x.map((x) => x + 1_354_321 * foot), y: samples.y.map((y) => y + 654_321 * foot) };
    for (const cellM of [1, 5 * foot]) {
      const grid = await gridReadings(moved, { cellM, spacingM: 10 });
      expect(Math.abs(grid.west / cellM - Math.round(grid.west / cellM))).toBeLessThan(1e-8);
      expect(Math.abs(grid.north / cellM - Math.round(grid.north / cellM))).toBeLessThan(1e-8);
      expect(grid.west).toBeLessThanOrEqual(Math.min(...moved.x) - grid.reachM + 1e-3);
    }
  });

  it('is not led astray by wild readings among several in a cell', async () => {
    const random = new Random(17);
    const samples = { x: [] as number[], y: [] as number[], value: [] as number[] };
    for (let j = 0; j < 20; j++) {
      for (let i = 0; i < 20; i++) {
        for (let n = 0; n < 6; n++) {
          const x = i + random.uniform();
          const y = j + random.uniform();
          samples.x.push(x);
          samples.y.push(y);
          // A steep slope in every cell, and one reading of six off by 10,000.
          samples.value.push(n === 3 ? 10_000 : 200 * x);
        }
      }
    }
    const grid = await gridReadings(samples, { cellM: 1, spacingM: 2 });
    // Within the slope's change over a tenth of a cell: nothing of the 10,000.
    for (let i = 2; i < 18; i++) expect(Math.abs(at(grid, i + 0.5, 10.5) - 200 * (i + 0.5))).toBeLessThan(40);
  });

  it.each([
    // Half way between two lines as far apart as the pole is deep a cubic can give back 0.78 of the peak (closed form at
    // 4 and 12 m across: 0.716 and 0.171, weighted 9/8 and −1/8); with lines half as far apart all but 3 %.
    { depth: 8, worst: 230, rms: 18 },
    { depth: 16, worst: 31, rms: 3 },
  ])('rebuilds the field of a pole $depth m down from lines 8 m apart', async ({ depth, worst, rms }) => {
    // Vertical field of a pole, closed form; readings 0.5 m apart.
    const field = (x: number, y: number) => 1000 * (depth / Math.hypot(x - 41.3, y - 37.9, depth)) ** 3;
    const samples = { x: [] as number[], y: [] as number[], value: [] as number[] };
    for (let y = 2; y <= 80; y += 8) {
      for (let x = 0; x <= 80; x += 0.5) {
        samples.x.push(x);
        samples.y.push(y);
        samples.value.push(field(x, y));
      }
    }
    const grid = await gridReadings(samples, { cellM: 1, spacingM: 8 });
    const pairs: Array<[number, number]> = [];
    for (let y = 4.5; y < 72; y++) for (let x = 2.5; x < 78; x++) pairs.push([at(grid, x, y), field(x, y)]);
    expect(Math.max(...pairs.map(([a, b]) => Math.abs(a - b)))).toBeLessThan(worst);
    expect(rmse(pairs)).toBeLessThan(rms);
    // On the lines themselves it is the closed form.
    for (let x = 2.5; x < 78; x++) expect(Math.abs((at(grid, x, 33.5) + at(grid, x, 34.5)) / 2 - field(x, 34))).toBeLessThan(8);
  });

  it('does without lines, with a single line and with a single reading', async () => {
    const line = Array.from({ length: 50 }, (_, n) => n);
    for (const tension of [0, 0.25]) {
      const along = await gridReadings({ x: line, y: line.map(() => 3.5), value: line.map((n) => Math.sin(n / 5)) }, { tension, cellM: 1, reachM: 4 });
      expect(along.converged).toBe(true);
      for (const v of along.values) if (!Number.isNaN(v)) expect(Math.abs(v)).toBeLessThan(1.5);
      // Nothing pulls to either side of the line.
      expect(at(along, 20.5, 5.5)).toBeCloseTo(at(along, 20.5, 1.5), 2);
    }
    const single = await gridReadings({ x: [5], y: [5], value: [42] }, { cellM: 1, reachM: 3 });
    for (const v of single.values) if (!Number.isNaN(v)) expect(v).toBeCloseTo(42, 4);
    expect(single.filled).toBeGreaterThan(20);
  });

  it('advises on the cell and says what it did', async () => {
    const samples = scattered(400, 4, (x) => x);
    expect((await gridReadings(samples, { cellM: 0.5, spacingM: 8 })).warnings.join()).toMatch(/finer/);
    expect((await gridReadings(samples, { cellM: 5, spacingM: 8 })).warnings.join()).toMatch(/coarse/);
    const fine = await gridReadings(samples, { spacingM: 8 });
    expect(fine.cellM).toBe(1.5);
    expect(fine.warnings).toEqual([]);
    expect(fine.notes.join(' ')).toContain(`${fine.filled} cells`);
    expect(fine.reachM).toBe(6);
    expect((await gridReadings(scattered(400, 4, (x, y) => Math.sin(x * y)), { spacingM: 8, maxSteps: 1, tolerance: 1e-9 })).warnings.join()).toMatch(/stopped/);
  });

  it('leaves out readings without value or place, and complains where none is left', async () => {
    const samples: Samples = { x: [0, 1, NaN, 3], y: [0, 1, 2, 3], value: [1, NaN, 5, 3] };
    const grid = await gridReadings(samples, { cellM: 1, spacingM: 4, reachM: 2 });
    expect(grid.pinned).toBe(2);
    expect(await code(() => gridReadings({ x: [NaN], y: [0], value: [1] }))).toBe('no_data');
    expect(await code(() => gridReadings(samples, { tension: 2 }))).toBe('value_invalid');
    expect(await code(() => gridReadings({ x: [0, 1e4], y: [0, 1e4], value: [0, 0] }, { cellM: 1 }))).toBe('value_invalid');
    expect(await code(() => gridReadings({ x: [0, 1e7], y: [0, 1e7], value: [0, 0] }, { cellM: 1 }))).toBe('value_invalid');
    expect(await code(() => gridReadings(samples, { cellM: 1, bounds: { west: 100, south: 100, east: 110, north: 110 } }))).toBe('no_data');
  });
});

describe('roundCell', () => {
  it.each([[1.6, 1.5], [40, 40], [0.97, 1], [0.0123, 0.01], [9.6, 10], [7.2, 8]])('%f to %f', (length, cell) => expect(roundCell(length)).toBe(cell));
});
