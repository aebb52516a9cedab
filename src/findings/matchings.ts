/**
 * Which of several casings belongs to which record, as weights. Row i may stay alone (weight 1) or take one column j
 * (weight `w[i][k]` for its k-th column); no column is taken twice. Columns are numbered from 0.
 */
export interface MatchingProblem {
  readonly columns: readonly (readonly number[])[];
  readonly weights: readonly ArrayLike<number>[];
}

export interface MatchingSolution {
  /** Log of the sum of the weights of all assignments. */
  readonly logZ: number;
  /** Chance of each pair, in the shape of the weights. */
  readonly chances: readonly Float64Array[];
}

/** States that may be open at once; past this the exact way costs more than it is worth. */
export const MOST_STATES = 4096;
/** Columns that a bit mask holds. */
const MOST_OPEN = 30;

/**
 * Sums over all assignments exactly, row after row: what matters of the past is only which of the columns that later rows
 * may still want are taken. Null where more than `mostStates` such states are open at once.
 *
 * Source: dynamic programming over subsets (Bellman 1962; Held & Karp 1962), as a forward–backward pass.
 */
export function exactMatchings({ columns, weights }: MatchingProblem, mostStates = MOST_STATES): MatchingSolution | null {
  if (columns.length === 1) return alone(weights[0]!);
  const layout = openColumns(columns);
  if (!layout) return null;
  const { bits, closing } = layout;
  // Every row is scaled to a sum of 1, so that products of hundreds of rows stay within a double.
  const scales = weights.map((row) => 1 / (1 + total(row)));
  let logZ = 0;
  const forward: Array<Map<number, number>> = [new Map([[0, 1]])];
  for (let i = 0; i < columns.length; i++) {
    const next = new Map<number, number>();
    const keep = ~closing[i]!;
    let sum = 0;
    for (const [mask, weight] of forward[i]!) {
      const apart = weight * scales[i]!;
      add(next, mask & keep, apart);
      sum += apart;
      for (let k = 0; k < bits[i]!.length; k++) {
        const bit = bits[i]![k]!;
        if ((mask & bit) !== 0) continue;
        const value = apart * weights[i]![k]!;
        add(next, (mask | bit) & keep, value);
        sum += value;
      }
    }
    if (next.size > mostStates) return null;
    logZ += Math.log(sum) - Math.log(scales[i]!);
    for (const [mask, weight] of next) next.set(mask, weight / sum);
    forward.push(next);
  }
  return { logZ, chances: backward({ bits, closing, weights }, forward) };
}

/** One row by itself: each of its columns against none. */
function alone(row: ArrayLike<number>): MatchingSolution {
  const sum = 1 + total(row);
  return { logZ: Math.log(sum), chances: [Float64Array.from(row, (weight) => weight / sum)] };
}

interface Lattice {
  readonly bits: readonly (readonly number[])[];
  readonly closing: readonly number[];
  readonly weights: readonly ArrayLike<number>[];
}

function backward({ bits, closing, weights }: Lattice, forward: readonly Map<number, number>[]): Float64Array[] {
  const chances = weights.map((row) => new Float64Array(row.length));
  let after = new Map([...forward[bits.length]!.keys()].map((mask) => [mask, 1]));
  for (let i = bits.length - 1; i >= 0; i--) {
    const keep = ~closing[i]!;
    const here = new Map<number, number>();
    let sum = 0;
    for (const [mask, past] of forward[i]!) {
      let future = after.get(mask & keep)!;
      for (let k = 0; k < bits[i]!.length; k++) {
        if ((mask & bits[i]![k]!) !== 0) continue;
        const value = weights[i]![k]! * after.get((mask | bits[i]![k]!) & keep)!;
        future += value;
        chances[i]![k]! += past * value;
      }
      here.set(mask, future);
      sum += past * future;
    }
    for (let k = 0; k < bits[i]!.length; k++) chances[i]![k]! /= sum;
    for (const [mask, future] of here) here.set(mask, future / sum);
    after = here;
  }
  return chances;
}

/** A bit for each column while rows still want it, used again afterwards; null where more are open than a mask holds. */
function openColumns(columns: readonly (readonly number[])[]): Pick<Lattice, 'bits' | 'closing'> | null {
  const last = new Map<number, number>();
  columns.forEach((row, i) => row.forEach((column) => last.set(column, i)));
  const slot = new Map<number, number>();
  const free = Array.from({ length: MOST_OPEN }, (_, s) => 1 << s).toReversed();
  const closing: number[] = [];
  const bits: number[][] = [];
  for (let i = 0; i < columns.length; i++) {
    for (const column of columns[i]!) {
      if (slot.has(column)) continue;
      const bit = free.pop();
      if (bit === undefined) return null;
      slot.set(column, bit);
    }
    bits.push(columns[i]!.map((column) => slot.get(column)!));
    let closed = 0;
    for (const column of columns[i]!) {
      if (last.get(column) !== i) continue;
      closed |= slot.get(column)!;
      free.push(slot.get(column)!);
    }
    closing.push(closed);
  }
  return { bits, closing };
}

function add(map: Map<number, number>, key: number, value: number): void {
  map.set(key, (map.get(key) ?? 0) + value);
}

function total(row: ArrayLike<number>): number {
  let sum = 0;
  for (let k = 0; k < row.length; k++) sum += row[k]!;
  return sum;
}
