import proj4 from 'proj4';
import { UserError } from '../errors.js';
import { ELLIPSOIDS } from './ellipsoid.js';
import type { RegistryRow } from './registryRows.js';

/** Metres and degrees in and out; throws UserError `position_invalid` rather than return anything that is not finite. */
export interface Projection {
  forward(lonDeg: number, latDeg: number): [number, number];
  inverse(eastM: number, northM: number): [number, number];
}

const RAD = Math.PI / 180;

/** The object that proj4 works with underneath its datum and unit handling: radians and metres. */
interface Kernel {
  forward(point: { x: number; y: number }): { x: number; y: number };
  inverse(point: { x: number; y: number }): { x: number; y: number };
}

/**
 * Builds the projection of a registry row. Only the kernel of proj4 is used: its words for datum, ellipsoid and unit
 * are ignored without notice when it does not know them, so axes are given as numbers and units never reach it.
 */
export function buildProjection(row: RegistryRow): Projection {
  const where = `EPSG:${row.epsg}`;
  if (row.method === 'longlat') return { forward: (lon, lat) => checkedDegrees(where, lon, lat), inverse: (lon, lat) => checkedDegrees(where, lon, lat) };
  const kernel = new proj4.Proj(projString(row)) as unknown as Kernel;
  return {
    forward(lonDeg, latDeg) {
      checkedDegrees(where, lonDeg, latDeg);
      const { x, y } = guarded(() => kernel.forward({ x: lonDeg * RAD, y: latDeg * RAD }));
      if (!(Math.abs(x) <= FARTHEST_M && Math.abs(y) <= FARTHEST_M)) throw unprojectable(where, `longitude ${lonDeg}, latitude ${latDeg}`);
      return [x, y];
    },
    inverse(eastM, northM) {
      const { x, y } = Number.isFinite(eastM) && Number.isFinite(northM) ? guarded(() => kernel.inverse({ x: eastM, y: northM })) : OUTSIDE;
      const lon = x / RAD;
      const lat = y / RAD;
      if (!(Math.abs(lon) <= 360 && Math.abs(lat) <= LATITUDE_LIMIT)) throw unprojectable(where, `easting ${eastM} m, northing ${northM} m`);
      return [lon, lat];
    },
  };
}

/** Over twice the earth's circumference: only a point that a projection throws to infinity (a cone's far pole) lies beyond. */
const FARTHEST_M = 1e8;
/** 90° with room for rounding at a pole. */
const LATITUDE_LIMIT = 90 + 1e-9;
const OUTSIDE = { x: NaN, y: NaN };

/** A kernel that throws outside its reach is the same to us as one that returns NaN there. */
function guarded(project: () => { x: number; y: number }): { x: number; y: number } {
  try {
    return project() ?? OUTSIDE;
  } catch {
    return OUTSIDE;
  }
}

function checkedDegrees(where: string, lonDeg: number, latDeg: number): [number, number] {
  if (!(Math.abs(lonDeg) <= 360 && Math.abs(latDeg) <= LATITUDE_LIMIT)) throw unprojectable(where, `longitude ${lonDeg}, latitude ${latDeg}`);
  return [lonDeg, latDeg];
}

function unprojectable(where: string, found: string): UserError {
  return new UserError({
    code: 'position_invalid', where, found, wanted: 'a place that this coordinate system can express',
    advice: 'check the order of the columns, the unit and the zone',
  });
}

function projString({ method, parameters, datum }: RegistryRow): string {
  const { a, b } = ELLIPSOIDS[datum];
  // EPSG:3857 takes geographic coordinates on the ellipsoid as if they were on a sphere (EPSG method 1024).
  if (method === 'webmerc') return `+proj=merc +a=${a} +b=${a} +lat_ts=0 +lon_0=0 +x_0=0 +y_0=0 +k=1 +no_defs`;
  const words = Object.entries(parameters).map(([name, value]) => (FLAGS.has(name) ? `+${name}` : `+${name}=${value}`));
  return [`+proj=${method}`, ...words, `+a=${a}`, `+b=${b}`, '+no_defs'].join(' ');
}

const FLAGS = new Set(['south', 'no_uoff']);
