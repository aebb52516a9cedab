/** Turns counts into the places where each one's share starts: counts[k + 1] becomes the sum of all up to it. */
export function runningSum(counts: Int32Array): Int32Array {
  for (let k = 1; k < counts.length; k++) counts[k]! += counts[k - 1]!;
  return counts;
}
