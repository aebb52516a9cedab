/**
 * Difference between the largest and the smallest value after a running median of three: a single wild value among its
 * neighbours does not count. Values that are not finite are left out; with fewer than three the plain range.
 * Source: Tukey (1977), Exploratory Data Analysis (smoothing by medians of three).
 */
export function robustRange(values: ArrayLike<number>): number {
  let low = Infinity;
  let high = -Infinity;
  let plainLow = Infinity;
  let plainHigh = -Infinity;
  let first = NaN;
  let second = NaN;
  let count = 0;
  for (let n = 0; n < values.length; n++) {
    const value = values[n]!;
    if (value - value !== 0) continue;
    if (value < plainLow) plainLow = value;
    if (value > plainHigh) plainHigh = value;
    count++;
    if (count >= 3) {
      const middle = first > second ? (second > value ? second : first < value ? first : value) : (first > value ? first : second < value ? second : value);
      if (middle < low) low = middle;
      if (middle > high) high = middle;
    }
    first = second;
    second = value;
  }
  if (count === 0) return 0;
  return count < 3 ? plainHigh - plainLow : high - low;
}
