import { parentPort } from 'node:worker_threads';
import { solveTile, type TileTask } from '../src/grid/solveTile.js';

/** Solves tiles of a grid on a thread of its own; see tileThreads.ts. */
const port = parentPort;
if (!port) throw new Error('This file is the body of a worker thread');
port.on('message', (task: TileTask) => {
  const solution = solveTile(task);
  port.postMessage(solution, [solution.values.buffer as ArrayBuffer]);
});
