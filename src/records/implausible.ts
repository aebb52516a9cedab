import geodesic from 'geographiclib-geodesic';
import { UserError } from '../errors.js';
import { crs as crsOf } from '../geodesy/crs.js';
import type { Crs } from '../geodesy/types.js';
import { FOOT_M } from '../units.js';
import type { RawPlace } from './rawRecord.js';
import type { RepairKind } from './repairKinds.js';

/** A slip that explains a place far from the parcel, and where the place would then be. */
export interface Slip {
  readonly kind: Exclude<RepairKind, 'range_side'>;
  /** As it is put in a sentence: "with … it would lie …". */
  readonly words: string;
  /** From the parcel's centre, metres. */
  readonly distanceM: number;
  /** The coordinates without the slip, and their CRS. */
  readonly place: RawPlace;
  readonly crs: Crs | null;
}

/** Geodesic distance on WGS 84 between two places, metres; the ellipsoid's choice matters by metres, not more. */
export function geodesicM(a: readonly [lonDeg: number, latDeg: number], b: readonly [lonDeg: number, latDeg: number]): number {
  return geodesic.Geodesic.WGS84.Inverse(a[1], a[0], b[1], b[0]).s12!;
}

/**
 * Slips of the pen that bring a place to within `limitM` of `centre` (longitude, latitude of the parcel's middle, degrees),
 * the nearest first. `crs` is the CRS of projected coordinates, `unitM` the unit that they are written in (metres) where it is not
 * the CRS's.
 */
export function likelySlips(place: RawPlace, centre: readonly [number, number], options: { readonly crs: Crs | null; readonly limitM: number; readonly unitM?: number }): Slip[] {
  const tries = place.kind === 'angles' ? angleSlips(place) : projectedSlips(place, options.crs!, options.unitM ?? options.crs!.metresPerUnit);
  return tries.flatMap((each): Slip[] => {
    const lonLat = each.place.kind === 'angles' ? [each.place.lonDeg, each.place.latDeg] as const : inverseOrNull(each.crs!, each.place.eastM, each.place.northM);
    if (lonLat === null || !(Math.abs(lonLat[1]) <= 90 && Math.abs(lonLat[0]) <= 180)) return [];
    const distanceM = geodesicM(lonLat, centre);
    return distanceM <= options.limitM ? [{ ...each, distanceM }] : [];
  }).toSorted((a, b) => a.distanceM - b.distanceM);
}

type Try = Omit<Slip, 'distanceM'>;

function angleSlips(place: Extract<RawPlace, { kind: 'angles' }>): Try[] {
  const { lonDeg: lon, latDeg: lat, lonResolutionDeg, latResolutionDeg } = place;
  const turned = { kind: 'angles', lonResolutionDeg: latResolutionDeg, latResolutionDeg: lonResolutionDeg } as const;
  return [
    { kind: 'longitude_sign', words: 'the sign of the longitude changed', place: { ...place, lonDeg: -lon }, crs: null },
    { kind: 'latitude_sign', words: 'the sign of the latitude changed', place: { ...place, latDeg: -lat }, crs: null },
    { kind: 'swapped', words: 'latitude and longitude swapped', place: { ...turned, lonDeg: lat, latDeg: lon }, crs: null },
    { kind: 'swapped_sign', words: 'latitude and longitude swapped and the sign of the longitude changed', place: { ...turned, lonDeg: -lat, latDeg: lon }, crs: null },
  ];
}

function projectedSlips(place: Extract<RawPlace, { kind: 'projected' }>, crs: Crs, unitM: number): Try[] {
  const { eastM, northM, eastResolutionM, northResolutionM } = place;
  const foot = unitM === 1 ? FOOT_M : unitM;
  const scaled = (by: number): RawPlace => ({
    kind: 'projected', eastM: eastM * by, northM: northM * by, eastResolutionM: eastResolutionM * by, northResolutionM: northResolutionM * by,
  });
  return [
    {
      kind: 'swapped', words: 'easting and northing swapped', crs,
      place: { kind: 'projected', eastM: northM, northM: eastM, eastResolutionM: northResolutionM, northResolutionM: eastResolutionM },
    },
    unitM === 1
      ? { kind: 'feet', words: 'the numbers read as feet', place: scaled(foot), crs }
      : { kind: 'metres', words: 'the numbers read as metres', place: scaled(1 / foot), crs },
    ...neighbourZones(crs).map(({ zone, crs: other }): Try => ({ kind: 'utm_zone', words: `the numbers read in UTM zone ${zone}`, place, crs: other })),
  ];
}

/** The zones to the west and east of a UTM zone, on its datum. EPSG numbers the zones of a datum in their order. */
function neighbourZones(crs: Crs): Array<{ zone: number; crs: Crs }> {
  const name = /^(.*UTM zone )(\d+)N/.exec(crs.name);
  if (!name) return [];
  return [-1, 1].flatMap((step) => {
    const other = crsOrNull(crs.epsg + step);
    const zone = Number(name[2]) + step;
    return other?.datum === crs.datum && other.name.startsWith(`${name[1]!}${zone}N`) ? [{ zone, crs: other }] : [];
  });
}

function crsOrNull(code: number): Crs | null {
  try {
    return crsOf(code);
  } catch (error) {
    if (error instanceof UserError) return null;
    throw error;
  }
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
