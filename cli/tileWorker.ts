import { parentPort } from 'node:worker_threads';
import { solveTile, type TileTask } from '../src/grid/solveTile.js';

/** Solves tiles of a grid on a thread of its own; see tileThreads.ts. */
const port = parentPort;
if (!port) throw new Error('This file is the body of a worker thread');

/** Side of the made tile, in cells, its lines apart, and how often it is solved. */
const SIDE = 60;
const APART = 4;
const TIMES = 5;

// A thread begins with code that is not compiled and takes twice as long for its first tile. So it solves a small one
// first, which costs little, and no time at all while the readings are still being read.
for (let n = 0; n < TIMES; n++) solveTile(madeTile());
port.on('message', (task: TileTask) => {
  const solution = solveTile(task);
  port.postMessage(solution, [solution.values.buffer as ArrayBuffer]);
});

/** Waves along lines that are not quite straight, with a rim on two sides. */
function madeTile(): TileTask {
  const count = (SIDE / APART) * SIDE;
  const x = Float64Array.from({ length: count }, (_, n) => (n % SIDE) + 0.3);
  const y = Float64Array.from({ length: count }, (_, n) => APART * (Math.floor(n / SIDE) + 0.5) + 0.8 * Math.sin(n));
  const rimNode = Int32Array.from({ length: 2 * SIDE }, (_, n) => n);
  return {
    frame: { width: SIDE, height: SIDE, west: 0, north: SIDE, cellM: 1 }, own: { left: 5, top: 5, width: SIDE - 10, height: SIDE - 10 },
    x, y, value: x.map((at, n) => 100 * Math.sin(at / 5) * Math.cos(y[n]! / 7)), weight: new Float64Array(0),
    trend: { x: 0, y: 0, level: 0.5, perEastM: 0.01, perNorthM: 0.01, onLine: false }, rimNode, rimValue: new Float64Array(rimNode.length),
    tension: 0.25, spacingM: APART, reachM: 0.75 * APART, tolerance: 1e-3, maxSteps: 20,
  };
}
