import geodesic from 'geographiclib-geodesic';
import { UserError } from '../errors.js';
import type { Crs } from '../geodesy/types.js';
import { FOOT_M } from '../units.js';
import type { RawPlace } from './rawRecord.js';

/** A slip that explains a place far from the parcel, and where the place would then be. */
export interface Slip {
  readonly kind: 'longitude_sign' | 'latitude_sign' | 'swapped' | 'swapped_sign' | 'metres' | 'feet';
  /** As it is put in a sentence: "with … it would lie …". */
  readonly words: string;
  /** From the parcel's centre, metres. */
  readonly distanceM: number;
}

/** Geodesic distance on WGS 84 between two places, metres; the ellipsoid's choice matters by metres, not more. */
export function geodesicM(a: readonly [lonDeg: number, latDeg: number], b: readonly [lonDeg: number, latDeg: number]): number {
  return geodesic.Geodesic.WGS84.Inverse(a[1], a[0], b[1], b[0]).s12!;
}

/**
 * The slip of the pen that brings the place nearest to `centre` (longitude, latitude of the parcel's middle, degrees), if
 * that is within `limitM`; null where none does. `crs` is the CRS of projected coordinates.
 */
export function likelySlip(place: RawPlace, centre: readonly [number, number], options: { readonly crs: Crs | null; readonly limitM: number }): Slip | null {
  const slips = place.kind === 'angles' ? angleSlips(place) : projectedSlips(place, options.crs!);
  let best: Slip | null = null;
  for (const { kind, words, lon, lat } of slips) {
    if (!(Math.abs(lat) <= 90 && Math.abs(lon) <= 180)) continue;
    const distanceM = geodesicM([lon, lat], centre);
    if (distanceM <= options.limitM && (best === null || distanceM < best.distanceM)) best = { kind, words, distanceM };
  }
  return best;
}

type Candidate = Pick<Slip, 'kind' | 'words'> & { readonly lon: number; readonly lat: number };

function angleSlips({ lonDeg: lon, latDeg: lat }: Extract<RawPlace, { kind: 'angles' }>): Candidate[] {
  return [
    { kind: 'longitude_sign', words: 'the sign of the longitude changed', lon: -lon, lat },
    { kind: 'latitude_sign', words: 'the sign of the latitude changed', lon, lat: -lat },
    { kind: 'swapped', words: 'latitude and longitude swapped', lon: lat, lat: lon },
    { kind: 'swapped_sign', words: 'latitude and longitude swapped and the sign of the longitude changed', lon: -lat, lat: lon },
  ];
}

function projectedSlips({ eastM: e, northM: n }: Extract<RawPlace, { kind: 'projected' }>, crs: Crs): Candidate[] {
  const foot = crs.unit === 'metre' ? FOOT_M : crs.metresPerUnit;
  const tries: Array<Pick<Slip, 'kind' | 'words'> & { east: number; north: number }> = [
    { kind: 'swapped', words: 'easting and northing swapped', east: n, north: e },
    crs.unit === 'metre'
      ? { kind: 'feet', words: 'the numbers read as feet', east: e * foot, north: n * foot }
      : { kind: 'metres', words: 'the numbers read as metres', east: e / foot, north: n / foot },
  ];
  return tries.flatMap(({ kind, words, east, north }) => {
    const place = inverseOrNull(crs, east, north);
    return place === null ? [] : [{ kind, words, lon: place[0], lat: place[1] }];
  });
}

/** Longitude and latitude, or null where the CRS has no such place. */
export function inverseOrNull(crs: Crs, eastM: number, northM: number): [lonDeg: number, latDeg: number] | null {
  try {
    return crs.inverse(eastM, northM);
  } catch (error) {
    if (error instanceof UserError) return null;
    throw error;
  }
}
