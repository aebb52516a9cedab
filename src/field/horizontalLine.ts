import { NT_PER_POLE, addPole, type Vector3 } from './pole.js';

/** A straight horizontal line of equal dipoles: a pipe, cable or fence far from its joints. */
export interface HorizontalLine {
  /** Direction, clockwise from grid north. */
  readonly azimuthDeg: number;
  /** Half its length, metres; Infinity for a line without ends. */
  readonly halfLengthM: number;
  /** Moment per metre of line, A·m: easting, northing, up. */
  readonly momentPerM: readonly [number, number, number];
}

/**
 * Adds to `b` the field of a horizontal line of dipoles, nT, in closed form.
 *
 * @param r From the middle of the line (any point of it, where it has no ends) to the sensor, metres: easting, northing,
 *   up. On the line itself the field is not a number. Moment along a line without ends makes no field.
 *
 * Source: the integral of the dipole field along the line; without ends it is 200 (2(m·p̂)p̂ − m)/|p|² nT with p
 * perpendicular to the line (Blakely 1995, ch. 5, line of dipoles).
 */
export function addHorizontalLine(b: Vector3, line: HorizontalLine, r: readonly [number, number, number]): void {
  const azimuth = (line.azimuthDeg * Math.PI) / 180;
  const ux = Math.sin(azimuth);
  const uy = Math.cos(azimuth);
  const [mx, my, mz] = line.momentPerM;
  const along = r[0] * ux + r[1] * uy;
  const px = r[0] - along * ux;
  const py = r[1] - along * uy;
  const pz = r[2];
  const q = px * px + py * py + pz * pz;
  const mAlong = mx * ux + my * uy;
  const ax = mx - mAlong * ux;
  const ay = my - mAlong * uy;
  const across = ax * px + ay * py + mz * pz;

  // The line of unit poles has the field p·A + u·C; a line of dipoles is minus its derivative along the moment.
  // `slopeA`, `slopeC` are derivatives with respect to q = |p|².
  let A = 2 / q;
  let slopeA = -2 / (q * q);
  let slopeC = 0;
  if (Number.isFinite(line.halfLengthM)) {
    A = 0;
    slopeA = 0;
    for (const sign of [1, -1]) {
      const v = along + sign * line.halfLengthM;
      const s = Math.sqrt(q + v * v);
      A += (sign * v) / (q * s);
      slopeA -= sign * (v / (q * q * s) + v / (2 * q * s * s * s));
      slopeC += sign / (2 * s * s * s);
    }
    // Moment along the line leaves a pole at either end.
    const half = line.halfLengthM;
    addPole(b, mAlong, r[0] - half * ux, r[1] - half * uy, r[2]);
    addPole(b, -mAlong, r[0] + half * ux, r[1] + half * uy, r[2]);
  }
  b[0]! -= NT_PER_POLE * (A * ax + 2 * across * (slopeA * px + slopeC * ux));
  b[1]! -= NT_PER_POLE * (A * ay + 2 * across * (slopeA * py + slopeC * uy));
  b[2]! -= NT_PER_POLE * (A * mz + 2 * across * slopeA * pz);
}
