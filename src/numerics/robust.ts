/** Scale that makes the median absolute deviation a standard deviation for Gaussian data: 1/Φ⁻¹(3/4). */
export const MAD_TO_SD = 1.4826022185056018;

/** Median; NaN is ignored; NaN where nothing is left. The input is not changed. */
export function median(values: ArrayLike<number>): number {
  return quantile(values, 0.5);
}

/** Median absolute deviation from the median, as a standard deviation. NaN ignored. Source: Hampel (1974), JASA 69. */
export function madSd(values: ArrayLike<number>): number {
  const clean = withoutNaN(values);
  if (clean.length === 0) return NaN;
  const middle = quantileInPlace(clean, 0.5);
  for (let i = 0; i < clean.length; i++) clean[i] = Math.abs(clean[i]! - middle);
  return MAD_TO_SD * quantileInPlace(clean, 0.5);
}

/**
 * Quantile `q` in [0, 1], linear between order statistics; NaN ignored; NaN where nothing is left.
 * Source: Hyndman & Fan (1996), The American Statistician 50(4), definition 7.
 */
export function quantile(values: ArrayLike<number>, q: number): number {
  if (!(q >= 0 && q <= 1)) throw new Error(`quantile: ${q} lies outside 0 … 1`);
  return quantileInPlace(withoutNaN(values), q);
}

function withoutNaN(values: ArrayLike<number>): Float64Array {
  const clean = new Float64Array(values.length);
  let count = 0;
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    if (value === value) clean[count++] = value;
  }
  return clean.subarray(0, count);
}

/** Reorders `a`. */
function quantileInPlace(a: Float64Array, q: number): number {
  const n = a.length;
  if (n === 0) return NaN;
  const position = (n - 1) * q;
  const k = Math.floor(position);
  selectInPlace(a, k);
  const low = a[k]!;
  if (position === k) return low;
  let high = Infinity;
  for (let i = k + 1; i < n; i++) if (a[i]! < high) high = a[i]!;
  return low + (position - k) * (high - low);
}

/** Puts the k-th smallest at k, smaller ones before it, larger ones after. Source: Hoare (1961), Algorithm 65: FIND. */
function selectInPlace(a: Float64Array, k: number): void {
  let left = 0;
  let right = a.length - 1;
  while (left < right) {
    const pivot = medianOfThree(a[left]!, a[(left + right) >>> 1]!, a[right]!);
    let i = left;
    let j = right;
    while (i <= j) {
      while (a[i]! < pivot) i++;
      while (a[j]! > pivot) j--;
      if (i > j) break;
      const swap = a[i]!;
      a[i] = a[j]!;
      a[j] = swap;
      i++;
      j--;
    }
    if (k <= j) right = j;
    else if (k >= i) left = i;
    else return;
  }
}

function medianOfThree(a: number, b: number, c: number): number {
  return Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
}
