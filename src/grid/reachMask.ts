import type { CellIndex } from './binSamples.js';
import type { GridFrame } from './types.js';

/** Half a cell's diagonal: a reading lies no further than this from the centre of its cell. */
const HALF_DIAGONAL = Math.SQRT1_2;

/**
 * 1 for every cell whose centre lies within `reachM` of a reading, exactly: the distance to the nearest cell that holds
 * readings decides all but a thin rim, and there the readings themselves do.
 */
export function reachMask(index: CellIndex, frame: GridFrame, reachM: number): Uint8Array {
  const { width, height, cellM } = frame;
  const reach = reachM / cellM;
  const mask = new Uint8Array(width * height);
  const surely = Math.max(0, reach - HALF_DIAGONAL);
  const squared = distanceToOccupied(index, frame, surely);
  const atMost = reach + HALF_DIAGONAL;
  for (let j = 0, k = 0; j < height; j++) {
    for (let i = 0; i < width; i++, k++) {
      const d2 = squared[k]!;
      if (d2 > atMost * atMost) continue;
      mask[k] = d2 <= surely * surely && reach >= HALF_DIAGONAL || readingWithin(index, frame, [i, j, reach]) ? 1 : 0;
    }
  }
  return mask;
}

function readingWithin({ start, order, column, row }: CellIndex, { width, height }: GridFrame, [i, j, reach]: readonly [number, number, number]): boolean {
  const radius = Math.ceil(reach + 0.5);
  const left = Math.max(0, i - radius);
  const right = Math.min(width - 1, i + radius);
  for (let b = Math.max(0, j - radius); b <= Math.min(height - 1, j + radius); b++) {
    // Cells of a row lie one after the other, and so do their readings.
    const end = start[b * width + right + 1]!;
    for (let s = start[b * width + left]!; s < end; s++) {
      const dx = column[order[s]!]! - i;
      const dy = row[order[s]!]! - j;
      if (dx * dx + dy * dy <= reach * reach) return true;
    }
  }
  return false;
}

/**
 * Squared distance, in cells, from each cell to the nearest one that holds readings; Infinity where there is none. Where
 * all cells of a row are known to lie within `enough` cells, their distances may come out larger than they are, up to that.
 * Source: Felzenszwalb & Huttenlocher (2012), Distance transforms of sampled functions, Theory of Computing 8 (exact).
 */
export function distanceToOccupied({ start }: Pick<CellIndex, 'start'>, { width, height }: Pick<GridFrame, 'width' | 'height'>, enough = 0): Float64Array {
  // Up and down the columns, plain counting does; all columns at once, since cells of a row lie side by side.
  const squared = stepsDown(start, width, height);
  const steps = new Float64Array(width).fill(Infinity);
  const parabola = new Int32Array(width);
  const border = new Float64Array(width + 1);
  const line = new Float64Array(width);
  for (let j = height - 1; j >= 0; j--) {
    const row = squared.subarray(j * width, (j + 1) * width);
    if (squareNearer(row, steps) > enough) lowerEnvelope(row, { parabola, border, line });
  }
  return squared;
}

/** Steps to the nearest occupied cell above, itself included. */
function stepsDown(start: Int32Array, width: number, height: number): Float64Array {
  const steps = new Float64Array(width * height);
  for (let k = 0; k < steps.length; k++) {
    const above = k < width ? Infinity : steps[k - width]!;
    steps[k] = start[k + 1]! > start[k]! ? 0 : above + 1;
  }
  return steps;
}

/** Steps to the nearest cell above or below, squared, from those to the one above; returns the most of them. `below` moves on to this row. */
function squareNearer(row: Float64Array, below: Float64Array): number {
  let furthest = 0;
  for (let i = 0; i < row.length; i++) {
    const least = Math.min(below[i]! + 1, row[i]!);
    below[i] = least;
    row[i] = least * least;
    if (least > furthest) furthest = least;
  }
  return furthest;
}

/** Replaces f by min over q of (p − q)² + f(q). */
function lowerEnvelope(f: Float64Array, { parabola, border, line }: { parabola: Int32Array; border: Float64Array; line: Float64Array }): void {
  line.set(f);
  let last = -1;
  for (let q = 0; q < f.length; q++) {
    if (line[q] === Infinity) continue;
    let meet = -Infinity;
    while (last >= 0) {
      const p = parabola[last]!;
      meet = (line[q]! + q * q - line[p]! - p * p) / (2 * (q - p));
      if (meet > border[last]!) break;
      last--;
    }
    last++;
    parabola[last] = q;
    border[last] = last === 0 ? -Infinity : meet;
    border[last + 1] = Infinity;
  }
  if (last < 0) return;
  for (let p = 0, n = 0; p < f.length; p++) {
    while (border[n + 1]! < p) n++;
    const q = parabola[n]!;
    f[p] = (p - q) * (p - q) + line[q]!;
  }
}
