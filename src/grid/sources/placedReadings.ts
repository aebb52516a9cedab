import { binSamples, indexByCell } from '../binSamples.js';
import { gridFrame } from '../gridFrame.js';
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
  /** How many readings each stands for. */
  readonly weight: Float64Array;
  readonly north: number;
  readonly cellM: number;
  /** Readings of lattice row j are start[j] … start[j + 1] − 1. */
  readonly start: Int32Array;
}

/** One value for each square of side `cellM` that holds readings: the mean of their middle half, at its own place and height. */
export function placeReadings(samples: HighSamples, bounds: Bounds, cellM: number): PlacedReadings {
  const frame = gridFrame(bounds, cellM);
  const index = indexByCell(samples, frame);
  const { node, dx, dy, value, weight } = binSamples(index, samples.value, frame.width);
  const count = node.length;
  const placed = { x: new Float64Array(count), y: new Float64Array(count), up: new Float64Array(count), start: new Int32Array(frame.height + 1) };
  for (let n = 0; n < count; n++) {
    const j = Math.floor(node[n]! / frame.width);
    placed.x[n] = frame.west + (node[n]! - j * frame.width + dx[n]! + 0.5) * cellM;
    placed.y[n] = frame.north - (j + dy[n]! + 0.5) * cellM;
    placed.start[j + 1]!++;
    if (!samples.up) continue;
    // The binning has sorted a cell's readings by value, so the middle ones are those that it took the mean of.
    const from = index.start[node[n]!]!;
    const to = index.start[node[n]! + 1]!;
    const cut = (to - from + 1) >> 2;
    for (let s = from + cut; s < to - cut; s++) placed.up[n]! += samples.up[index.order[s]!]! / weight[n]!;
  }
  for (let j = 0; j < frame.height; j++) placed.start[j + 1]! += placed.start[j]!;
  return { ...placed, value, weight, north: frame.north, cellM };
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
