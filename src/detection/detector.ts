import type { MainField } from '../field/types.js';
import { median } from '../numerics/robust.js';
import { isHeard, type Heard } from './heard.js';
import { Listener } from './listener.js';
import { readingTree } from './readingTree.js';
import { targetAverage, targetDepths, type HeardPole } from './targetAverage.js';
import { detectionThreshold } from './threshold.js';
import type { NoiseModel, Target } from './types.js';

export interface DetectorOptions {
  readonly target: Target;
  readonly noise: NoiseModel;
  readonly mainField: Pick<MainField, 'unit'>;
  /** False alarms by noise alone that are put up with on a hectare. */
  readonly falseAlarmsPerHa: number;
  /** Deflection that whoever decides on sources asks for in any case; the threshold is never below it. */
  readonly leastDeflection?: number;
  /** How many times noisier a place (frame metres) is than the noise model says; 1 where unsaid. */
  readonly noiseScale?: (x: number, y: number) => number;
}

/**
 * One false alarm by noise alone on ten hectares: less than what clutter costs anyway; and six times the noise, for real
 * noise has longer tails than a Gaussian (both common practice).
 */
export const DETECTOR_DEFAULTS = Object.freeze({ falseAlarmsPerHa: 0.1, leastDeflection: 6 });

/** Readings count up to this many sensor–source distances away: there a pole's anomaly is down to 1.5 %. */
const WINDOW_DISTANCES = 4;
/** A square is pooled where its side is at most this share of the distance to the source: a weak source's deflection comes out 1 to 10 % low. */
const POOL_SHARE = 0.45;
/** Smallest pool in shares of the shortest distance, and in metres. */
const LEAF_SHARE = 0.25;
const LEAST_LEAF_M = 0.1;
/** Depth that pooling counts distances with: this far into the target's range, so that shallow casings keep their shape. */
const POOL_DEPTH_SHARE = 0.25;

export interface Detector {
  /** Deflection at which a source counts as detected. */
  readonly threshold: number;
  /** Typical distance from sensor to source, metres: median height plus middle depth; NaN where nothing was heard. */
  readonly distanceM: number;
  /**
   * A pole (A·m, either sign) at a place, frame metres, and depth below ground: its deflection, and the share by which
   * position error makes that wander (one standard deviation). Both 0 where it is not heard.
   */
  hear(x: number, y: number, source: { readonly poleAM: number; readonly depthM: number }): { deflection: number; wander: number };
  /** Chance that the target at this place would have been detected; 0 where it is not heard. */
  chanceAt(x: number, y: number): number;
}

/**
 * What can be detected from where somebody listened.
 *
 * The signal is a pole's projection on the main field (the exact anomaly differs only where it is thousands of nT, and
 * there detection is certain). The noise of empty ground is white per reading + σ_c² exp(−distance/L); a constant and a
 * plane over the window are given up as background; the matched filter for that noise has the deflection d, and a look
 * counts as a detection past the threshold t. Position error is a noise that only a source brings along, σ_p times the
 * model's slope on the two horizontal axes, correlated as exp(−|Δt|/τ): it moves no threshold, it makes the filter's
 * output wander by a share of itself. Without it the chance is Φ(d − t).
 *
 * Source: Kay (1998), Fundamentals of Statistical Signal Processing II, ch. 4 and 7; Van Trees (1968).
 */
export function makeDetector(heard: Heard, options: DetectorOptions): Detector {
  const { target, noise, mainField: { unit }, noiseScale } = options;
  const heights: number[] = [];
  for (let i = 0; i < heard.x.length; i++) if (isHeard(heard, i)) heights.push(heard.heightM[i]!);
  if (heights.length === 0) return { threshold: NaN, distanceM: NaN, hear: () => ({ deflection: 0, wander: 0 }), chanceAt: () => 0 };

  const heightM = median(heights);
  const [depthLow, depthHigh] = target.depthM;
  const distanceM = heightM + (depthLow + depthHigh) / 2;
  if (!(heightM + depthHigh > 0)) throw new Error(`makeDetector: sensors at ${heightM} m do not lie above a target ${depthHigh} m deep`);
  const threshold = Math.max(options.leastDeflection ?? DETECTOR_DEFAULTS.leastDeflection, detectionThreshold({ falseAlarmsPerHa: options.falseAlarmsPerHa, distanceM }));
  const windowM = WINDOW_DISTANCES * (heightM + depthHigh);
  const tree = readingTree(heard, { leafM: Math.max(LEAST_LEAF_M, LEAF_SHARE * (heightM + depthLow)), rootM: windowM / 2 });
  const pooling = { windowM, depthM: depthLow + POOL_DEPTH_SHARE * (depthHigh - depthLow), poolShare: POOL_SHARE };
  const listener = new Listener(tree, { noise, unit, pooling });
  const depths = targetDepths(target, heightM);
  const hear = (x: number, y: number, at: readonly number[]): HeardPole | null => {
    const pole = listener.hear(x, y, at);
    const scale = noiseScale ? noiseScale(x, y) : 1;
    return pole && scale !== 1 ? { perAM: Array.from(pole.perAM, (d) => d / scale), wander: pole.wander } : pole;
  };
  return {
    threshold, distanceM,
    hear(x, y, { poleAM, depthM }) {
      const pole = hear(x, y, [depthM]);
      return { deflection: pole ? pole.perAM[0]! * Math.abs(poleAM) : 0, wander: pole ? pole.wander[0]! : 0 };
    },
    chanceAt(x, y) {
      const pole = hear(x, y, depths);
      return pole ? targetAverage(target, pole, { threshold, heightM }) : 0;
    },
  };
}

/** Chance that the target at one place would have been detected. For many places, make a detector once. */
export function detectionChance(heard: Heard, [x, y]: readonly [number, number], options: DetectorOptions): number {
  return makeDetector(heard, options).chanceAt(x, y);
}
