import geographiclib from 'geographiclib-geodesic';
import type { Bounds, Crs } from './types.js';

/** EPSG gives its areas to a hundredth of a degree; what lies within half of that is inside. */
const AREA_ROUNDING_KM = 0.6;

/**
 * A sentence where the place (degrees, on the CRS's datum) lies outside the area of use that EPSG states for the CRS,
 * with the distance in km to its edge; null inside, and for what is not a place (NaN, a latitude
 * beyond a pole), which the projection refuses.
 */
export function areaOfUseWarning(crs: Crs, lonDeg: number, latDeg: number): string | null {
  if (!Number.isFinite(lonDeg) || !(Math.abs(latDeg) <= 90)) return null;
  const km = kmOutside(crs.areaOfUse, lonDeg, latDeg);
  if (km < AREA_ROUNDING_KM) return null;
  const { west, south, east, north } = crs.areaOfUse;
  return `the place at longitude ${lonDeg.toFixed(4)}, latitude ${latDeg.toFixed(4)} lies ${km < 10 ? km.toFixed(1) : Math.round(km)} km outside the area of use of ` +
    `${crs.code} ${crs.name} (longitude ${west} to ${east}, latitude ${south} to ${north})`;
}

/** Golden-section rounds: a side of 360° is brought to 1e-6°. */
const SEARCH_ROUNDS = 45;
const GOLDEN = (Math.sqrt(5) - 1) / 2;

/** Geodesic distance in km to the nearest point of the area; 0 inside. Source: Karney 2013. */
function kmOutside({ west, south, east, north }: Bounds, lonDeg: number, latDeg: number): number {
  const width = east >= west ? east - west : east - west + 360;
  const lon = (((lonDeg - west) % 360) + 360) % 360;
  if (lon <= width && latDeg >= south && latDeg <= north) return 0;
  const km = (x: number, y: number): number => geographiclib.Geodesic.WGS84.Inverse(latDeg, lonDeg, y, west + x).s12! / 1000;
  // The nearest point lies on one of the four sides.
  const near = lon <= width ? [lon] : [];
  return Math.min(
    along(south, north, (lat) => km(0, lat)), along(south, north, (lat) => km(width, lat)),
    ...[south, north].flatMap((lat) => [0, width, ...near].map((x) => km(x, lat))),
    ...[south, north].map((lat) => along(0, width, (x) => km(x, lat))),
  );
}

/** Least value of a function that has one minimum between `from` and `to`. */
function along(from: number, to: number, at: (t: number) => number): number {
  let [a, b] = [from, to];
  for (let round = 0; round < SEARCH_ROUNDS; round++) {
    const [left, right] = [b - GOLDEN * (b - a), a + GOLDEN * (b - a)];
    if (at(left) < at(right)) b = right;
    else a = left;
  }
  return Math.min(at((a + b) / 2), at(from), at(to));
}
