import { normalCdf } from '../numerics/special.js';
import type { Target } from '../detection/types.js';
import type { Refined } from './refine.js';

/** How likely each nature of a source is; sums to 1. */
export interface Nature {
  readonly casing: number;
  /** A pole that is no casing as stated: a joint or end of a pipe, a rod, a fence post. */
  readonly otherPole: number;
  readonly compact: number;
  readonly linear: number;
  /** Misfit of the best model in units of the noise, at least 1: evidence and covariance are weakened by it. */
  readonly misfit: number;
}

/**
 * Prior odds before any reading (a working assumption, said in every note): casings and scrap are about as common among
 * what stands out on old oil fields, pieces of pipe and other poles somewhat less.
 */
export const PRIOR = Object.freeze({ casing: 0.35, otherPole: 0.1, compact: 0.35, linear: 0.2 });

/** Strengths of poles that are no casings: log-uniform over this range, A·m (from memory: rods to heavy pipe). */
const OTHER_POLE_AM: readonly [number, number] = [1, 2000];
/** The stated range of strengths is softened by this share at either end (one standard deviation of ln). */
const STRENGTH_SOFT = 0.3;
/** Tops are believed above or below the stated range by this share of the reach (one standard deviation). */
const DEPTH_SOFT_REACHES = 0.12;
/** Depths of other poles and their likes: uniform down to this many reaches. */
const OTHER_DEPTH_REACHES = 2;
/** No chance is stated nearer to 0 or 1 than this: models are never that true. */
export const LEAST_CHANCE = 0.01;

/**
 * Posterior of a source's nature: information criterion of each kind, tempered by the misfit of the best (quasi-likelihood,
 * Burnham & Anderson 2002, section 2.5), times prior odds, times how well the pole fits the stated casing.
 */
export function natureOf(refined: Refined, target: Target, pole: PoleValues | null, reachM: number): Nature {
  const { fit, bic } = refined;
  const misfit = Math.max(1, fit.chi2 / Math.max(1, fit.count - fit.parameters));
  const least = Math.min(bic.pole, bic.dipole, bic.line);
  const weight = (value: number) => Math.exp(-0.5 * (value - least) / misfit);
  const fitOfCasing = pole ? casingDensity(pole, target, reachM) : 0;
  const fitOfOther = pole ? 1 / (Math.log(OTHER_POLE_AM[1] / OTHER_POLE_AM[0]) * OTHER_DEPTH_REACHES * reachM) : 0;
  const total = PRIOR.casing + PRIOR.otherPole;
  // Where the pole is not the best fit its strength and depth are not at hand: the stated casing is given its benefit.
  const parts = {
    casing: weight(bic.pole) * (pole ? (total * PRIOR.casing * fitOfCasing) / (PRIOR.casing * fitOfCasing + PRIOR.otherPole * fitOfOther) : PRIOR.casing),
    otherPole: weight(bic.pole) * (pole ? (total * PRIOR.otherPole * fitOfOther) / (PRIOR.casing * fitOfCasing + PRIOR.otherPole * fitOfOther) : PRIOR.otherPole),
    compact: weight(bic.dipole) * PRIOR.compact,
    linear: weight(bic.line) * PRIOR.linear,
  };
  const sum = parts.casing + parts.otherPole + parts.compact + parts.linear;
  return { casing: parts.casing / sum, otherPole: parts.otherPole / sum, compact: parts.compact / sum, linear: parts.linear / sum, misfit };
}

export interface PoleValues {
  readonly poleAM: number;
  readonly poleSdAM: number;
  readonly depthM: number;
  readonly depthSdM: number;
}

/** Density of ln strength and depth that the stated casing has, its edges softened, with the errors of the fit. */
function casingDensity({ poleAM, poleSdAM, depthM, depthSdM }: PoleValues, { poleAM: [weak, strong], depthM: [shallow, deep] }: Target, reachM: number): number {
  const size = Math.abs(poleAM);
  const logSd = Math.hypot(STRENGTH_SOFT, poleSdAM / size);
  const depthSd = Math.hypot(DEPTH_SOFT_REACHES * reachM, depthSdM);
  return softBox(Math.log(size), [Math.log(weak), Math.log(strong)], logSd) * softBox(depthM, [shallow, deep], depthSd);
}

/** Density of a uniform value in the range plus a normal error; a range without width is the normal density. */
function softBox(value: number, [low, high]: readonly [number, number], sd: number): number {
  const width = Math.max(high - low, sd / 10);
  return (normalCdf((value - low) / sd) - normalCdf((value - low - width) / sd)) / width;
}
