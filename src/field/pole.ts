/** A field as a vector in nT: easting, northing, up. */
export type Vector3 = Float64Array | number[];

/** µ0/4π in nT·m/A: a pole of 1 A·m makes 100 nT at 1 m (SI, µ0 = 4π·10⁻⁷ to 1 part in 10⁹). */
export const NT_PER_POLE = 100;

/**
 * Adds to `b` the field of a pole, B = 100 m r/|r|³ nT.
 *
 * @param b Easting, northing, up, nT; changed in place.
 * @param m Pole strength, A·m, physics sign: a casing's top that attracts has m < 0.
 * @param rx, ry, rz From the pole to the sensor, metres. At the pole itself the field is not a number.
 *
 * Source: Blakely (1995), Potential Theory in Gravity and Magnetic Applications, ch. 4.
 */
export function addPole(b: Vector3, m: number, rx: number, ry: number, rz: number): void {
  const r2 = rx * rx + ry * ry + rz * rz;
  const k = (NT_PER_POLE * m) / (r2 * Math.sqrt(r2));
  b[0]! += k * rx;
  b[1]! += k * ry;
  b[2]! += k * rz;
}

/**
 * Adds to `b` the field of a vertical pipe: the pole `topAM` (A·m, physics sign) at its top and the opposite one
 * `lengthM` below it.
 *
 * @param rx, ry, rz From the top of the pipe to the sensor, metres.
 *
 * Source: USGS Open-File Report 83-702 (casings modelled as pairs of poles).
 */
export function addVerticalPipe(b: Vector3, pipe: { readonly topAM: number; readonly lengthM: number }, r: readonly [number, number, number]): void {
  addPole(b, pipe.topAM, r[0], r[1], r[2]);
  addPole(b, -pipe.topAM, r[0], r[1], r[2] + pipe.lengthM);
}
