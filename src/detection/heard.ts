/**
 * Where and when a magnetometer listened, flat columns of the same length: readings as they were walked, or a plan's
 * lines as they will be. What it read does not matter here.
 */
export interface Heard {
  /** Frame metres. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Sensor above ground, metres. */
  readonly heightM: Float64Array;
  /** Seconds; NaN where unknown: positions of one line then err together, those of different lines on their own. */
  readonly timeS: Float64Array;
  readonly line: Int32Array;
  /** 1 for a good reading, 0 for one that is not used. */
  readonly usable: Uint8Array;
}

/** Readings of different lines without a time are this far apart, seconds: far more than positions stay correlated. */
const UNTIMED_LINE_S = 1e7;

/** Time of a reading, or its line's stand-in where it has none. */
export function heardTimeS(heard: Heard, i: number): number {
  const t = heard.timeS[i]!;
  return t === t ? t : -UNTIMED_LINE_S * (1 + heard.line[i]!);
}

/** Whether a reading counts: good, and with a place and a height. */
export function isHeard(heard: Heard, i: number): boolean {
  return heard.usable[i] === 1 && Number.isFinite(heard.x[i]! + heard.y[i]! + heard.heightM[i]!);
}
