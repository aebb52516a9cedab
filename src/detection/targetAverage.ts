import { detectionProbability } from './threshold.js';
import type { Target } from './types.js';

/** Deflection is worked out at this many pole strengths and depths (lowest, middle, highest of each range) … */
const NODES = 3;
/** … its logarithm is interpolated by a quadratic in log strength and log distance, and the chance averaged over these. */
const POLE_STEPS = 12;
const DEPTH_STEPS = 10;
/** This far from the threshold a chance is 0 or 1 within 3e−4, and the rest of the range need not be worked out. */
const CERTAIN = 3.5;
/** Stands for a deflection of nothing where its logarithm is taken. */
const FAINTEST = 1e-6;

/**
 * Detection chance averaged over the target's ranges, pole strength log-uniform and depth uniform.
 *
 * @param deflectionOf Deflection of a pole (A·m) at a depth below ground (m); grows with the pole, falls with the depth.
 * @param heightM Sensor above ground where it passes nearest: distance is this plus depth.
 */
export function targetAverage(target: Target, deflectionOf: (poleAM: number, depthM: number) => number, { threshold, heightM }: { threshold: number; heightM: number }): number {
  const [poleLow, poleHigh] = target.poleAM;
  const [depthLow, depthHigh] = target.depthM;
  const hardest = deflectionOf(poleLow, depthHigh);
  if (hardest > threshold + CERTAIN) return detectionProbability(hardest, threshold);
  const easiest = deflectionOf(poleHigh, depthLow);
  if (easiest < threshold - CERTAIN) return detectionProbability(easiest, threshold);

  const poles = poleHigh > poleLow ? [poleLow, Math.sqrt(poleLow * poleHigh), poleHigh] : [poleLow];
  const near = Math.max(heightM + depthLow, FAINTEST);
  const far = Math.max(heightM + depthHigh, FAINTEST);
  const depths = depthHigh > depthLow ? [depthLow, Math.sqrt(near * far) - heightM, depthHigh] : [depthLow];
  const logs = poles.map((pole, p) => depths.map((depth, q) => {
    const known = p === 0 && q === depths.length - 1 ? hardest : p === poles.length - 1 && q === 0 ? easiest : deflectionOf(pole, depth);
    return Math.log(Math.max(known, FAINTEST));
  }));

  let sum = 0;
  for (let q = 0; q < DEPTH_STEPS; q++) {
    const depth = depthLow + ((q + 0.5) / DEPTH_STEPS) * (depthHigh - depthLow);
    const v = depths.length < NODES ? 0 : Math.log((heightM + depth) / near) / Math.log(far / near);
    const along = logs.map((row) => quadratic(row, v));
    for (let p = 0; p < POLE_STEPS; p++) sum += detectionProbability(Math.exp(quadratic(along, (p + 0.5) / POLE_STEPS)), threshold);
  }
  return sum / (DEPTH_STEPS * POLE_STEPS);
}

/** Through values at 0, ½ and 1; a single value stays what it is. */
function quadratic(values: readonly number[], t: number): number {
  if (values.length < NODES) return values[0]!;
  return values[0]! * (1 - t) * (1 - 2 * t) + values[1]! * 4 * t * (1 - t) + values[2]! * t * (2 * t - 1);
}
