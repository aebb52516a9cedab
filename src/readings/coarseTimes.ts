/** Where more than this share of readings have the time of the one before, the clock was written too coarsely. */
const COARSE_SHARE = 0.3;

/**
 * Times written in whole seconds for readings that come faster: readings of one time are spread evenly up to the next
 * time (the last group as widely as the one before). Null where the clock is fine enough as it is.
 */
export function spreadCoarseTimes(timeS: Float64Array): Float64Array | null {
  let repeats = 0;
  for (let i = 1; i < timeS.length; i++) if (same(timeS, i, i - 1)) repeats += 1;
  if (repeats <= COARSE_SHARE * timeS.length) return null;
  const out = timeS.slice();
  let widthS = 0;
  for (let start = 0; start < timeS.length;) {
    let end = start + 1;
    while (end < timeS.length && same(timeS, end, start)) end++;
    const toNext = end < timeS.length ? timeS[end]! - timeS[start]! : Infinity;
    // After a pause the next time tells nothing of how fast readings came.
    widthS = widthS > 0 ? Math.min(widthS, toNext) : toNext;
    if (Number.isFinite(widthS)) for (let i = start; i < end; i++) out[i] = timeS[start]! + (i - start) * widthS / (end - start);
    start = end;
  }
  return out;
}

function same(values: Float64Array, a: number, b: number): boolean {
  return values[a] === values[b];
}
