import { REACH_DISTANCES } from '../detection/coveredGround.js';
import { makeDetector } from '../detection/detector.js';
import { pooledReadings, type Listening } from './planChances.js';

/** Spacings are whole multiples of this. */
const STEP_M = 0.5;
const LEAST_M = 1;
/** A spacing wider than this is no search for casings on foot. */
const MOST_M = 200;
/** Lines on either side of the two that the place lies between; more add nothing, as they lie outside the detector's window. */
const OUTER_LINES = 2;
/** Lengths of line before and after the place, in distances from sensor to source: the detector's window and a little more. */
const RUN_DISTANCES = 5;
/** Places tried between two lines, as parts of the spacing; a slanting main field moves the worst one off the middle. */
const PLACES = [0.25, 0.375, 0.5, 0.625, 0.75];

export interface AdvisedSpacing {
  readonly spacingM: number;
  /** Least chance of detection between two lines of that spacing. */
  readonly chance: number;
}

/**
 * The widest spacing (a multiple of 0.5 m) of parallel lines for which the stated casing is still detected with at least
 * `wantedChance` at the worst place between two lines, and every place lies within the reach of a line. Where even the
 * closest lines promise less, these are returned with what they promise.
 */
export function spacingForTarget(listening: Listening, options: { readonly azimuthDeg: number; readonly wantedChance: number }): AdvisedSpacing {
  const { azimuthDeg, wantedChance } = options;
  const at = (steps: number): AdvisedSpacing => {
    const spacingM = steps * STEP_M;
    return { spacingM, chance: worstChance(spacingM, listening, azimuthDeg) };
  };
  let low = Math.round(LEAST_M / STEP_M);
  let best = at(low);
  if (best.chance < wantedChance) return best;
  let high = Math.round(MOST_M / STEP_M) + 1;
  while (high - low > 1) {
    const middle = Math.floor((low + high) / 2);
    const tried = at(middle);
    if (tried.chance >= wantedChance) [low, best] = [middle, tried];
    else high = middle;
  }
  return best;
}

/** Least chance at the places between two lines of an endless family; 0 where a place lies beyond the reach of both. */
export function worstChance(spacingM: number, listening: Listening, azimuthDeg: number): number {
  const { heightM, target } = listening;
  const distanceM = heightM + (target.depthM[0] + target.depthM[1]) / 2;
  if (spacingM / 2 > REACH_DISTANCES * distanceM) return 0;
  const azimuth = (azimuthDeg * Math.PI) / 180;
  const [sin, cos] = [Math.sin(azimuth), Math.cos(azimuth)];
  const runM = RUN_DISTANCES * (heightM + target.depthM[1]);
  const lines = Array.from({ length: 2 * OUTER_LINES + 2 }, (_, k) => {
    const across = (k - OUTER_LINES) * spacingM;
    const [from, to] = k % 2 === 0 ? [-runM, runM] : [runM, -runM];
    return { x0: from * sin + across * cos, y0: from * cos - across * sin, x1: to * sin + across * cos, y1: to * cos - across * sin };
  });
  const { heard, pooled } = pooledReadings(lines, listening);
  const detector = makeDetector(heard, pooled);
  return Math.min(...PLACES.map((part) => detector.chanceAt(part * spacingM * cos, -part * spacingM * sin)));
}
