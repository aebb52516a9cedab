import type { Datum } from './types.js';

export interface Ellipsoid {
  readonly name: 'Clarke 1866' | 'GRS 1980' | 'WGS 84';
  /** Semi-major axis, metres. */
  readonly a: number;
  /** 1/f, as EPSG and WKT state it. */
  readonly inverseFlattening: number;
  /** Semi-minor axis, metres. */
  readonly b: number;
}

/** Clarke 1866 is defined by its two axes, the others by axis and flattening. Source: EPSG ellipsoids 7008, 7019, 7030. */
const CLARKE_1866: Ellipsoid = { name: 'Clarke 1866', a: 6378206.4, b: 6356583.8, inverseFlattening: 6378206.4 / (6378206.4 - 6356583.8) };
const GRS_1980 = flattened('GRS 1980', 6378137, 298.257222101);
const WGS_84 = flattened('WGS 84', 6378137, 298.257223563);

export const ELLIPSOIDS: Readonly<Record<Datum, Ellipsoid>> = {
  NAD27: CLARKE_1866,
  NAD83: GRS_1980,
  'NAD83(2011)': GRS_1980,
  'WGS 84': WGS_84,
};

function flattened(name: Ellipsoid['name'], a: number, inverseFlattening: number): Ellipsoid {
  return { name, a, inverseFlattening, b: a * (1 - 1 / inverseFlattening) };
}

const RAD = Math.PI / 180;

/** Longitude and latitude in degrees, at height 0, to earth-centred X, Y, Z in metres. Source: EPSG Guidance Note 7-2, method 9602. */
export function toGeocentric(ellipsoid: Ellipsoid, lonDeg: number, latDeg: number): [number, number, number] {
  const { a, b } = ellipsoid;
  const e2 = 1 - (b / a) ** 2;
  const sinLat = Math.sin(latDeg * RAD);
  const cosLat = Math.cos(latDeg * RAD);
  const n = a / Math.sqrt(1 - e2 * sinLat * sinLat);
  return [n * cosLat * Math.cos(lonDeg * RAD), n * cosLat * Math.sin(lonDeg * RAD), n * (1 - e2) * sinLat];
}

/** Bowring's start is within 1e-11 rad for points near the ground; two repeats bring it to rounding. */
const LATITUDE_ROUNDS = 3;

/** Earth-centred metres to longitude and latitude in degrees; the height is dropped. Source: Bowring 1976, repeated. */
export function fromGeocentric(ellipsoid: Ellipsoid, x: number, y: number, z: number): [number, number] {
  const { a, b } = ellipsoid;
  const e2 = 1 - (b / a) ** 2;
  const second = (a / b) ** 2 - 1;
  const p = Math.hypot(x, y);
  let reduced = Math.atan2(z * a, p * b);
  let lat = 0;
  for (let round = 0; round < LATITUDE_ROUNDS; round++) {
    lat = Math.atan2(z + second * b * Math.sin(reduced) ** 3, p - e2 * a * Math.cos(reduced) ** 3);
    reduced = Math.atan2(b * Math.sin(lat), a * Math.cos(lat));
  }
  return [Math.atan2(y, x) / RAD, lat / RAD];
}

/** Metres on the ground in one degree of longitude and of latitude there. */
export function metresPerDegree(ellipsoid: Ellipsoid, latDeg: number): { lonM: number; latM: number } {
  const { a, b } = ellipsoid;
  const e2 = 1 - (b / a) ** 2;
  const w2 = 1 - e2 * Math.sin(latDeg * RAD) ** 2;
  return { lonM: (a / Math.sqrt(w2)) * Math.cos(latDeg * RAD) * RAD, latM: ((a * (1 - e2)) / w2 ** 1.5) * RAD };
}
