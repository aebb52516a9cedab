import { emptyPins, type Pins } from './pins.js';
import { runningSum } from './runningSum.js';
import type { GridFrame, Samples } from './types.js';

/** Samples sorted by the cell that they lie in. */
export interface CellIndex {
  /** Samples of cell k are order[start[k]] … order[start[k + 1] − 1]. */
  readonly start: Int32Array;
  readonly order: Int32Array;
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
 * One value for each cell that holds samples: the mean of the middle half of its values (from three samples on), at the
 * mean place of those same samples. So a quarter of wild values on either side does no harm, and a slope inside the cell
 * moves value and place alike.
 * Source: Tukey (1977), Exploratory Data Analysis (midmean).
 */
export function binSamples({ start, order, column, row }: CellIndex, value: ArrayLike<number>, width: number): Pins {
  let count = 0;
  for (let k = 0; k + 1 < start.length; k++) if (start[k + 1]! > start[k]!) count++;
  const pins = emptyPins(count);
  for (let k = 0, n = 0; k + 1 < start.length; k++) {
    const from = start[k]!;
    const to = start[k + 1]!;
    if (to === from) continue;
    // Three give their median, four and more lose a quarter at either end.
    const cut = (to - from + 1) >> 2;
    if (cut > 0) sortByValue(order, value, [from, to]);
    let sum = 0;
    let u = 0;
    let v = 0;
    for (let s = from + cut; s < to - cut; s++) {
      const sample = order[s]!;
      sum += value[sample]!;
      u += column[sample]!;
      v += row[sample]!;
    }
    const used = to - from - 2 * cut;
    const j = Math.floor(k / width);
    pins.node[n] = k;
    pins.value[n] = sum / used;
    pins.dx[n] = u / used - (k - j * width);
    pins.dy[n] = v / used - j;
    pins.weight[n] = used;
    n++;
  }
  return pins;
}

/** By insertion: a cell holds few samples as a rule. A cell that holds very many is sorted at large. */
function sortByValue(order: Int32Array, value: ArrayLike<number>, [from, to]: readonly [number, number]): void {
  if (to - from > INSERTION_LIMIT) {
    order.subarray(from, to).sort((a, b) => value[a]! - value[b]! || a - b);
    return;
  }
  for (let s = from + 1; s < to; s++) {
    const sample = order[s]!;
    let at = s;
    while (at > from && value[order[at - 1]!]! > value[sample]!) {
      order[at] = order[at - 1]!;
      at--;
    }
    order[at] = sample;
  }
}

/** Beyond this, insertion's square costs more than a call for each comparison. */
const INSERTION_LIMIT = 64;
