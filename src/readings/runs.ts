/** A stretch of consecutive readings, from `start` up to but without `end`, without a jump in time or place. */
export interface Run {
  readonly start: number;
  readonly end: number;
}

/** A pause longer than this many usual intervals parts a run. A dropout of a second at 10 Hz does, a hiccup does not. */
const PAUSE = 5;
/** A step longer than this many usual steps parts a run, where there are no times or they do not tell. */
const LEAP = 20;
/** Two intervals that are both below this are alike: clocks that write whole hundredths. */
const TICK_S = 0.02;

/**
 * Parts readings into runs: at a change of line, a pause, or a leap of the position. Readings without position or time
 * do not part a run by themselves.
 */
export function findRuns({ count, x, y, timeS, line }: {
  readonly count: number; readonly x: Float64Array; readonly y: Float64Array; readonly timeS: Float64Array; readonly line: Int32Array;
}): Run[] {
  const interval = usual(count, (i) => timeS[i]! - timeS[i - 1]!);
  const step = usual(count, (i) => Math.hypot(x[i]! - x[i - 1]!, y[i]! - y[i - 1]!));
  const runs: Run[] = [];
  let start = 0;
  for (let i = 1; i <= count; i++) {
    const parted = i === count || line[i] !== line[i - 1]
      || timeS[i]! - timeS[i - 1]! > PAUSE * Math.max(interval, TICK_S)
      || (step > 0 && Math.hypot(x[i]! - x[i - 1]!, y[i]! - y[i - 1]!) > LEAP * step);
    if (!parted) continue;
    runs.push({ start, end: i });
    start = i;
  }
  return runs;
}

/** Middle of the positive differences; 0 where there are none. */
function usual(count: number, difference: (i: number) => number): number {
  const values: number[] = [];
  // A thousand of them tell it as well as all.
  const stride = Math.max(1, Math.floor(count / 1000));
  for (let i = 1; i < count; i += stride) {
    const value = difference(i);
    if (value > 0) values.push(value);
  }
  values.sort((a, b) => a - b);
  return values.length > 0 ? values[values.length >> 1]! : 0;
}
