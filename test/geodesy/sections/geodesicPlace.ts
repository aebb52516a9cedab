import geographiclib from 'geographiclib-geodesic';

/** GRS 1980, the ellipsoid of NAD83. */
const GEODESIC = new geographiclib.Geodesic.Geodesic(6378137, 1 / 298.257222101);
const RAD = Math.PI / 180;

export type LonLat = readonly [lonDeg: number, latDeg: number];

export function geodesicM(a: LonLat, b: LonLat): number {
  return GEODESIC.Inverse(a[1], a[0], b[1], b[0]).s12!;
}

export function geodesicAzimuthDeg(a: LonLat, b: LonLat): number {
  return GEODESIC.Inverse(a[1], a[0], b[1], b[0]).azi1!;
}

export function geodesicFrom([lon, lat]: LonLat, azimuthDeg: number, distanceM: number): LonLat {
  const to = GEODESIC.Direct(lat, lon, azimuthDeg, distanceM);
  return [to.lon2!, to.lat2!];
}

/** Foot of the perpendicular from a place to the geodesic through two points, by geodesics alone. */
function foot(a: LonLat, b: LonLat, place: LonLat): { distanceM: number; azimuthDeg: number; along: number } {
  const line = GEODESIC.Inverse(a[1], a[0], b[1], b[0]);
  let station = line.s12! / 2;
  for (let round = 0; round < 20; round++) {
    const at = GEODESIC.Direct(a[1], a[0], line.azi1!, station);
    const to = GEODESIC.Inverse(at.lat2!, at.lon2!, place[1], place[0]);
    const ahead = to.s12! * Math.cos((to.azi1! - at.azi2!) * RAD);
    station += ahead;
    if (Math.abs(ahead) < 1e-7) return { distanceM: to.s12!, azimuthDeg: to.azi1!, along: station / line.s12! };
  }
  throw new Error('no foot');
}

/** Perpendicular distance from a bent line and the azimuth from its foot, the nearest piece counting, the end pieces produced. */
export function geodesicDistance(line: readonly LonLat[], place: LonLat): { distanceM: number; azimuthDeg: number } {
  let best = { distanceM: Infinity, azimuthDeg: NaN };
  for (let i = 0; i < line.length - 1; i++) {
    const f = foot(line[i]!, line[i + 1]!, place);
    const on = (f.along >= 0 || i === 0) && (f.along <= 1 || i === line.length - 2);
    const bend = f.along < 0 ? line[i]! : line[i + 1]!;
    const candidate = on ? f : { distanceM: geodesicM(bend, place), azimuthDeg: GEODESIC.Inverse(bend[1], bend[0], place[1], place[0]).azi1! };
    if (candidate.distanceM < best.distanceM) best = candidate;
  }
  return best;
}

/**
 * The place at two geodesic distances from two bent lines: from a start inside, it is moved in turn along the
 * perpendicular of each line until both distances hold. No plane and no projection has a part in it.
 */
export function geodesicPlace(lines: readonly [readonly LonLat[], readonly LonLat[]], distancesM: readonly [number, number], start: LonLat): LonLat {
  let place = start;
  for (let round = 0; round < 60; round++) {
    let worst = 0;
    for (const i of [0, 1] as const) {
      const { distanceM, azimuthDeg } = geodesicDistance(lines[i], place);
      const miss = distancesM[i] - distanceM;
      worst = Math.max(worst, Math.abs(miss));
      place = geodesicFrom(place, azimuthDeg, miss);
    }
    if (worst < 1e-5) return place;
  }
  throw new Error('no place');
}
