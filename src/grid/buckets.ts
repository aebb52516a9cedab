import { runningSum } from './runningSum.js';
import type { GridFrame, Samples } from './types.js';

/** Readings sorted by squares of ground, so that those of any rectangle are found without looking at all. */
export interface Buckets {
  readonly samples: Samples;
  /** Of each reading; empty: all alike. */
  readonly weight: Float64Array;
  /** The squares; row-major like the cells of a grid. */
  readonly frame: GridFrame;
  /** Readings of square b are order[start[b]] … order[start[b + 1] − 1]. */
  readonly start: Int32Array;
  readonly order: Int32Array;
}

/** Sorts in two passes, in the order of readings within a square; readings without place or value, or outside, are left out. */
export function bucketSamples(samples: Samples, weight: Float64Array, frame: GridFrame): Buckets {
  const { x, y } = samples;
  const start = new Int32Array(frame.width * frame.height + 1);
  for (let n = 0; n < x.length; n++) {
    const b = squareOf(samples, frame, n);
    if (b >= 0) start[b + 1]!++;
  }
  runningSum(start);
  const order = new Int32Array(start[start.length - 1]!);
  const next = start.slice(0, -1);
  for (let n = 0; n < y.length; n++) {
    const b = squareOf(samples, frame, n);
    if (b >= 0) order[next[b]!++] = n;
  }
  return { samples, weight, frame, start, order };
}

function squareOf({ x, y, value }: Samples, { width, height, west, north, cellM }: GridFrame, n: number): number {
  const i = Math.floor((x[n]! - west) / cellM);
  const j = Math.floor((north - y[n]!) / cellM);
  const v = value[n]!;
  return i >= 0 && i < width && j >= 0 && j < height && v - v === 0 ? j * width + i : -1;
}

export interface Taken {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly value: Float64Array;
  /** Empty: all alike. */
  readonly weight: Float64Array;
}

/** Copies of the readings in a rectangle, its edges included. */
export function samplesWithin({ samples, weight: weights, frame, start, order }: Buckets, { width, height, west, north, cellM }: GridFrame): Taken {
  const east = west + width * cellM;
  const south = north - height * cellM;
  const clamp = (at: number, last: number): number => Math.min(last, Math.max(0, Math.floor(at)));
  const left = clamp((west - frame.west) / frame.cellM, frame.width - 1);
  const right = clamp((east - frame.west) / frame.cellM, frame.width - 1);
  const top = clamp((frame.north - north) / frame.cellM, frame.height - 1);
  const bottom = clamp((frame.north - south) / frame.cellM, frame.height - 1);
  let most = 0;
  for (let j = top; j <= bottom; j++) most += start[j * frame.width + right + 1]! - start[j * frame.width + left]!;
  const x = new Float64Array(most);
  const y = new Float64Array(most);
  const value = new Float64Array(most);
  const weight = new Float64Array(weights.length > 0 ? most : 0);
  let to = 0;
  for (let j = top; j <= bottom; j++) {
    for (let s = start[j * frame.width + left]!; s < start[j * frame.width + right + 1]!; s++) {
      const n = order[s]!;
      const atX = samples.x[n]!;
      const atY = samples.y[n]!;
      if (atX < west || atX > east || atY < south || atY > north) continue;
      x[to] = atX;
      y[to] = atY;
      if (weights.length > 0) weight[to] = weights[n]!;
      value[to++] = samples.value[n]!;
    }
  }
  return { x: x.subarray(0, to), y: y.subarray(0, to), value: value.subarray(0, to), weight: weight.subarray(0, to) };
}
