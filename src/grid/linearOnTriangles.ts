import Delaunator from 'delaunator';
import type { Grid } from '../raster/types.js';
import { samplesBounds } from './gridFrame.js';
import { meansOf, middles, type Groups } from './middles.js';
import { sampleWeights } from './sampleErrors.js';
import type { GridFrame, Samples } from './types.js';

/** Delaunay triangles between places, in frame metres. */
export interface Triangles {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly value: Float64Array;
  /** Three places each, anticlockwise. */
  readonly corners: Uint32Array;
}

/** A cell centre may miss its triangle by this share of the triangle and still lie on its edge: rounding. */
const EDGE_SLACK = 1e-9;
/** Readings in one square of this share of a cell are one place: triangles between them would show nothing but their noise. */
const PLACE_PER_CELL = 1 / 16;
/** The lattice of squares lies askew of round numbers, so that its borders do not run through places that are one but for rounding. */
const ASKEW = 0.382;
/** More squares than are laid across all readings, so that row and column of one make a whole number below 2⁵³. */
const MOST_SQUARES = 2 ** 26;

/**
 * Linear interpolation on the Delaunay triangles of the readings: the plain reference, without any tuning. Cells outside
 * the convex hull of the readings are NaN; readings on one line give no triangle and so an empty grid.
 */
export function linearOnTriangles(samples: Samples, frame: GridFrame): Grid {
  return { ...frame, values: onTriangles(triangulate(samples, frame.cellM), frame) };
}

/**
 * Triangles of all readings, whatever the grid. Readings in one place, or within the same sixteenth of a cell, are one:
 * the mean of their middle half, by weight, at their mean place.
 * Source: Delaunay (1934), Sur la sphère vide.
 */
export function triangulate(samples: Samples, cellM: number): Triangles {
  const middle = middles(groupByPlace(samples, cellM * PLACE_PER_CELL), samples.value, sampleWeights(samples));
  const [x, y] = [meansOf(samples.x, middle), meansOf(samples.y, middle)];
  const points = new Float64Array(2 * x.length);
  for (let n = 0; n < x.length; n++) {
    // From the first place, so that metres of the frame do not use up the digits.
    points[2 * n] = x[n]! - x[0]!;
    points[2 * n + 1] = y[n]! - y[0]!;
  }
  return { x, y, value: meansOf(samples.value, middle), corners: new Delaunator(points).triangles };
}

/** Readings with place and value by squares of a lattice that is nowhere laid, since most of it would be empty. */
function groupByPlace(samples: Samples, wantedM: number): Groups {
  const { x, y, value } = samples;
  const { west, south, east, north } = samplesBounds(samples);
  const squareM = Math.max(wantedM, (2 * Math.max(east - west, north - south)) / MOST_SQUARES);
  const square = new Float64Array(x.length);
  const counted = new Int32Array(x.length);
  let count = 0;
  for (let n = 0; n < x.length; n++) {
    if (!Number.isFinite(x[n]! + y[n]! + value[n]!)) continue;
    square[n] = Math.floor((y[n]! - south) / squareM + ASKEW) * MOST_SQUARES + Math.floor((x[n]! - west) / squareM + ASKEW);
    counted[count++] = n;
  }
  const order = counted.slice(0, count);
  order.sort((a, b) => square[a]! - square[b]! || a - b);
  const start: number[] = [];
  for (let s = 0; s < count; s++) if (s === 0 || square[order[s]!] !== square[order[s - 1]!]) start.push(s);
  return { start: Int32Array.from([...start, count]), order };
}

/** Values at the centres of the cells that lie in a triangle, NaN at others. */
export function onTriangles({ x, y, value, corners }: Triangles, { width, height, west, north, cellM }: GridFrame): Float64Array {
  const target = { width, height, values: new Float64Array(width * height).fill(NaN) };
  const triangle = { u: new Float64Array(3), v: new Float64Array(3), value: new Float64Array(3) };
  for (let t = 0; t < corners.length; t += 3) {
    for (let e = 0; e < 3; e++) {
      const place = corners[t + e]!;
      // Columns and rows, so that the centre of cell (i, j) lies at (i, j).
      triangle.u[e] = (x[place]! - west) / cellM - 0.5;
      triangle.v[e] = (north - y[place]!) / cellM - 0.5;
      triangle.value[e] = value[place]!;
    }
    fillTriangle(triangle, target);
  }
  return target.values;
}

interface Triangle {
  readonly u: Float64Array;
  readonly v: Float64Array;
  readonly value: Float64Array;
}

interface Target {
  readonly width: number;
  readonly height: number;
  readonly values: Float64Array;
}

function fillTriangle(triangle: Triangle, target: Target): void {
  const { v } = triangle;
  const highest = Math.min(v[0]!, v[1]!, v[2]!);
  const lowest = Math.max(v[0]!, v[1]!, v[2]!);
  for (let j = Math.max(0, Math.ceil(highest - EDGE_SLACK)); j <= Math.min(target.height - 1, Math.floor(lowest + EDGE_SLACK)); j++) {
    const at = Math.min(lowest, Math.max(highest, j));
    let from = Infinity;
    let until = -Infinity;
    for (let e = 0; e < 3; e++) {
      const column = crossing(triangle, e, at);
      if (column < from) from = column;
      if (column > until) until = column;
    }
    // A cell more on either side for rounding: long thin triangles beside a gap hold few of the cells of their box.
    fillRow(triangle, { j, from: Math.max(0, Math.ceil(from) - 1), until: Math.min(target.width - 1, Math.floor(until) + 1) }, target);
  }
}

/** Column at which an edge meets a row; NaN where it does not, or lies in it, since then its ends are those of the other two. */
function crossing({ u, v }: Triangle, e: number, row: number): number {
  const f = e === 2 ? 0 : e + 1;
  const share = (row - v[e]!) / (v[f]! - v[e]!);
  return share >= 0 && share <= 1 ? u[e]! + share * (u[f]! - u[e]!) : NaN;
}

function fillRow({ u, v, value }: Triangle, { j, from, until }: { j: number; from: number; until: number }, { width, values }: Target): void {
  const [ax, ay, bx, by, cx, cy] = [u[0]!, v[0]!, u[1]!, v[1]!, u[2]!, v[2]!];
  const twice = (bx - ax) * (cy - ay) - (cx - ax) * (by - ay);
  if (twice === 0) return;
  for (let i = from; i <= until; i++) {
    const toB = ((i - ax) * (cy - ay) - (cx - ax) * (j - ay)) / twice;
    const toC = ((bx - ax) * (j - ay) - (i - ax) * (by - ay)) / twice;
    if (toB < -EDGE_SLACK || toC < -EDGE_SLACK || toB + toC > 1 + EDGE_SLACK) continue;
    values[j * width + i] = (1 - toB - toC) * value[0]! + toB * value[1]! + toC * value[2]!;
  }
}
