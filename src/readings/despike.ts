import { madSd, median } from '../numerics/robust.js';
import type { Run } from './runs.js';

export interface DespikeOptions {
  /** Distance between readings, metres; 0 for a station that stands still. */
  readonly stepM: number;
  /** Least distance from the sensor to any source, metres; Infinity for a station away from all iron. */
  readonly sourceM: number;
}

/** Readings to either side of Hampel's median, and to either side that tell how well neighbours predict each other. */
const HALF_WINDOW = 3;
const HALF_LOCAL = 10;
/** Standard deviations beyond which a reading is no noise: one in 500 million if noise were Gaussian. */
const LIMIT_SD = 6;
/** Hampel's usual three. */
const HAMPEL_SD = 3;
/**
 * Fourth derivative of a dipole's field over its peak is at most 105/z⁴ (of (1 + u²)^−5/2 at u = 0), and a cubic through
 * two neighbours on either side misses the middle by a sixth of the fourth difference: 17.5 (h/z)⁴.
 */
const CURVATURE = 17.5;
/** A dipole's field changes by at most 3/z of itself a metre upwards; a sensor on a pole jerks by some 5 cm (from memory). */
const GRADIENT = 3;
const JERK_M = 0.05;
/** Together they never excuse more than this share: a spike may not hide behind itself. */
const MOST_EXCUSED = 0.5;
/** Rounds of taking the worst ones out and looking again; runs of three false readings need three. */
const ROUNDS = 8;

/**
 * Marks single false readings, and runs of up to three, by Hampel's rule (further than `LIMIT_SD` × MAD from the median
 * of a short window) and by how badly a cubic through the good neighbours predicts them. What a source could do at the
 * stated distance is never a spike: the field over steel is smooth at the scale of a tenth of its depth.
 *
 * @param values nT; NaN is left alone
 * @returns 1 where a reading is a spike
 *
 * Source: Hampel (1974), JASA 69, 383–393; Davies & Gather (1993), JASA 88 (the rule in a moving window, from memory).
 */
export function despike(values: Float64Array, runs: readonly Run[], { stepM, sourceM }: DespikeOptions): Uint8Array {
  const spike = new Uint8Array(values.length);
  const noise = fourthDifferenceNoise(values, runs);
  const excused = sourceM === Infinity ? 0 : Math.min(MOST_EXCUSED, CURVATURE * (stepM / sourceM) ** 4 + (stepM > 0 ? GRADIENT * JERK_M / sourceM : 0));
  for (const run of runs) {
    if (run.end - run.start < 2 * HALF_WINDOW) continue;
    const background = median(values.subarray(run.start, run.end));
    for (let round = 0; round < ROUNDS; round++) {
      const found = worst(values, spike, run, { noise, background, excused });
      if (found.length === 0) break;
      for (const i of found) spike[i] = 1;
    }
  }
  return spike;
}

interface Judgement {
  readonly noise: number;
  readonly background: number;
  readonly excused: number;
}

/** Readings that are spikes and worse than all their neighbours, which a spike spoils as well. */
function worst(values: Float64Array, spike: Uint8Array, run: Run, { noise, background, excused }: Judgement): number[] {
  const miss = new Float64Array(run.end - run.start);
  const suspects = new Map<number, number>();
  for (let i = run.start; i < run.end; i++) {
    const predicted = spike[i] ? null : predict(values, spike, i, run);
    if (!predicted) continue;
    miss[i - run.start] = values[i]! - predicted.value;
    const limit = LIMIT_SD * noise * predicted.noiseGain + excused * Math.abs(predicted.value - background);
    if (Math.abs(miss[i - run.start]!) > limit) suspects.set(i, 0);
  }
  for (const i of suspects.keys()) suspects.set(i, beyondHampel(values, spike, i, run));
  return [...suspects.keys()].filter((i) => {
    const rank = suspects.get(i)!;
    if (rank === 0) return false;
    for (let j = i - HALF_WINDOW; j <= i + HALF_WINDOW; j++) if ((suspects.get(j) ?? 0) > rank) return false;
    const k = i - run.start;
    const local = madSd(miss.subarray(Math.max(0, k - HALF_LOCAL), k + HALF_LOCAL + 1));
    return Math.abs(miss[k]!) > LIMIT_SD * local;
  });
}

/**
 * Distance of a reading from the middle line of its window (median slope and median height: Sen 1968), where it is
 * beyond Hampel's limit, else 0. A plain median would take a steep flank for scatter.
 */
function beyondHampel(values: Float64Array, spike: Uint8Array, i: number, run: Run): number {
  const start = Math.max(run.start, Math.min(i - HALF_WINDOW, run.end - 1 - 2 * HALF_WINDOW));
  const at: number[] = [];
  for (let j = start; j <= Math.min(run.end - 1, start + 2 * HALF_WINDOW); j++) if (!spike[j] && !Number.isNaN(values[j]!)) at.push(j);
  const slopes: number[] = [];
  for (const a of at) for (const b of at) if (b > a) slopes.push((values[b]! - values[a]!) / (b - a));
  const slope = median(slopes);
  const left = at.map((j) => values[j]! - slope * (j - i));
  const distance = Math.abs(values[i]! - median(left));
  return distance > HAMPEL_SD * madSd(left) ? distance : 0;
}

/**
 * A reading as the cubic (or parabola) through the good neighbours has it, two on each side where there are, by
 * Lagrange's formula in the index; and by what factor white noise grows in the difference. Null where fewer than three
 * are near.
 */
function predict(values: Float64Array, spike: Uint8Array, i: number, run: Run): { value: number; noiseGain: number } | null {
  if (Number.isNaN(values[i]!)) return null;
  const good = (j: number): boolean => !spike[j] && !Number.isNaN(values[j]!);
  const before: number[] = [];
  const after: number[] = [];
  for (let j = i - 1; j >= Math.max(run.start, i - HALF_WINDOW); j--) if (good(j)) before.push(j);
  for (let j = i + 1; j <= Math.min(run.end - 1, i + HALF_WINDOW); j++) if (good(j)) after.push(j);
  const at = [...before.slice(0, Math.max(2, 3 - after.length)), ...after.slice(0, Math.max(2, 3 - before.length))];
  if (at.length < 3) return null;
  let value = 0;
  let gain = 1;
  for (const a of at) {
    let weight = 1;
    for (const b of at) if (b !== a) weight *= (i - b) / (a - b);
    value += weight * values[a]!;
    gain += weight * weight;
  }
  return { value, noiseGain: Math.sqrt(gain) };
}

/** Of this many pairs the smallest step tells the last digit that was written. */
const DIGIT_PAIRS = 2000;

/**
 * White noise per reading, nT: spread of the fourth differences over √70, robust in place of the rms; never below that
 * of the last digit written (its size over √12). Source: the weights 1, −4, 6, −4, 1 have squares that sum to 70.
 */
export function fourthDifferenceNoise(values: Float64Array, runs: readonly Run[]): number {
  const differences: number[] = [];
  for (const { start, end } of runs) {
    for (let i = start + 2; i < end - 2; i++) {
      differences.push(values[i - 2]! - 4 * values[i - 1]! + 6 * values[i]! - 4 * values[i + 1]! + values[i + 2]!);
    }
  }
  const spread = madSd(differences);
  let digit = Infinity;
  for (let i = 1; i < Math.min(values.length, DIGIT_PAIRS); i++) {
    const step = Math.abs(values[i]! - values[i - 1]!);
    // Written decimals come back with rounding of their own, far below any digit.
    if (step > 1e-7 && step < digit) digit = step;
  }
  return Math.max(spread === spread ? spread / Math.sqrt(70) : 0, digit === Infinity ? 0 : digit / Math.sqrt(12));
}
