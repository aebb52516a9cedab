import { NT_PER_POLE, type Vector3 } from './pole.js';

/**
 * Adds to `b` the field of a dipole, B = 100 (3(m·r̂)r̂ − m)/|r|³ nT.
 *
 * @param b Easting, northing, up, nT; changed in place.
 * @param mx, my, mz Moment, A·m².
 * @param rx, ry, rz From the dipole to the sensor, metres. At the dipole itself the field is not a number.
 *
 * Source: Blakely (1995), Potential Theory in Gravity and Magnetic Applications, ch. 4.
 */
export function addDipole(b: Vector3, mx: number, my: number, mz: number, rx: number, ry: number, rz: number): void {
  const r2 = rx * rx + ry * ry + rz * rz;
  const k = NT_PER_POLE / (r2 * Math.sqrt(r2));
  const along = (3 * (mx * rx + my * ry + mz * rz)) / r2;
  b[0]! += k * (along * rx - mx);
  b[1]! += k * (along * ry - my);
  b[2]! += k * (along * rz - mz);
}
