import type { GridFrame, Samples } from './types.js';

/** Means of values and places for each cell that holds readings, in the order of cells; all columns of one length. */
export interface CellMeans {
  /** Row-major index of the cell. */
  readonly cell: Int32Array;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly value: Float64Array;
}

/** Weighted means in one pass, all alike where `weight` is empty; readings without place or value, or outside the frame, are left out. */
export function cellMeans({ x, y, value }: Samples, weight: ArrayLike<number>, { width, height, west, north, cellM }: GridFrame): CellMeans {
  const size = width * height;
  const total = new Float64Array(size);
  const sumX = new Float64Array(size);
  const sumY = new Float64Array(size);
  const sum = new Float64Array(size);
  for (let n = 0; n < x.length; n++) {
    const i = Math.floor((x[n]! - west) / cellM);
    const j = Math.floor((north - y[n]!) / cellM);
    const v = value[n]!;
    if (!(i >= 0 && i < width && j >= 0 && j < height && v - v === 0)) continue;
    const k = j * width + i;
    const w = weight.length > 0 ? weight[n]! : 1;
    total[k]! += w;
    // Places from the corner, so that sums keep their digits.
    sumX[k]! += w * (x[n]! - west);
    sumY[k]! += w * (north - y[n]!);
    sum[k]! += w * v;
  }
  const cells: number[] = [];
  for (let k = 0; k < size; k++) if (total[k]! > 0) cells.push(k);
  const cell = Int32Array.from(cells);
  const mean = (of: (k: number) => number): Float64Array => Float64Array.from(cell, of);
  return {
    cell,
    x: mean((k) => west + sumX[k]! / total[k]!),
    y: mean((k) => north - sumY[k]! / total[k]!),
    value: mean((k) => sum[k]! / total[k]!),
  };
}
