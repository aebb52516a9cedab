import { ELLIPSOIDS, fromGeocentric, toGeocentric } from '../ellipsoid.js';
import type { Crs } from '../types.js';
import type { GroundPlane } from './types.js';

const RAD = Math.PI / 180;
/** Half a step of the central difference that gives the Jacobian, metres: as far as a section reaches. */
const STEP_M = 800;

/**
 * A plane of true ground metres about a place of the frame, so that distances do not depend on the frame's scale: the
 * tangent plane of the ellipsoid, east and north. Within 2 km of the middle it shortens a distance by less than 5e-8 of
 * itself (0.0003 ft in a mile), r²/2R² at a distance r. Heights are left out: at a height h a line on the ground is
 * longer than on the ellipsoid by h/R, 0.25 ft a mile for each 300 m.
 * Source: EPSG Guidance Note 7-2, methods 9602 and 9837 (geocentric/topocentric), with the upward coordinate dropped.
 */
export function groundPlane(crs: Crs, x: number, y: number): GroundPlane {
  const ellipsoid = ELLIPSOIDS[crs.datum];
  const [lonDeg, latDeg] = crs.inverse(x, y);
  const origin = toGeocentric(ellipsoid, lonDeg, latDeg);
  const [sinLon, cosLon, sinLat, cosLat] = [Math.sin(lonDeg * RAD), Math.cos(lonDeg * RAD), Math.sin(latDeg * RAD), Math.cos(latDeg * RAD)];

  const toPlane = (px: number, py: number): [number, number] => {
    const [lon, lat] = crs.inverse(px, py);
    const [gx, gy, gz] = toGeocentric(ellipsoid, lon, lat);
    const [dx, dy, dz] = [gx - origin[0], gy - origin[1], gz - origin[2]];
    return [cosLon * dy - sinLon * dx, cosLat * dz - sinLat * (cosLon * dx + sinLon * dy)];
  };
  const toFrame = (east: number, north: number): [number, number] => {
    // The ellipsoid falls away by r²/2R; a miss of a millimetre there moves the place by less than a micrometre.
    const up = -(east * east + north * north) / (2 * ellipsoid.a);
    const outward = cosLat * up - sinLat * north;
    const [lon, lat] = fromGeocentric(
      ellipsoid,
      origin[0] + cosLon * outward - sinLon * east,
      origin[1] + sinLon * outward + cosLon * east,
      origin[2] + cosLat * north + sinLat * up,
    );
    return crs.forward(lon, lat);
  };
  const [ex0, ey0] = toFrame(-STEP_M, 0);
  const [ex1, ey1] = toFrame(STEP_M, 0);
  const [nx0, ny0] = toFrame(0, -STEP_M);
  const [nx1, ny1] = toFrame(0, STEP_M);
  const step = 2 * STEP_M;
  return { crs, toPlane, toFrame, jacobian: [(ex1 - ex0) / step, (nx1 - nx0) / step, (ey1 - ey0) / step, (ny1 - ny0) / step] };
}
