import { rmSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { tileThreads as TileThreadsOf, TileThreads } from '../../cli/tileThreads.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import type { TiledOptions } from '../../src/grid/gridTiled.js';
import { solveTile, type TileTask } from '../../src/grid/solveTile.js';
import type { Samples } from '../../src/grid/types.js';
import { Random } from '../../src/numerics/random.js';
import { builtProject } from '../support/built.js';

const SIDE = 300;
const OPTIONS = { cellM: 1, spacingM: 5, bounds: { west: 0, south: 0, east: SIDE, north: SIDE }, tileCells: 100, overlapSpacings: 4, gapOverlapSpacings: 4 } satisfies TiledOptions;

/** Lines 5 m apart with a gap, two readings to a cell, waves and noise of 1 nT and, at every second reading, of 4 nT. */
function samples(): Samples {
  const random = new Random(4);
  const places = Array.from({ length: (2 * SIDE * SIDE) / 5 }, (_, n) => [(n % (2 * SIDE)) / 2 + 0.25, 5 * Math.floor(n / (2 * SIDE)) + 2.5, 1 + 3 * (n % 2)] as const)
    .filter(([x, y]) => Math.hypot(x - 100, y - 180) > 20);
  return { x: places.map(([x]) => x), y: places.map(([, y]) => y), value: places.map(([x, y, sd]) => 50 * Math.sin(x / 20) * Math.cos(y / 30) + sd * random.normal()), sd: places.map(([, , sd]) => sd) };
}

describe('tileThreads', () => {
  let built: string;
  let tileThreads: typeof TileThreadsOf;
  let tasks: TileTask[];
  beforeAll(async () => {
    built = builtProject();
    ({ tileThreads } = await import(pathToFileURL(join(built, 'cli/tileThreads.js')).href) as { tileThreads: typeof TileThreadsOf });
    tasks = [];
    await gridReadings(samples(), { ...OPTIONS, solve: (task) => (tasks.push(structuredClone(task)), solveTile(task)) });
  });
  afterAll(() => rmSync(built, { recursive: true }));

  const broken = (): TileTask => ({ ...structuredClone(tasks[0]!), frame: { ...tasks[0]!.frame, width: -1 } });
  const solveAll = (threads: TileThreads, list: readonly TileTask[]): Promise<Array<PromiseSettledResult<unknown>>> =>
    Promise.allSettled(list.map((task) => threads.solve(structuredClone(task))));
  const reasons = (settled: ReadonlyArray<PromiseSettledResult<unknown>>): Array<string | null> =>
    settled.map((each) => (each.status === 'rejected' ? (each.reason as Error).message : null));

  it.each([1, 2, 3])('solves on %i threads what the main thread solves, to the bit', async (count) => {
    // The wide surface that the tiles' rims rest on, and the tiles.
    expect(tasks).toHaveLength(1 + 9);
    const threads = tileThreads(count);
    try {
      expect(await gridReadings(samples(), { ...OPTIONS, solve: threads.solve })).toEqual(await gridReadings(samples(), OPTIONS));
    } finally {
      await threads.close();
    }
  });

  it('fails the tile that throws and all that wait or come later, with its error, and can be closed', async () => {
    const threads = tileThreads(1);
    const before = await threads.solve(structuredClone(tasks[1]!));
    expect(before.values).toEqual(solveTile(tasks[1]!).values);
    const failed = reasons(await solveAll(threads, [broken(), tasks[1]!, tasks[2]!]));
    expect(failed[0]).toMatch(/length/i);
    expect(failed).toEqual([failed[0], failed[0], failed[0]]);
    expect(reasons(await solveAll(threads, [tasks[1]!]))).toEqual([failed[0]]);
    await threads.close();
  });

  it('is closed where nothing was started, and while tiles are under way', async () => {
    await tileThreads().close();
    const threads = tileThreads(2);
    const solving = solveAll(threads, tasks);
    await threads.close();
    expect(reasons(await solving)).toEqual(tasks.map(() => 'The threads are closed'));
    await expect(threads.solve(structuredClone(tasks[0]!))).rejects.toThrow('The threads are closed');
  });
});
