import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import { gridTiled, type TiledGrid, type TiledOptions } from '../../src/grid/gridTiled.js';
import { solveTile, type TileSolution, type TileTask } from '../../src/grid/solveTile.js';
import type { Samples } from '../../src/grid/types.js';
import { Random } from '../../src/numerics/random.js';

const SIDE = 400;
const SPACING = 4;

/** Lines 4 m apart that wander, a reading a metre: a slope, a few poles, noise of 1 nT; holes without readings. */
function lines(holes: ReadonlyArray<readonly [number, number, number]>): Samples {
  const random = new Random(11);
  const poles = Array.from({ length: 12 }, () => [SIDE * random.uniform(), SIDE * random.uniform(), 2 + 5 * random.uniform(), 5000 * random.normal()] as const);
  const x: number[] = [], y: number[] = [], value: number[] = [];
  for (let l = 0; l < SIDE / SPACING; l++) {
    let off = 0;
    for (let k = 0; k < SIDE; k++) {
      off = 0.99 * off + 0.05 * random.normal();
      const [px, py] = [k + 0.5, (l + 0.5) * SPACING + off];
      const noise = random.normal();
      if (holes.some(([hx, hy, radius]) => Math.hypot(px - hx, py - hy) < radius)) continue;
      x.push(px);
      y.push(py);
      value.push(poles.reduce((sum, [qx, qy, z, m]) => sum + (m * z) / ((px - qx) ** 2 + (py - qy) ** 2 + z * z) ** 1.5, 0.3 * px + noise));
    }
  }
  return { x, y, value };
}

const OPTIONS = { cellM: 1, spacingM: SPACING, bounds: { west: 0, south: 0, east: SIDE, north: SIDE }, tolerance: 1e-8, maxSteps: 100 } satisfies TiledOptions;

async function allRows(grid: TiledGrid, step: number): Promise<Float32Array> {
  const values = new Float32Array(grid.width * grid.height);
  for (let first = 0; first < grid.height; first += step) {
    values.set(await grid.readRows(first, Math.min(step, grid.height - first)), first * grid.width);
  }
  return values;
}

/** Largest difference where both have a value; fails where only one has. */
function largest(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let most = 0;
  for (let k = 0; k < a.length; k++) {
    if (Number.isNaN(a[k]!) !== Number.isNaN(b[k]!)) throw new Error(`cell ${k}: ${a[k]} and ${b[k]}`);
    most = Math.max(most, Math.abs(a[k]! - b[k]!) || 0);
  }
  return most;
}

describe('gridTiled', () => {
  const holes = [[190, 260, 30], [96, 96, 12]] as const;
  const samples = lines(holes);

  it('gives the surface of the whole within 0.01 nT, across lines, poles and holes', async () => {
    const whole = await gridReadings(samples, OPTIONS);
    const tiled = gridTiled(samples, { ...OPTIONS, tileCells: 100 });
    const values = await allRows(tiled, 64);
    expect(tiled.tileCells).toBe(100);
    expect(tiled.range).toBeGreaterThan(200);
    expect(largest(values, whole.values)).toBeLessThan(0.01);
    expect(tiled.summary().filled).toBe(whole.filled);
    expect(tiled.summary().pinned).toBe(whole.pinned);
    expect(tiled.summary().converged).toBe(true);
    // With hardly any overlap seams are seen: the bound above is no accident.
    const seamed = await allRows(gridTiled(samples, { ...OPTIONS, tileCells: 100, overlapSpacings: 2, gapOverlapSpacings: 2 }), 64);
    expect(largest(seamed, whole.values)).toBeGreaterThan(0.1);
  });

  it('does not depend on the order in which tiles are solved, nor on how rows are asked for', async () => {
    const plain = await allRows(gridTiled(samples, { ...OPTIONS, tolerance: 1e-4, tileCells: 128 }), 400);
    const waiting: Array<() => void> = [];
    const solve = (task: TileTask): Promise<TileSolution> => new Promise((done) => {
      waiting.push(() => done(solveTile(structuredClone(task))));
      setTimeout(() => waiting.pop()?.(), 0);
    });
    const mixed = await allRows(gridTiled(samples, { ...OPTIONS, tolerance: 1e-4, tileCells: 128, solve }), 37);
    expect(largest(plain, mixed)).toBe(0);
  });

  it('leaves ground far from readings empty, without solving it', async () => {
    let solved = 0;
    const corner = lines([]);
    const few = { x: Array.from(corner.x).filter((_, n) => corner.x[n]! < 60 && corner.y[n]! < 60), y: Array.from(corner.y).filter((_, n) => corner.x[n]! < 60 && corner.y[n]! < 60), value: Array.from(corner.value).filter((_, n) => corner.x[n]! < 60 && corner.y[n]! < 60) };
    const tiled = gridTiled(few, { ...OPTIONS, tileCells: 100, overlapSpacings: 3, gapOverlapSpacings: 3, solve: (task) => (solved += task.frame.cellM === 1 ? 1 : 0, solveTile(task)) });
    const values = await allRows(tiled, 512);
    expect(solved).toBe(1);
    expect(values.filter((v) => !Number.isNaN(v)).length).toBe(tiled.summary().filled);
    expect(values[(SIDE - 1) * SIDE]).not.toBeNaN();
    expect(values[0]).toBeNaN();
  });

  it('solves a grid of one tile here, whatever it is told, and says in words what was done', async () => {
    let elsewhere = 0;
    const tiled = gridTiled(samples, { ...OPTIONS, tolerance: 1e-4, solve: (task) => (elsewhere++, solveTile(task)) });
    const values = await allRows(tiled, SIDE);
    expect(elsewhere).toBe(0);
    const { filled, pinned } = tiled.summary();
    expect(filled).toBe(values.filter((v) => !Number.isNaN(v)).length);
    expect(pinned).toBeGreaterThan(SIDE * SIDE / SPACING / 2);
    expect(tiled.remarks().notes.join(' ')).toContain(`${filled} cells are filled, all within 3 m of a reading; ${pinned} of them hold readings.`);
  });

  it('hands on what goes wrong in a tile, and complains where there is no reading', async () => {
    const broken = gridTiled(samples, { ...OPTIONS, tileCells: 100, solve: () => Promise.reject(new Error('thread lost')) });
    await expect(broken.readRows(0, 1)).rejects.toThrow('thread lost');
    expect(() => gridTiled(samples, { ...OPTIONS, tension: -0.1 })).toThrow('from 0 to 1');
    expect(() => gridTiled(samples, { ...OPTIONS, maxCells: SIDE * SIDE - 1 })).toThrow('million cells');
    // In rows without readings nobody waits for the wide surface: its failure has to wait too, unhandled by none.
    const south = { x: [10, 20, 30], y: [10, 10, 20], value: [1, 2, 3] };
    const late = gridTiled(south, { ...OPTIONS, tileCells: 100, overlapSpacings: 3, gapOverlapSpacings: 3, solve: () => Promise.reject(new Error('thread lost')) });
    expect((await late.readRows(0, 1)).every(Number.isNaN)).toBe(true);
    await new Promise((done) => setTimeout(done, 0));
    await expect(late.readRows(SIDE - 1, 1)).rejects.toThrow('thread lost');
    expect(() => gridTiled({ x: [NaN], y: [1], value: [1] }, {})).toThrow(UserError);
    expect(() => gridTiled(samples, { ...OPTIONS, bounds: { west: 900, south: 900, east: 950, north: 950 } })).toThrow(UserError);
  });
});
