import { range, short } from './gridRemarks.js';
import { fourthDifference, lineNoise, noiseOf } from './sources/lineNoise.js';

/** Readings in the order in which they were taken. */
export interface LineValues {
  readonly value: ArrayLike<number>;
  /** Line of each reading; below 0: on none. */
  readonly line: ArrayLike<number>;
}

export interface LineErrors {
  /** Standard error of each reading, in the value's unit; null where no line shows its noise. */
  readonly sd: Float64Array | null;
  readonly note: string;
}

/** Fewer fourth differences leave a line's noise uncertain by more than a third. */
const LEAST_DIFFERENCES = 30;
/** A line with less than this share of the survey's noise has a sensor that was stuck, so it is no better than others. */
const LEAST_SHARE = 1e-3;

/**
 * Error of each reading as its own line's fourth differences have it (by the median, so anomalies do not count). Lines too
 * short for that, and lines that show next to no noise, have the survey's.
 */
export function lineErrors({ value, line }: LineValues): LineErrors {
  const surveyNT = lineNoise(value, line);
  const own = noiseByLine({ value, line });
  for (const [each, noiseNT] of own) if (!(noiseNT > LEAST_SHARE * surveyNT)) own.delete(each);
  if (own.size === 0) return { sd: null, note: 'No line is long enough to show the noise of its readings, so all count alike.' };
  const others = countLines(line) - own.size;
  const noises = [...own.values()];
  const rest = others > 0 ? `; ${others} lines, too short or too still to tell, count as the survey does with ${short(surveyNT)} nT` : '';
  return {
    sd: Float64Array.from(line, (each) => own.get(each) ?? surveyNT),
    note: `Readings count by the noise of their line, ${range([Math.min(...noises), Math.max(...noises)])} nT${rest}.`,
  };
}

function countLines(line: ArrayLike<number>): number {
  const lines = new Set<number>();
  for (let n = 0; n < line.length; n++) if (line[n]! >= 0) lines.add(line[n]!);
  return lines.size;
}

/** Noise of each line that has differences enough. */
function noiseByLine({ value, line }: LineValues): Map<number, number> {
  const differences = new Map<number, number[]>();
  for (let n = 4; n < value.length; n++) {
    if (line[n]! < 0 || line[n] !== line[n - 4]) continue;
    const difference = fourthDifference(value, n);
    if (!Number.isFinite(difference)) continue;
    const ofLine = differences.get(line[n]!);
    if (ofLine) ofLine.push(difference);
    else differences.set(line[n]!, [difference]);
  }
  const noise = new Map<number, number>();
  for (const [each, ofLine] of differences) if (ofLine.length >= LEAST_DIFFERENCES) noise.set(each, noiseOf(ofLine));
  return noise;
}
