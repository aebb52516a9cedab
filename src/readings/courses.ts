import type { Run } from './runs.js';

/** A course is taken over this distance to either side: far above the jitter of positions, short against a line. */
const REACH_M = 2;

/**
 * Course at each reading, degrees clockwise from grid north, from the place some metres before to the place some metres
 * after within its run. NaN where the walker stood, or where there is no position.
 */
export function courses({ x, y }: { readonly x: Float64Array; readonly y: Float64Array }, runs: readonly Run[]): Float64Array {
  const out = new Float64Array(x.length).fill(NaN);
  for (const run of runs) {
    let a = run.start;
    let b = run.start;
    for (let i = run.start; i < run.end; i++) {
      const from = (k: number): number => Math.hypot(x[k]! - x[i]!, y[k]! - y[i]!);
      while (a < i && !(from(a + 1) < REACH_M)) a++;
      b = Math.max(b, i);
      while (b < run.end - 1 && !(from(b) >= REACH_M)) b++;
      const dx = x[b]! - x[a]!;
      const dy = y[b]! - y[a]!;
      if (Math.hypot(dx, dy) >= REACH_M / 2) out[i] = Math.atan2(dx, dy) * 180 / Math.PI;
    }
  }
  return out;
}
