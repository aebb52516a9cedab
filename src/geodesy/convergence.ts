import { ELLIPSOIDS, metresPerDegree } from './ellipsoid.js';
import type { Crs } from './types.js';

/**
 * Half a step of the central difference, degrees: 1e-3 leaves a truncation of 1e-10 of the value and, with projections
 * good to a nanometre over 200 m, a rounding below 1e-9.
 */
const STEP_DEG = 1e-3;
const DEG = 180 / Math.PI;

/**
 * Grid convergence γ in degrees at an easting and northing in metres: the angle from true north to grid north, positive
 * where grid north lies east of true north; a true azimuth less γ is a grid azimuth. 0 for a geographic system. By
 * central difference along the meridian, within 1e-6°. Throws as `crs.inverse` does; at a pole it has no meaning.
 */
export function convergenceDeg(crs: Crs, eastM: number, northM: number): number {
  if (crs.kind === 'geographic') return 0;
  const { dx, dy } = northward(crs, eastM, northM);
  // Grid north seen from true north turns against true north seen from grid north.
  return -Math.atan2(dx, dy) * DEG || 0;
}

/**
 * Point scale k: metres on the grid for one metre on the ellipsoid there, northward (the same in every direction for a
 * conformal system; EPSG:3857 is not quite one). Within 1e-8. 1 for a geographic system.
 */
export function pointScale(crs: Crs, eastM: number, northM: number): number {
  if (crs.kind === 'geographic') return 1;
  const { dx, dy, latDeg } = northward(crs, eastM, northM);
  return Math.hypot(dx, dy) / (2 * STEP_DEG * metresPerDegree(ELLIPSOIDS[crs.datum], latDeg).latM);
}

function northward(crs: Crs, eastM: number, northM: number): { dx: number; dy: number; latDeg: number } {
  const [lonDeg, latDeg] = crs.inverse(eastM, northM);
  const [x0, y0] = crs.forward(lonDeg, latDeg - STEP_DEG);
  const [x1, y1] = crs.forward(lonDeg, latDeg + STEP_DEG);
  return { dx: x1 - x0, dy: y1 - y0, latDeg };
}
