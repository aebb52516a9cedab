import { detectionProbability } from './threshold.js';
import type { Target } from './types.js';

/** How a pole of 1 A·m is heard at each of the target's depths (see `targetDepths`). */
export interface HeardPole {
  /** Deflection per A·m. */
  readonly perAM: ArrayLike<number>;
  /** Standard deviation of what is heard through position error, as a share of it. */
  readonly wander: ArrayLike<number>;
}

/** Depths at which a target is worked out: lowest, middle, highest of its range (one where it is no range), … */
export const DEPTH_NODES = 3;
/** … in between, logarithms are interpolated by a quadratic in log distance, and the chance is averaged over these. */
const DEPTH_STEPS = 8;
const POLE_STEPS = 12;
/** Where the chance at both ends of a range of poles agrees within this, the rest of the range need not be worked out. */
const CERTAIN = 1e-3;
/** Stands for a deflection of nothing where its logarithm is taken. */
const FAINTEST = 1e-9;
/** 5-point Gauss–Hermite for a standard normal variable. Source: Abramowitz & Stegun, table 25.10. */
const WANDER_NODES = [-2.8569700138728, -1.355626179974266, 0, 1.355626179974266, 2.8569700138728];
const WANDER_WEIGHTS = [0.011257411327721, 0.222075922005613, 0.533333333333333, 0.222075922005613, 0.011257411327721];
/** A wander below this share changes no chance by more than 1e−3. */
const STEADY = 0.02;

/** Depths to work a target out at. `heightM`: sensor above ground; the middle one is the geometric mean of the distances. */
export function targetDepths({ depthM: [low, high] }: Target, heightM: number): number[] {
  return high > low ? [low, Math.sqrt(Math.max(FAINTEST, heightM + low) * (heightM + high)) - heightM, high] : [low];
}

/** Chance that a source is detected whose deflection wanders by a share of itself; it never turns round, so it wanders log-normally. */
export function wanderingProbability(deflection: number, wander: number, threshold: number): number {
  if (wander < STEADY) return detectionProbability(deflection, threshold);
  let sum = 0;
  // A log-normal variable of mean 1 whose standard deviation is `wander`.
  const sigma2 = Math.log1p(wander * wander);
  const sigma = Math.sqrt(sigma2);
  for (let k = 0; k < WANDER_NODES.length; k++) {
    sum += WANDER_WEIGHTS[k]! * detectionProbability(deflection * Math.exp(sigma * WANDER_NODES[k]! - sigma2 / 2), threshold);
  }
  return sum;
}

/**
 * Detection chance averaged over the target's ranges, pole strength log-uniform and depth uniform; within 0.006.
 *
 * @param heard One value for each of `targetDepths(target, heightM)`.
 */
export function targetAverage(target: Target, heard: HeardPole, { threshold, heightM }: { threshold: number; heightM: number }): number {
  const [poleLow, poleHigh] = target.poleAM;
  const [depthLow, depthHigh] = target.depthM;
  const last = heard.perAM.length - 1;
  const near = Math.max(heightM + depthLow, FAINTEST);
  const far = Math.max(heightM + depthHigh, near);
  const steps = last > 0 ? DEPTH_STEPS : 1;
  const poleSteps = poleHigh > poleLow ? POLE_STEPS : 1;
  let sum = 0;
  for (let q = 0; q < steps; q++) {
    const v = last > 0 ? Math.log((heightM + depthLow + ((q + 0.5) / steps) * (depthHigh - depthLow)) / near) / Math.log(far / near) : 0;
    const perAM = between(heard.perAM, v);
    const wander = between(heard.wander, v);
    const faint = wanderingProbability(perAM * poleLow, wander, threshold);
    const loud = faint > 1 - CERTAIN ? faint : wanderingProbability(perAM * poleHigh, wander, threshold);
    // Between the ends of the range the chance only rises.
    if (loud - faint < CERTAIN) sum += (poleSteps * (loud + faint)) / 2;
    else for (let p = 0; p < poleSteps; p++) sum += wanderingProbability(perAM * poleLow * (poleHigh / poleLow) ** ((p + 0.5) / poleSteps), wander, threshold);
  }
  return Math.min(1, sum / (steps * poleSteps));
}

/** Quadratic in the logarithm through values at 0, ½ and 1; a single value stays what it is. */
function between(values: ArrayLike<number>, t: number): number {
  if (values.length < DEPTH_NODES) return values[0]!;
  const [a, b, c] = [values[0]!, values[1]!, values[2]!].map((value) => Math.log(Math.max(value, FAINTEST))) as [number, number, number];
  return Math.exp(a * (1 - t) * (1 - 2 * t) + b * 4 * t * (1 - t) + c * t * (2 * t - 1));
}
