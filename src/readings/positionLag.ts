import type { Run } from './runs.js';

/**
 * Moves positions on by the time that they are behind: a recorded position tells where the receiver was `lagS` ago, so
 * the reading beside it belongs where the record is `lagS` later. Linear within a run; beyond its ends the last step
 * goes on. Readings without a time or a position stay as they are.
 */
export function advancePositions(
  { x, y, timeS }: { readonly x: Float64Array; readonly y: Float64Array; readonly timeS: Float64Array },
  runs: readonly Run[], lagS: number,
): { x: Float64Array; y: Float64Array } {
  const outX = x.slice();
  const outY = y.slice();
  for (const run of runs) {
    const good: number[] = [];
    for (let i = run.start; i < run.end; i++) {
      const fresh = good.length === 0 || timeS[i]! > timeS[good[good.length - 1]!]!;
      if (fresh && Number.isFinite(x[i]! + y[i]! + timeS[i]!)) good.push(i);
    }
    if (good.length < 2) continue;
    let k = 0;
    for (const i of good) {
      const wanted = timeS[i]! + lagS;
      while (k < good.length - 2 && timeS[good[k + 1]!]! < wanted) k++;
      while (k > 0 && timeS[good[k]!]! > wanted) k--;
      const a = good[k]!;
      const b = good[k + 1]!;
      const share = (wanted - timeS[a]!) / (timeS[b]! - timeS[a]!);
      outX[i] = x[a]! + share * (x[b]! - x[a]!);
      outY[i] = y[a]! + share * (y[b]! - y[a]!);
    }
  }
  return { x: outX, y: outY };
}
