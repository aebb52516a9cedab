import { indexByCell } from '../binSamples.js';
import { gridFrame } from '../gridFrame.js';
import { meansOf, middles } from '../middles.js';
import { runningSum } from '../runningSum.js';
import { sampleWeights } from '../sampleErrors.js';
import type { Bounds, Samples } from '../types.js';

/** Readings with the height of the sensor above a common level, metres; level readings where it is absent. */
export interface HighSamples extends Samples {
  readonly up?: ArrayLike<number>;
}

/** Means of neighbouring readings, sorted by rows of a lattice so that a window finds its own. Metres of the frame. */
export interface PlacedReadings {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly up: Float64Array;
  readonly value: Float64Array;
  /** How many readings of the smallest error each is worth: its error's variance is that of one over this. */
  readonly weight: Float64Array;
  /** How many readings each stands for. */
  readonly count: Float64Array;
  readonly north: number;
  readonly cellM: number;
  /** Readings of lattice row j are start[j] … start[j + 1] − 1. */
  readonly start: Int32Array;
}

/** One value for each square of side `cellM` that holds readings: the mean of their middle half, at its own place and height. */
export function placeReadings(samples: HighSamples, bounds: Bounds, cellM: number): PlacedReadings {
  const frame = gridFrame(bounds, cellM);
  const { start: startOfCell, order, column, row } = indexByCell(samples, frame);
  const middle = middles({ start: startOfCell, order }, samples.value, sampleWeights(samples));
  const { group, from, until } = middle;
  const start = new Int32Array(frame.height + 1);
  for (const cell of group) start[Math.floor(cell / frame.width) + 1]!++;
  return {
    x: meansOf(column, middle).map((u) => frame.west + (u + 0.5) * cellM),
    y: meansOf(row, middle).map((v) => frame.north - (v + 0.5) * cellM),
    up: samples.up ? meansOf(samples.up, middle) : new Float64Array(group.length),
    value: meansOf(samples.value, middle), weight: middle.total, count: Float64Array.from(from, (first, n) => until[n]! - first),
    north: frame.north, cellM, start: runningSum(start),
  };
}

/** Indices of the readings inside `bounds`; the `most` nearest to its middle where there are more. */
export function readingsWithin({ x, y, north, cellM, start }: PlacedReadings, { west, south, east, north: top }: Bounds, most: number): Int32Array {
  const rows = start.length - 1;
  // A mean lies in its own square, so whole rows may be passed over.
  const first = Math.min(rows, Math.max(0, Math.floor((north - top) / cellM)));
  const last = Math.min(rows, Math.max(0, Math.ceil((north - south) / cellM)));
  const found: number[] = [];
  for (let n = start[first]!; n < start[last]!; n++) {
    if (x[n]! >= west && x[n]! <= east && y[n]! >= south && y[n]! <= top) found.push(n);
  }
  const within = Int32Array.from(found);
  if (within.length <= most) return within;
  const distance = (n: number): number => Math.hypot(x[n]! - (west + east) / 2, y[n]! - (south + top) / 2);
  within.sort((a, b) => distance(a) - distance(b) || a - b);
  const nearest = within.slice(0, most);
  nearest.sort();
  return nearest;
}
