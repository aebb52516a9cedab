/** Samples in groups: those of group g are order[start[g]] … order[start[g + 1] − 1]. */
export interface Groups {
  readonly start: Int32Array;
  readonly order: Int32Array;
}

/** Of each group that holds samples, those that its mean is taken of: order[from[n]] … order[until[n] − 1]. */
export interface Middles {
  readonly order: Int32Array;
  readonly group: Int32Array;
  readonly from: Int32Array;
  readonly until: Int32Array;
  /** Weight of each sample; empty: all alike. */
  readonly weight: ArrayLike<number>;
  /** Sum of the weights, or number of the samples, that the mean is taken of. */
  readonly total: Float64Array;
}

/** A sum of weights that is at its limit but for rounding counts as within. */
const SLACK = 1e-9;

/**
 * The middle half of each group by value, from three samples on: a quarter at either end is left out, as far as it
 * carries no more than a quarter of the weight. So a quarter of wild values on either side does no harm, and an accurate
 * sample is not lost between poor ones. A group's samples are left sorted by value.
 * Source: Tukey (1977), Exploratory Data Analysis (midmean).
 */
export function middles({ start, order }: Groups, value: ArrayLike<number>, weight: ArrayLike<number>): Middles {
  const count = countOccupied(start);
  const middle = { order, group: new Int32Array(count), from: new Int32Array(count), until: new Int32Array(count), weight, total: new Float64Array(count) };
  for (let k = 0, n = 0; k + 1 < start.length; k++) {
    if (start[k + 1] === start[k]) continue;
    // Three give their median, four and more lose a quarter at either end.
    const cut = (start[k + 1]! - start[k]! + 1) >> 2;
    if (cut > 0) sortByValue(order, value, [start[k]!, start[k + 1]!]);
    middle.group[n] = k;
    middle.from[n] = start[k]! + cut;
    middle.until[n] = start[k + 1]! - cut;
    middle.total[n] = middle.until[n]! - middle.from[n]!;
    n++;
  }
  if (weight.length > 0) for (let n = 0; n < count; n++) keepHeavy(middle, n, [start[middle.group[n]!]!, start[middle.group[n]! + 1]!]);
  return middle;
}

/** Mean of a column over each middle. */
export function meansOf(column: ArrayLike<number>, middle: Middles): Float64Array {
  const means = new Float64Array(middle.group.length);
  const sum = middle.weight.length > 0 ? weightedSum : plainSum;
  for (let n = 0; n < means.length; n++) means[n] = sum(column, middle, n) / middle.total[n]!;
  return means;
}

function plainSum(column: ArrayLike<number>, { order, from, until }: Middles, n: number): number {
  let sum = 0;
  for (let s = from[n]!; s < until[n]!; s++) sum += column[order[s]!]!;
  return sum;
}

function weightedSum(column: ArrayLike<number>, { order, from, until, weight }: Middles, n: number): number {
  let sum = 0;
  for (let s = from[n]!; s < until[n]!; s++) sum += weight[order[s]!]! * column[order[s]!]!;
  return sum;
}

/** Takes back into a middle what is left out and weighs too much, and sums its weights. */
function keepHeavy({ order, from, until, weight, total }: Middles, n: number, [first, last]: readonly [number, number]): void {
  const whole = sumOfWeights(order, weight, [first, last]);
  const limit = ((whole + whole / (last - first)) / 4) * (1 + SLACK);
  let below = 0;
  for (let s = first; s < from[n]!; s++) {
    below += weight[order[s]!]!;
    if (below > limit) from[n] = s;
  }
  let above = 0;
  for (let s = last - 1; s >= until[n]!; s--) {
    above += weight[order[s]!]!;
    if (above > limit) until[n] = s + 1;
  }
  total[n] = sumOfWeights(order, weight, [from[n]!, until[n]!]);
}

function sumOfWeights(order: Int32Array, weight: ArrayLike<number>, [first, last]: readonly [number, number]): number {
  let sum = 0;
  for (let s = first; s < last; s++) sum += weight[order[s]!]!;
  return sum;
}

function countOccupied(start: Int32Array): number {
  let count = 0;
  for (let k = 0; k + 1 < start.length; k++) if (start[k + 1]! > start[k]!) count++;
  return count;
}

/** By insertion: a group holds few samples as a rule. One that holds very many is sorted at large. */
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
