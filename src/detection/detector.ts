import { NT_PER_POLE } from '../field/pole.js';
import type { MainField } from '../field/types.js';
import { median } from '../numerics/robust.js';
import { deflection } from './deflection.js';
import { gather, type Gathering } from './gather.js';
import { isHeard, type Heard } from './heard.js';
import { LEAST_WHITE_NT } from './noise.js';
import { readingTree } from './readingTree.js';
import { targetAverage } from './targetAverage.js';
import { detectionThreshold } from './threshold.js';
import type { NoiseModel, Target } from './types.js';

export interface DetectorOptions {
  readonly target: Target;
  readonly noise: NoiseModel;
  readonly mainField: Pick<MainField, 'unit'>;
  /** False alarms by noise alone that are put up with on a hectare. */
  readonly falseAlarmsPerHa: number;
}

/** One false alarm by noise alone on ten hectares: less than what clutter costs anyway (common practice). */
export const DETECTOR_DEFAULTS = Object.freeze({ falseAlarmsPerHa: 0.1 });

/** Readings count up to this many sensor–source distances away: there a pole's anomaly is down to 1.5 %. */
const WINDOW_DISTANCES = 4;
/** A square is pooled where its side is at most this share of the distance to the source: costs a signal 3 % or so. */
const POOL_SHARE = 0.5;
/** Smallest pool in shares of the shortest distance, and in metres. */
const LEAF_SHARE = 0.25;
const LEAST_LEAF_M = 0.1;
/** Most pools that one place is heard through. */
const MOST_POOLS = 64;
/** Background columns: constant and plane. With no more pools than that, nothing is left to hear with. */
const BACKGROUND = 3;
/** Depth that pooling counts distances with: this far into the target's range, so that shallow casings keep their shape. */
const POOL_DEPTH_SHARE = 0.25;

export interface Detector {
  /** Deflection at which a source counts as detected. */
  readonly threshold: number;
  /** Typical distance from sensor to source, metres: median height plus middle depth; NaN where nothing was heard. */
  readonly distanceM: number;
  /** Deflection of a pole (A·m) at this place, frame metres, and depth below ground; 0 where it is not heard. */
  deflectionAt(x: number, y: number, source: { readonly poleAM: number; readonly depthM: number }): number;
  /** Chance that the target at this place would have been detected; 0 where it is not heard. */
  chanceAt(x: number, y: number): number;
}

/**
 * What can be detected from where somebody listened.
 *
 * The signal is a pole's projection on the main field (the exact anomaly differs only where it is thousands of nT, and
 * there detection is certain). The noise's covariance is white per reading + σ_c² exp(−distance/L) + position error
 * times the model's gradient, correlated as exp(−|Δt|/τ), pole by pole; a constant and a plane over the window are given
 * up as background. Position error counts on the two horizontal axes.
 *
 * Source: Kay (1998), Fundamentals of Statistical Signal Processing II, ch. 4 and 7; Van Trees (1968).
 */
export function makeDetector(heard: Heard, options: DetectorOptions): Detector {
  const { target, noise, mainField: { unit } } = options;
  const heights: number[] = [];
  for (let i = 0; i < heard.x.length; i++) if (isHeard(heard, i)) heights.push(heard.heightM[i]!);
  const heightM = median(heights);
  const [depthLow, depthHigh] = target.depthM;
  const distanceM = heightM + (depthLow + depthHigh) / 2;
  if (heights.length === 0) return { threshold: NaN, distanceM: NaN, deflectionAt: () => 0, chanceAt: () => 0 };
  if (!(distanceM > 0)) throw new Error(`makeDetector: sensors lie ${distanceM} m above the target`);

  const threshold = detectionThreshold({ falseAlarmsPerHa: options.falseAlarmsPerHa, distanceM });
  const windowM = WINDOW_DISTANCES * (heightM + depthHigh);
  const tree = readingTree(heard, { leafM: Math.max(LEAST_LEAF_M, LEAF_SHARE * (heightM + depthLow)), rootM: windowM / 2 });
  const pooling = { windowM, depthM: depthLow + POOL_DEPTH_SHARE * (depthHigh - depthLow), poolShare: POOL_SHARE };

  const stride = MOST_POOLS + 1;
  const into: Gathering = { nodes: new Int32Array(MOST_POOLS), count: 0 };
  const work = new Float64Array((MOST_POOLS + 1 + BACKGROUND) * stride);
  const fixed = new Float64Array(MOST_POOLS * stride);
  const inTime = new Float64Array(MOST_POOLS * stride);
  const [px, py, ph, signal, slopeX, slopeY] = Array.from({ length: 6 }, () => new Float64Array(MOST_POOLS)) as [Float64Array, Float64Array, Float64Array, Float64Array, Float64Array, Float64Array];

  /** Pools around a place, and the parts of their covariance that do not depend on the source. */
  const listenAt = (x: number, y: number): number => {
    gather(tree, [x, y], { ...pooling, into });
    const n = into.count;
    const whiteVar = Math.max(noise.whiteSdNT, LEAST_WHITE_NT) ** 2;
    const correlatedVar = noise.correlatedSdNT ** 2;
    const perM = noise.correlationM > 0 ? -1 / noise.correlationM : -Infinity;
    const perS = noise.positionCorrelationS > 0 ? -1 / noise.positionCorrelationS : -Infinity;
    for (let i = 0; i < n; i++) {
      const node = into.nodes[i]!;
      px[i] = tree.x[node]! - x;
      py[i] = tree.y[node]! - y;
      ph[i] = tree.heightM[node]!;
      const time = tree.timeS[node]!;
      for (let j = 0; j < i; j++) {
        fixed[i * stride + j] = correlatedVar * Math.exp(perM * Math.sqrt((px[i]! - px[j]!) ** 2 + (py[i]! - py[j]!) ** 2));
        inTime[i * stride + j] = Math.exp(perS * Math.abs(time - tree.timeS[into.nodes[j]!]!));
      }
      fixed[i * stride + i] = correlatedVar + whiteVar / tree.weight[node]!;
      inTime[i * stride + i] = 1;
    }
    return n;
  };

  const positionVar = noise.positionSdM ** 2;
  const deflectionOf = (n: number, poleAM: number, depthM: number): number => {
    for (let i = 0; i < n; i++) {
      const rx = px[i]!;
      const ry = py[i]!;
      const rz = ph[i]! + depthM;
      const r2 = rx * rx + ry * ry + rz * rz;
      const k = (NT_PER_POLE * poleAM) / (r2 * Math.sqrt(r2));
      const along = unit[0] * rx + unit[1] * ry + unit[2] * rz;
      signal[i] = k * along;
      slopeX[i] = k * (unit[0] - (3 * along * rx) / r2);
      slopeY[i] = k * (unit[1] - (3 * along * ry) / r2);
    }
    for (let i = 0; i < n; i++) {
      const base = i * stride;
      const gx = positionVar * slopeX[i]!;
      const gy = positionVar * slopeY[i]!;
      for (let j = 0; j <= i; j++) work[base + j] = fixed[base + j]! + inTime[base + j]! * (gx * slopeX[j]! + gy * slopeY[j]!);
    }
    for (let i = 0; i < n; i++) {
      work[n * stride + i] = signal[i]!;
      work[(n + 1) * stride + i] = 1;
      work[(n + 2) * stride + i] = px[i]! / windowM;
      work[(n + 3) * stride + i] = py[i]! / windowM;
    }
    return deflection(work, { n, rows: n + 1 + BACKGROUND, stride });
  };

  return {
    threshold, distanceM,
    deflectionAt(x, y, { poleAM, depthM }) {
      const n = listenAt(x, y);
      return n > BACKGROUND ? deflectionOf(n, Math.abs(poleAM), depthM) : 0;
    },
    chanceAt(x, y) {
      const n = listenAt(x, y);
      if (n <= BACKGROUND) return 0;
      return targetAverage(target, (pole, depth) => deflectionOf(n, pole, depth), { threshold, heightM });
    },
  };
}

/** Chance that the target at one place would have been detected. For many places, make a detector once. */
export function detectionChance(heard: Heard, [x, y]: readonly [number, number], options: DetectorOptions): number {
  return makeDetector(heard, options).chanceAt(x, y);
}
