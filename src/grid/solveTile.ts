import { binSamples, indexByCell } from './binSamples.js';
import { joinPins, nodePins, type Pins } from './pins.js';
import { reachMask } from './reachMask.js';
import { solvePlate } from './solvePlate.js';
import { trendAt, type Trend } from './trend.js';
import type { GridFrame } from './types.js';

/** What it takes to solve one tile: plain numbers and typed arrays, so that it can be sent to another thread. */
export interface TileTask {
  /** The tile with its overlap. */
  readonly frame: GridFrame;
  /** The cells that are kept, in the frame. */
  readonly own: { readonly left: number; readonly top: number; readonly width: number; readonly height: number };
  /** Readings in the frame. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly value: Float64Array;
  /** Of each reading, where several share a cell; empty: all alike. */
  readonly weight: Float64Array;
  readonly trend: Trend;
  /** Nodes, ascending, that take a value where no readings are: the rim, from the surface of the whole ground. Less the trend. */
  readonly rimNode: Int32Array;
  readonly rimValue: Float64Array;
  readonly tension: number;
  readonly spacingM: number;
  readonly reachM: number;
  /** Largest error that the solver may leave, in the data's unit. */
  readonly tolerance: number;
  readonly maxSteps: number;
}

export interface TileSolution {
  /** Of the cells that are kept, row-major; NaN beyond the reach. */
  readonly values: Float32Array;
  readonly filled: number;
  /** Filled cells that hold readings. */
  readonly pinned: number;
  readonly iterations: number;
  readonly remaining: number;
  readonly converged: boolean;
}

/** Solves a tile, here or on another thread; what is passed may be taken over. */
export type SolveTile = (task: TileTask) => TileSolution | Promise<TileSolution>;

/** Minimum curvature in tension on one tile of a larger grid; see `gridTiled`. */
export function solveTile(task: TileTask): TileSolution {
  const { frame, own, tension, spacingM, reachM } = task;
  const { width, height, cellM } = frame;
  const index = indexByCell(task, frame);
  const data = binSamples(index, task, width);
  takeTrend(data, task);
  const mask = reachMask(index, frame, reachM);
  const inside = keepOwn(mask, task);
  if (inside === 0) return { values: new Float32Array(own.width * own.height).fill(NaN), filled: 0, pinned: 0, iterations: 0, remaining: 0, converged: true };
  const { z, ...solved } = solvePlate(
    { width, height, alpha: 1 - tension, tau: tension * (cellM / spacingM) ** 2, pins: joinPins(data, nodePins(task.rimNode, task.rimValue)), watch: mask },
    task,
  );
  const pinned = data.node.reduce((count, node) => count + mask[node]!, 0);
  return { ...solved, values: ownValues(z, mask, task), filled: inside, pinned };
}

/** Takes the trend off the pins' values, in place. */
function takeTrend({ node, value, dx, dy }: Pins, { trend, frame: { width, west, north, cellM } }: TileTask): void {
  for (let n = 0; n < node.length; n++) {
    const j = Math.floor(node[n]! / width);
    value[n]! -= trendAt(trend, west + (node[n]! - j * width + 0.5 + dx[n]!) * cellM, north - (j + 0.5 + dy[n]!) * cellM);
  }
}

/** The surface with its trend at the cells that are kept, NaN where the mask is 0. */
function ownValues(z: Float64Array, mask: Uint8Array, { trend, own, frame: { width, west, north, cellM } }: TileTask): Float32Array {
  const values = new Float32Array(own.width * own.height).fill(NaN);
  for (let j = 0, to = 0; j < own.height; j++) {
    const y = north - (own.top + j + 0.5) * cellM;
    const from = (own.top + j) * width + own.left;
    for (let i = 0; i < own.width; i++, to++) {
      if (mask[from + i] !== 0) values[to] = z[from + i]! + trendAt(trend, west + (own.left + i + 0.5) * cellM, y);
    }
  }
  return values;
}

/** Takes the overlap out of the mask, in place; returns how many cells are left. */
function keepOwn(mask: Uint8Array, { frame, own }: TileTask): number {
  let left = 0;
  for (let j = 0, k = 0; j < frame.height; j++) {
    const row = j >= own.top && j < own.top + own.height;
    for (let i = 0; i < frame.width; i++, k++) {
      if (row && i >= own.left && i < own.left + own.width) left += mask[k]!;
      else mask[k] = 0;
    }
  }
  return left;
}
