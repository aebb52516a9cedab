import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import type { TileSolution, TileTask } from '../src/grid/solveTile.js';

/** Threads that solve tiles for `gridTiled`. Close them when the grid is done: they keep the process alive. */
export interface TileThreads {
  solve(task: TileTask): Promise<TileSolution>;
  close(): Promise<void>;
}

interface Waiting {
  readonly task: TileTask;
  readonly done: (solution: TileSolution) => void;
  readonly failed: (error: Error) => void;
}

export function tileThreads(count: number = availableParallelism()): TileThreads {
  const waiting: Waiting[] = [];
  const idle: Worker[] = [];
  const busy = new Map<Worker, Waiting>();
  const next = (worker: Worker): void => {
    busy.delete(worker);
    const one = waiting.shift();
    if (one) give(worker, one);
    else idle.push(worker);
  };
  const give = (worker: Worker, one: Waiting): void => {
    busy.set(worker, one);
    const { x, y, value, rimNode, rimValue } = one.task;
    worker.postMessage(one.task, [x, y, value, rimNode, rimValue].map(({ buffer }) => buffer as ArrayBuffer));
  };
  const workers = Array.from({ length: count }, () => {
    const worker = new Worker(new URL('./tileWorker.js', import.meta.url));
    worker.on('message', (solution: TileSolution) => {
      const { done } = busy.get(worker)!;
      next(worker);
      done(solution);
    });
    // A worker that fails is lost: what it had, and all that waits, fails with it.
    worker.on('error', (error: Error) => {
      const lost = busy.get(worker);
      busy.delete(worker);
      for (const { failed } of [...(lost ? [lost] : []), ...waiting.splice(0)]) failed(error);
    });
    idle.push(worker);
    return worker;
  });
  return {
    solve: (task) => new Promise((done, failed) => {
      const worker = idle.pop();
      if (worker) give(worker, { task, done, failed });
      else waiting.push({ task, done, failed });
    }),
    async close() {
      await Promise.all(workers.map((worker) => worker.terminate()));
    },
  };
}
