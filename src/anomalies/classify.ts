import { normalCdf, normalPdf } from '../numerics/special.js';
import type { Target } from '../detection/types.js';
import { misfitOf, type Refined } from './refine.js';
import type { Source } from './sources.js';

/** How likely each nature of a source is; sums to 1. */
export interface Nature {
  readonly casing: number;
  /** A pole that is no casing as stated: a joint or end of a pipe, a rod, a fence post. */
  readonly otherPole: number;
  readonly compact: number;
  readonly linear: number;
}

/**
 * Prior odds before any reading (a working assumption, said in every note): casings and scrap are about as common among
 * what stands out on old oil fields, pieces of pipe and other poles somewhat less.
 */
export const PRIOR = Object.freeze({ casing: 0.35, otherPole: 0.2, compact: 0.3, linear: 0.15 });

/**
 * Strengths of poles that are no casings, and moments of compact iron, as log-normals (a working assumption: joints and
 * rods some tens of A·m; scrap from a horseshoe to a ton of steel, 100 to 1,000 A·m², from memory). A share of both is
 * anything at all, up to rock of any size.
 */
const OTHER_POLE = { middle: 15, logSd: 1.3 } as const;
const COMPACT = { middle: 10, logSd: 1.7 } as const;
const ANYTHING_SHARE = 0.05;
const ANYTHING_LOG_RANGE = Math.log(1e10);
/** Scrap and pipe ends lie shallow: most depths fall off exponentially over this length, metres (common practice: ploughed in, backfilled); the rest lie anywhere down to two reaches. */
const SHALLOW_M = 1;
const DEEP_SHARE = 0.2;
/** Density of ln strength and depth for a line, which has neither stated: that of the middle of the others. */
const LINE_DENSITY = 0.05;
/** The stated range of strengths is softened by this share at either end (one standard deviation of ln). */
const STRENGTH_SOFT = 0.2;
/** A strength that the fit hardly knows still counts as known to this (ln): ignorance must not make rock a casing. */
const MOST_LOG_SD = 0.7;
/** Tops are believed above or below the stated range by this share of the reach (one standard deviation). */
const DEPTH_SOFT_REACHES = 0.12;
/**
 * No chance of a casing is stated below or above these: models are never that true. On 21 made field days none of 306
 * sources at the lower bound was a casing.
 */
export const LEAST_CHANCE = 0.002;
export const MOST_CHANCE = 0.99;

/**
 * Posterior of a source's nature: information criterion of each kind, tempered by the misfit of the best (quasi-likelihood,
 * Burnham & Anderson 2002, section 2.5), times prior odds, times how well the pole fits the stated casing. A casing may
 * also look like a vertical dipole (a stub).
 */
export function natureOf(refined: Refined, { pole, compact }: Candidates, { target, reachM }: { readonly target: Target; readonly reachM: number }): Nature {
  const { fit, bic } = refined;
  const misfit = misfitOf(fit);
  const least = Math.min(bic.pole, bic.dipole, bic.line);
  const weight = (value: number) => Math.exp(-0.5 * (value - least) / misfit);
  // Where a kind is not the best fit its strength and depth come from its own, worse fit: still what it would have to be.
  const asCasing = PRIOR.casing * (pole ? casingDensity(pole, target, reachM) : 0);
  const asOther = PRIOR.otherPole * (pole ? sizeDensity(Math.abs(pole.poleAM), OTHER_POLE) * shallow(pole.depthM, pole.depthSdM, reachM) : 0);
  const asCompact = PRIOR.compact * (compact ? sizeDensity(compact.momentAM2, COMPACT) * shallow(compact.depthM, compact.depthSdM, reachM) : 0);
  const parts = {
    casing: (weight(bic.pole) + weight(bic.dipole) * (compact ? asStub(compact) : 0)) * asCasing,
    otherPole: weight(bic.pole) * asOther,
    compact: weight(bic.dipole) * asCompact,
    linear: weight(bic.line) * PRIOR.linear * LINE_DENSITY,
  };
  const sum = parts.casing + parts.otherPole + parts.compact + parts.linear;
  return { casing: parts.casing / sum, otherPole: parts.otherPole / sum, compact: parts.compact / sum, linear: parts.linear / sum };
}

export interface PoleValues {
  readonly poleAM: number;
  readonly poleSdAM: number;
  readonly depthM: number;
  readonly depthSdM: number;
}

/** What the source would be as each kind; null where that was not tried. */
export interface Candidates {
  readonly pole: PoleValues | null;
  readonly compact: {
    readonly momentAM2: number; readonly depthM: number; readonly depthSdM: number;
    /** Angle between the moment and the vertical, up or down, degrees from 0 to 90. */
    readonly offVerticalDeg: number;
  } | null;
}

/**
 * A top joint magnetised against the next one, or a short string, is a vertical dipole rather than a pole. Share of
 * casings that look so, and how far off the vertical (a working assumption).
 */
const STUB = { share: 0.05, spreadDeg: 8 } as const;

/**
 * How much likelier a dipole of this direction is as a stub of casing than as scrap, whose moment may point anywhere:
 * a Gaussian about the vertical, up or down, against an even spread over the sphere, times the share of stubs.
 */
function asStub({ offVerticalDeg }: NonNullable<Candidates['compact']>): number {
  const spread = STUB.spreadDeg * Math.PI / 180;
  return STUB.share * Math.exp(-0.5 * (offVerticalDeg / STUB.spreadDeg) ** 2) / spread ** 2;
}

/** Density of ln value: mostly log-normal, else anything. */
function sizeDensity(value: number, { middle, logSd }: { readonly middle: number; readonly logSd: number }): number {
  return (1 - ANYTHING_SHARE) * (normalPdf(Math.log(Math.max(1e-9, value) / middle) / logSd) / logSd) + ANYTHING_SHARE / ANYTHING_LOG_RANGE;
}

/** Density of a depth that is most likely shallow. Some iron stands above ground; the rest of what seems to must owe that to its error. */
function shallow(depthM: number, depthSdM: number, reachM: number): number {
  const sd = Math.hypot(depthSdM, DEPTH_SOFT_M);
  return Math.max(STANDING_SHARE, normalCdf(depthM / sd)) * (((1 - DEEP_SHARE) * Math.exp(-Math.max(0, depthM) / SHALLOW_M)) / SHALLOW_M + DEEP_SHARE / (2 * reachM));
}
const DEPTH_SOFT_M = 0.3;
const STANDING_SHARE = 0.15;

/** Density of ln strength and depth that the stated casing has, its edges softened, with the errors of the fit. */
function casingDensity({ poleAM, poleSdAM, depthM, depthSdM }: PoleValues, { poleAM: [weak, strong], depthM: [shallow, deep] }: Target, reachM: number): number {
  const size = Math.abs(poleAM);
  const logSd = Math.hypot(STRENGTH_SOFT, Math.min(MOST_LOG_SD, poleSdAM / size));
  const depthSd = Math.hypot(DEPTH_SOFT_REACHES * reachM, depthSdM);
  return softBox(Math.log(size), [Math.log(weak), Math.log(strong)], logSd) * softBox(depthM, [shallow, deep], depthSd);
}

/** Density of a uniform value in the range plus a normal error; a range without width is the normal density. */
function softBox(value: number, [low, high]: readonly [number, number], sd: number): number {
  const width = Math.max(high - low, sd / 10);
  return (normalCdf((value - low) / sd) - normalCdf((value - low - width) / sd)) / width;
}

/** A source of ordinary size and depth has about this density of ln size and depth. */
const ORDINARY_DENSITY = 0.1;

/**
 * What a source costs on top of its parameters, in units of the information criterion, for being an odd one: minus twice
 * the log of its density of size and depth as the likelier of casing and scrap, against an ordinary one; 0 for a line.
 */
export function oddness({ kind, values }: Source, { target, reachM }: { readonly target: Target; readonly reachM: number }): number {
  if (kind === 'line') return 0;
  const depthM = -values[2]!;
  const loose = DEPTH_SOFT_REACHES * reachM;
  const density = kind === 'pole'
    ? Math.max(casingDensity({ poleAM: values[3]!, poleSdAM: 0, depthM, depthSdM: loose }, target, reachM), sizeDensity(Math.abs(values[3]!), OTHER_POLE) * shallow(depthM, loose, reachM))
    : sizeDensity(Math.hypot(values[3]!, values[4]!, values[5]!), COMPACT) * shallow(depthM, loose, reachM);
  return Math.max(0, -2 * Math.log(Math.max(LEAST_DENSITY, density) / ORDINARY_DENSITY));
}
/** Nothing is odder than this. */
const LEAST_DENSITY = 1e-4;
