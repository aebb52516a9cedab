import { gaussianWithDigits } from '../density/gaussianWithDigits.js';
import { densityCovariance, densityMean } from '../density/moments.js';
import type { Density, GaussianPart } from '../density/types.js';
import type { Crs, Datum } from '../geodesy/types.js';
import type { Site } from '../site/types.js';
import { middleOfTruncated, type DigitKind } from './digits.js';
import { framePlace, type FramePlace } from './framePlace.js';
import type { RawPlace } from './rawRecord.js';
import type { Solution } from './solution.js';
import { metres, type SourceError } from './sourceError.js';

/** A Gaussian needs a width: a centimetre is less than any record, and any magnetometer, tells apart. */
const MIN_SD_M = 0.01;
/** What is smaller is left out of the words, not of the sum. */
const SAID_FROM_M = 0.05;
/** Coordinates as they would be read on a datum, which weighs as much as the datum's chance. */
export interface Candidate {
  readonly datum: Datum;
  readonly weight: number;
  readonly place: RawPlace;
  /** Of projected coordinates; null for angles. */
  readonly crs: Crs | null;
  /** Metres in the unit that projected coordinates are written in, where it is not the CRS's. */
  readonly unitM?: number;
}

/**
 * Coordinates as a place with error: source, digits, datum shift and what the group shares summed by covariance, a
 * Gaussian, with its digits where they weigh, for each datum that the coordinates may be in. The density holds the part
 * that a group shares as well as the independent part, so that it is true of the record by itself.
 */
export function placeCoordinates(candidates: readonly Candidate[], about: {
  readonly site: Site; readonly error: SourceError; readonly groupSdM: number; readonly digits: DigitKind;
} & Pick<Solution, 'kind' | 'said' | 'section'>): Solution {
  const { site, error, groupSdM, digits, kind, said, section } = about;
  const places = candidates.map(({ datum, weight, place, crs }) => ({ datum, weight, at: framePlace(digits === 'truncated' ? middleOfTruncated(place) : place, { crs, shift: site.shiftFrom(datum), frame: site.frame }) }));
  const partOf = (at: FramePlace, weight: number): GaussianPart => {
    const round = error.sdM ** 2 + at.sdM ** 2 + at.sharedSdM ** 2 + groupSdM ** 2 + MIN_SD_M ** 2;
    return gaussianWithDigits({ x: at.x, y: at.y, weight, cov: [round, 0, round] }, at.halfDigits);
  };
  const density: Density = { parts: places.map(({ weight, at }) => ({ ...partOf(at, weight), role: 'place' })) };
  const cov = densityCovariance(density);
  const only = places.length === 1 ? places[0]! : null;
  return {
    kind, said, section, parts: density.parts, ...densityMean(density), cov, sdM: Math.sqrt((cov[0] + cov[2]) / 2),
    datum: only?.datum ?? 'unknown',
    shift: places.map(({ datum, at, weight }) => (only ? at.shift : `${percent(weight)} ${datum}: ${at.shift}`)).join('; '),
    sharedSdM: only?.at.sharedSdM ?? 0,
    basis: [error.words, ...budgetWords(places[0]!.at, groupSdM)],
    notes: only ? [] : [`datum not stated, taken as ${places.map((each) => `${each.datum} ${percent(each.weight)}`).join(', ')}`],
  };
}

/** The other components in metres, one σ per axis. */
function budgetWords({ roundingEastM, roundingNorthM, sdM, sharedSdM }: FramePlace, groupSdM: number): string[] {
  const words: string[] = [];
  if (Math.max(roundingEastM, roundingNorthM) >= SAID_FROM_M) words.push(`digits ${metres(roundingNorthM)} north, ${metres(roundingEastM)} east`);
  if (sdM >= SAID_FROM_M) words.push(`datum shift ${metres(sdM)}`);
  if (sharedSdM >= SAID_FROM_M) words.push(`datum shift shared by neighbours ${metres(sharedSdM)}`);
  return [...words, ...groupWords(groupSdM)];
}

/** What the records of a group have in common, in words. */
export function groupWords(groupSdM: number): string[] {
  return groupSdM >= SAID_FROM_M ? [`shared by its group ${metres(groupSdM)}`] : [];
}

export function percent(share: number): string {
  return `${Number((share * 100).toFixed(1))} %`;
}
