import { madSd } from '../../numerics/robust.js';

/** Root of the sum of the squares of 1, −4, 6, −4, 1. */
const FOURTH_DIFFERENCE = Math.sqrt(70);
/** Differences that are looked at: enough for a median. */
const LOOKED_AT = 200_000;

/**
 * Standard deviation of the error of a single reading, from fourth differences of five readings in a row on one line:
 * white noise makes √70 times its own, a smooth field next to nothing. By the median, so anomalies do not count. NaN where
 * no line has five readings with a value.
 *
 * @param line Line of each reading; absent, all are one.
 */
export function lineNoise(value: ArrayLike<number>, line?: ArrayLike<number>): number {
  const differences: number[] = [];
  const stride = Math.max(1, Math.floor(value.length / LOOKED_AT));
  for (let n = 4; n < value.length; n += stride) {
    if (line && line[n] !== line[n - 4]) continue;
    const difference = fourthDifference(value, n);
    if (Number.isFinite(difference)) differences.push(difference);
  }
  return noiseOf(differences);
}

/** Of the reading at `n` and the four before it. */
export function fourthDifference(value: ArrayLike<number>, n: number): number {
  return value[n]! - 4 * value[n - 1]! + 6 * value[n - 2]! - 4 * value[n - 3]! + value[n - 4]!;
}

/** Noise that makes such fourth differences; NaN where there are none. */
export function noiseOf(differences: ArrayLike<number>): number {
  return madSd(differences) / FOURTH_DIFFERENCE;
}
