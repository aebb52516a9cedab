import { meansOf, middles, type Groups } from './middles.js';
import { pinsOf, type Pins } from './pins.js';
import { runningSum } from './runningSum.js';
import type { GridFrame, Samples } from './types.js';

/** Samples sorted by the cell that they lie in: a group for each cell, row-major. */
export interface CellIndex extends Groups {
  /** Place in cells: (0, 0) is the centre of the north-western cell; columns east, rows south. */
  readonly column: Float64Array;
  readonly row: Float64Array;
}

/** Sorts by cell in two passes; samples without place or value, or outside the frame, are left out. */
export function indexByCell({ x, y, value }: Samples, { width, height, west, north, cellM }: GridFrame): CellIndex {
  const cell = new Int32Array(x.length);
  const column = new Float64Array(x.length);
  const row = new Float64Array(x.length);
  const start = new Int32Array(width * height + 1);
  for (let n = 0; n < x.length; n++) {
    const u = (x[n]! - west) / cellM - 0.5;
    const v = (north - y[n]!) / cellM - 0.5;
    column[n] = u;
    row[n] = v;
    const i = Math.round(u);
    const j = Math.round(v);
    const inside = i >= 0 && i < width && j >= 0 && j < height && Number.isFinite(value[n]!);
    cell[n] = inside ? j * width + i : -1;
    if (inside) start[j * width + i + 1]!++;
  }
  return { start: runningSum(start), order: orderByCell(cell, start), column, row };
}

function orderByCell(cell: Int32Array, start: Int32Array): Int32Array {
  const order = new Int32Array(start.at(-1)!);
  const next = start.slice(0, -1);
  for (let n = 0; n < cell.length; n++) if (cell[n]! >= 0) order[next[cell[n]!]!++] = n;
  return order;
}

/**
 * One value for each cell that holds samples: the mean of the middle half of its values, at the mean place of those same
 * samples, so that a slope inside the cell moves value and place alike. `weight` is that of each sample; empty: all alike.
 * The weight of a pin is the sum of those that it stands for.
 */
export function binSamples({ start, order, column, row }: CellIndex, { value, weight }: { readonly value: ArrayLike<number>; readonly weight: ArrayLike<number> }, width: number): Pins {
  const middle = middles({ start, order }, value, weight);
  const pins = pinsOf(middle.group, meansOf(value, middle), [meansOf(column, middle), meansOf(row, middle)], middle.total);
  fromNodes(pins, width);
  return pins;
}

/** Places in cells to offsets from the pins' nodes. */
function fromNodes({ node, dx, dy }: Pins, width: number): void {
  for (let n = 0; n < node.length; n++) {
    const j = Math.floor(node[n]! / width);
    dx[n]! -= node[n]! - j * width;
    dy[n]! -= j;
  }
}
