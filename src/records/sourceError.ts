import { UserError } from '../errors.js';
import { FOOT_M } from '../units.js';

/** How a position came about: the class that sets its error where the file states none. */
export const SOURCE_CLASSES = ['surveyed', 'gps', 'map', 'footage', 'unknown'] as const;
export type SourceClass = (typeof SOURCE_CLASSES)[number];

/** An error as stated: at most one of the three. `null` where nothing is stated. */
export interface StatedError {
  /** One standard deviation on each axis, metres. */
  readonly errorM: number | null;
  /** Radius that holds 90 % of the places, metres. */
  readonly error90M: number | null;
  /** Radius that holds 95 % of the places, metres. */
  readonly error95M: number | null;
}

/** Standard deviation on each axis, and what it rests on. */
export interface SourceError {
  readonly sdM: number;
  readonly words: string;
}

/** Radius that holds 90 % of a circular Gaussian, in σ per axis: √(−2 ln 0.1). */
export const RADIAL_90 = Math.sqrt(-2 * Math.log(0.1));
/** Radius that holds 95 % of a circular Gaussian, in σ per axis: √(−2 ln 0.05) = 2.4477. */
export const RADIAL_95 = Math.sqrt(-2 * Math.log(0.05));

/** Scale denominator from which the finer of the two tolerances of the map standard applies ("larger than 1:20,000"). */
const NMAS_LARGE_SCALE = 20_000;
const INCH_M = FOOT_M / 12;

/**
 * Standard deviation per axis of a well-defined point read off a map, metres.
 * Source: United States National Map Accuracy Standards (Bureau of the Budget, 1947): at most 10 % of points off by more
 * than 1/30 inch on maps larger than 1:20,000 and 1/50 inch at 1:20,000 and smaller; 90 % radial ÷ 2.146 = σ per axis.
 */
export function mapErrorSdM(scale: number): number {
  return (scale * INCH_M) / (scale < NMAS_LARGE_SCALE ? 30 : 50) / RADIAL_90;
}

/** Standard deviations per axis, metres, of the classes that need no scale. */
export const CLASS_SD_M: Readonly<Record<Exclude<SourceClass, 'map'>, number>> = Object.freeze({
  /** Common practice: a licensed survey of a well head, tied to control. */
  surveyed: 0.5,
  /** ± 15 ft, the class that state well files give to hand-held receivers (common practice), taken as a 90 % radius. */
  gps: (15 * FOOT_M) / RADIAL_90,
  /** Common practice: calls taped to a few metres from section lines that are themselves known to some ten metres. */
  footage: 15,
  /** Common practice: coordinates of unknown origin are off by tens of metres. */
  unknown: 30,
});

const CLASS_WORDS: Readonly<Record<Exclude<SourceClass, 'map'>, string>> = {
  surveyed: 'surveyed', gps: 'hand-held GPS', footage: 'computed from a footage call', unknown: 'source not stated',
};

/** Error of a source: as stated, else by its class. `where` names the file, for messages. */
export function sourceError(stated: StatedError, source: { readonly class: SourceClass; readonly mapScale: number | null; readonly classSdM?: number | null }, where: string): SourceError {
  const name = source.class === 'map' ? mapWords(source.mapScale) : CLASS_WORDS[source.class];
  const given = [stated.errorM, stated.error90M, stated.error95M].filter((value) => value !== null);
  if (given.length > 1) {
    throw new UserError({
      code: 'key_invalid', where, found: 'more than one of error_m, error_90_m and error_95_m',
      wanted: 'one of them: error_m is one standard deviation per axis, error_90_m and error_95_m are radii',
    });
  }
  if (stated.errorM !== null) return { sdM: stated.errorM, words: `${name}, stated ${metres(stated.errorM)} (1 σ per axis)` };
  if (stated.error90M !== null) {
    const sdM = stated.error90M / RADIAL_90;
    return { sdM, words: `${name}, stated ${metres(stated.error90M)} (90 % radius), ${metres(sdM)} per axis` };
  }
  if (stated.error95M !== null) {
    const sdM = stated.error95M / RADIAL_95;
    return { sdM, words: `${name}, stated ${metres(stated.error95M)} (95 % radius), ${metres(sdM)} per axis` };
  }
  const own = source.classSdM ?? null;
  if (own !== null) return { sdM: own, words: `${name} ${metres(own)} (as stated for its class)` };
  if (source.class !== 'map') return { sdM: CLASS_SD_M[source.class], words: `${name} ${metres(CLASS_SD_M[source.class])}` };
  if (source.mapScale === null) {
    throw new UserError({
      code: 'key_missing', where, found: 'source "map" without map_scale', wanted: 'the map\'s scale, as in "map_scale": 24000',
      advice: 'or state the error with error_m (1 σ per axis) or error_90_m (radius)',
    });
  }
  const sdM = mapErrorSdM(source.mapScale);
  return { sdM, words: `${name} ${metres(sdM)} (National Map Accuracy Standards)` };
}

function mapWords(scale: number | null): string {
  return scale === null ? 'read off a map' : `1:${Math.round(scale).toLocaleString('en-US')} map`;
}

/** A length as it is written in messages: two significant figures below 10 m, whole metres above 100. */
export function metres(lengthM: number): string {
  const abs = Math.abs(lengthM);
  return `${lengthM.toFixed(abs >= 100 ? 0 : abs >= 1 ? 1 : 2)} m`;
}
