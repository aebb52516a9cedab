/** How readings are reduced. Survey-file keys are the same words in snake_case. */
export interface ReduceOptions {
  /** `total_field`: as the sensor gave it. `anomaly`: main field and variation are already taken off. */
  readonly kind: 'total_field' | 'anomaly';
  /** Standard deviation of a recorded position on each axis, and the time over which it wanders. */
  readonly positionSdM: number;
  readonly positionCorrS: number;
  /** Time by which a recorded position is older than the reading beside it. */
  readonly positionLagS: number;
  /** Where the sensor is from the receiver's antenna, along the course and to the right of it. */
  readonly sensorForwardM: number;
  readonly sensorRightM: number;
  /** Speed from which times are made where a file has none; null leaves them unknown. */
  readonly speedMS: number | null;
  /** Ground above the ellipsoid, for the main field. */
  readonly groundHeightM: number;
  readonly despike: boolean;
  /** Two base readings farther apart than this have a gap between them. */
  readonly maxGapS: number;
  /** What becomes of readings in a gap: interpolated across it, or left out. */
  readonly baseGaps: 'interpolate' | 'leave_out';
  /** A gap longer than this is never interpolated. */
  readonly maxFillS: number;
  /** Take the heading effect off, where the lines let it be estimated. */
  readonly heading: boolean;
  /** Follow the slow drift of the field in time; by itself only where there is no base log. */
  readonly drift: 'auto' | 'always' | 'never';
  /** Window of the drift; null for one that suits the lines. */
  readonly driftWindowS: number | null;
  /** Width over which the regional field is taken; 0 for none, null for a width that suits the sensor's height. */
  readonly regionalM: number | null;
}

export const REDUCE_DEFAULTS: ReduceOptions = Object.freeze({
  kind: 'total_field',
  /** A code receiver with corrections, walked with (common practice). */
  positionSdM: 0.5,
  /** Errors of such a receiver wander over about a minute (common practice). */
  positionCorrS: 60,
  positionLagS: 0,
  sensorForwardM: 0,
  sensorRightM: 0,
  speedMS: null,
  groundHeightM: 0,
  despike: true,
  /** Twenty base readings of the usual 3 s: pulsations of half a minute pass unseen in a longer gap. */
  maxGapS: 60,
  baseGaps: 'interpolate',
  /** The daily wave bends by a few tenths of a nT in a quarter of an hour. */
  maxFillS: 900,
  heading: true,
  drift: 'auto',
  driftWindowS: null,
  regionalM: null,
});
