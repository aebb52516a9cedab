import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import type { TileSolution, TileTask } from '../src/grid/solveTile.js';

/** Threads that solve tiles for `gridTiled`. Close them when the grid is done: they keep the process alive. */
export interface TileThreads {
  /** Starts all threads before there is a tile, for one who still reads the data. */
  start(): void;
  solve(task: TileTask): Promise<TileSolution>;
  close(): Promise<void>;
}

interface Waiting {
  readonly task: TileTask;
  readonly done: (solution: TileSolution) => void;
  readonly failed: (error: Error) => void;
}

/** At most `count` threads, each started when a tile finds none that is idle. */
export function tileThreads(count: number = availableParallelism()): TileThreads {
  const workers: Worker[] = [];
  const waiting: Waiting[] = [];
  const idle: Worker[] = [];
  const busy = new Map<Worker, Waiting>();
  /** Why no tile is solved any more. */
  let end: Error | null = null;
  const give = (worker: Worker, one: Waiting): void => {
    busy.set(worker, one);
    const { x, y, value, weight, rimNode, rimValue } = one.task;
    worker.postMessage(one.task, [x, y, value, weight, rimNode, rimValue].map(({ buffer }) => buffer as ArrayBuffer));
  };
  const start = (): Worker => {
    const worker = new Worker(new URL('./tileWorker.js', import.meta.url));
    worker.on('message', (solution: TileSolution) => {
      const { done } = busy.get(worker)!;
      busy.delete(worker);
      const next = waiting.shift();
      if (next) give(worker, next);
      else idle.push(worker);
      done(solution);
    });
    // A worker that fails is lost: what it had fails with it, and all that waits or is still to come.
    worker.on('error', (error: Error) => {
      end ??= error;
      busy.get(worker)?.failed(end);
      busy.delete(worker);
      for (const { failed } of waiting.splice(0)) failed(end);
    });
    workers.push(worker);
    return worker;
  };
  return {
    start() {
      while (workers.length < count) idle.push(start());
    },
    solve: (task) => new Promise((done, failed) => {
      if (end) return failed(end);
      const one = { task, done, failed };
      const worker = idle.pop() ?? (workers.length < count ? start() : null);
      if (worker) give(worker, one);
      else waiting.push(one);
    }),
    async close() {
      end ??= new Error('The threads are closed');
      await Promise.all(workers.map((worker) => worker.terminate()));
      for (const { failed } of [...busy.values(), ...waiting]) failed(end);
    },
  };
}
