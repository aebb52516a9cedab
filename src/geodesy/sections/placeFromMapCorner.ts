import geographiclib from 'geographiclib-geodesic';
import { UserError } from '../../errors.js';
import { metresPerDegree, type Ellipsoid } from '../ellipsoid.js';

/** Distances from the corner of a map, metres; at most one of each pair, absent for none. */
export interface CornerOffsets {
  readonly northM?: number;
  readonly southM?: number;
  readonly eastM?: number;
  readonly westM?: number;
}

export interface MapCornerPlace {
  /** On the datum of the map. */
  readonly lonDeg: number;
  readonly latDeg: number;
  /** How far the place would lie off if the distances were laid off in another way that can be meant, metres on each axis: see `placeFromMapCorner`. */
  readonly readingEastM: number;
  readonly readingNorthM: number;
}

/** The sides of a 15-minute map are up to 28 km long; nobody measures across more than one. */
const MAX_DISTANCE_M = 30_000;
const RAD = Math.PI / 180;

/**
 * The place at distances from a parallel and a meridian of a map: `5,400' S of 39°22'30", 6,100' W of 80°15'00"`. On
 * the ellipsoid of the map's datum: first along the meridian (a geodesic), then along the parallel of the place itself.
 * Two other ways can be meant. East and west along the parallel of the corner: the place moves by s·d·tan φ/R along the
 * parallel (1.3 ft for the example). East and west along a straight line square to the meridian: it moves by s²·tan φ/2R
 * towards the equator (0.7 ft). Both are returned; against the width of a pencil line, 40 ft at 1:24,000, they are small.
 * The paper's shrinkage and the map's projection are left out.
 *
 * Throws UserError `position_invalid` for a corner or distances that are none.
 */
export function placeFromMapCorner(
  corner: { readonly lonDeg: number; readonly latDeg: number },
  offsets: CornerOffsets,
  { ellipsoid, where }: { readonly ellipsoid: Ellipsoid; readonly where: string },
): MapCornerPlace {
  const { lonDeg, latDeg } = corner;
  if (!(Math.abs(latDeg) < 85) || !(Math.abs(lonDeg) <= 360)) throw invalid(where, `a map corner at ${latDeg}, ${lonDeg}`, 'latitude and longitude in degrees');
  const north = signed(offsets.northM, offsets.southM, ['north', 'south'], where);
  const east = signed(offsets.eastM, offsets.westM, ['east', 'west'], where);
  const geodesic = new geographiclib.Geodesic.Geodesic(ellipsoid.a, 1 / ellipsoid.inverseFlattening);
  const lat = geodesic.Direct(latDeg, lonDeg, north < 0 ? 180 : 0, Math.abs(north)).lat2!;
  const perDegree = metresPerDegree(ellipsoid, lat).lonM;
  const cornerDegree = metresPerDegree(ellipsoid, latDeg).lonM;
  return {
    lonDeg: lonDeg + east / perDegree,
    latDeg: lat,
    readingEastM: Math.abs(east * (perDegree / cornerDegree - 1)),
    readingNorthM: Math.abs((east * east * Math.sin(lat * RAD)) / (2 * perDegree / RAD)),
  };
}

function signed(plus: number | undefined, minus: number | undefined, [up, down]: readonly [string, string], where: string): number {
  if (plus !== undefined && minus !== undefined) throw invalid(where, `distances both ${up} and ${down}`, 'one of them');
  const distance = plus ?? minus ?? 0;
  if (!(distance >= 0) || distance > MAX_DISTANCE_M) {
    throw invalid(where, `${distance} m ${plus === undefined ? down : up} of a map corner`, `a distance from 0 to ${MAX_DISTANCE_M} m, the length of a 15-minute map`);
  }
  return plus === undefined ? -distance || 0 : distance;
}

function invalid(where: string, found: string, wanted: string): UserError {
  return new UserError({ code: 'position_invalid', where, found, wanted });
}
