/** The main field at one place and date, in the survey's frame. */
export interface MainField {
  readonly totalNT: number;
  /** Positive down. */
  readonly inclinationDeg: number;
  /** From true north, positive east. */
  readonly declinationDeg: number;
  /** Grid convergence: grid north seen from true north, positive east; direction in the frame is declination less this. */
  readonly convergenceDeg: number;
  /** Unit vector of the field in the frame: easting, northing, up. */
  readonly unit: readonly [number, number, number];
}
