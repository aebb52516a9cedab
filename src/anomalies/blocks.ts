import type { Readings } from '../readings/types.js';

/**
 * Readings averaged over short stretches of a pass, flat columns of the same length, in the order of walking. All work
 * on sources is done on these: ten readings a second tell nothing that their mean over a tenth of the distance to the
 * source does not tell.
 */
export interface Blocks {
  readonly count: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Sensor above ground, metres; ground is flat at height 0. */
  readonly heightM: Float64Array;
  /** Seconds; where readings carry no time, one stand-in for each pass: its positions err together, those of others on their own. */
  readonly timeS: Float64Array;
  /** Mean residual, nT. */
  readonly value: Float64Array;
  /** Readings in the mean. */
  readonly size: Float64Array;
  /** Uninterrupted stretch of one line that the block belongs to, counted from 0. */
  readonly pass: Int32Array;
  /** First reading of the block, and one past its last. */
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly passes: number;
}

export interface BlockOptions {
  /** Length of a block along the pass, metres. */
  readonly blockM: number;
  /** A longer hole in a line begins a new pass, metres. */
  readonly gapM: number;
  /** Time between passes where there are no times, seconds. */
  readonly pauseS: number;
}

/** Readings whose residual, place or height is NaN are left out; a pass ends where the line changes or a hole is too long. */
export function averageBlocks(readings: Readings, options: BlockOptions): Blocks {
  const { blockM, gapM, pauseS } = options;
  const { residual, x, y, heightM, timeS, line, count } = readings;
  const out = { x: [] as number[], y: [] as number[], h: [] as number[], t: [] as number[], v: [] as number[], n: [] as number[], pass: [] as number[], from: [] as number[], to: [] as number[] };
  let pass = -1;
  let clock = 0;
  let previous = -1;
  let startX = 0;
  let startY = 0;
  let sums = [0, 0, 0, 0, 0, 0];
  let from = 0;
  const close = (to: number) => {
    const n = sums[5]!;
    if (n === 0) return;
    out.x.push(sums[0]! / n); out.y.push(sums[1]! / n); out.h.push(sums[2]! / n); out.t.push(sums[3]! / n); out.v.push(sums[4]! / n);
    out.n.push(n); out.pass.push(pass); out.from.push(from); out.to.push(to);
    sums = [0, 0, 0, 0, 0, 0];
  };
  for (let i = 0; i < count; i++) {
    if (!(Number.isFinite(residual[i]!) && Number.isFinite(x[i]!) && Number.isFinite(y[i]!) && Number.isFinite(heightM[i]!))) continue;
    const step = previous < 0 ? Infinity : Math.hypot(x[i]! - x[previous]!, y[i]! - y[previous]!);
    const fresh = previous < 0 || line[i] !== line[previous] || step > gapM;
    if (fresh) {
      close(previous + 1);
      pass++;
      clock += pauseS;
    }
    if (fresh || Math.hypot(x[i]! - startX, y[i]! - startY) >= blockM) {
      if (!fresh) close(previous + 1);
      from = i;
      startX = x[i]!;
      startY = y[i]!;
    }
    sums[0]! += x[i]!;
    sums[1]! += y[i]!;
    sums[2]! += heightM[i]!;
    sums[3]! += Number.isFinite(timeS[i]!) ? timeS[i]! : clock;
    sums[4]! += residual[i]!;
    sums[5]!++;
    previous = i;
  }
  close(previous + 1);
  return {
    count: out.x.length, passes: pass + 1,
    x: Float64Array.from(out.x), y: Float64Array.from(out.y), heightM: Float64Array.from(out.h), timeS: Float64Array.from(out.t),
    value: Float64Array.from(out.v), size: Float64Array.from(out.n), pass: Int32Array.from(out.pass),
    from: Int32Array.from(out.from), to: Int32Array.from(out.to),
  };
}
