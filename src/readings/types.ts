/** Why a reading is not used; 0 is a good reading. Written to the `flag` column in words. */
export const FLAGS = ['', 'dropout', 'spike', 'base_gap', 'out_of_range', 'no_position', 'repeat_time'] as const;
export type FlagCode = 0 | 1 | 2 | 3 | 4 | 5 | 6;

/** A step of reduction: what is left of the reading after it, and what it did, in words. */
export interface ReductionStep {
  /** At most 10 characters: the column it is written to, such as `base_nt`. */
  readonly column: string;
  readonly title: string;
  /** Field after the step, nT. */
  readonly values: Float64Array;
  /** What it removed, for the report: one sentence with numbers. */
  readonly summary: string;
}

/** Readings in time order, flat columns of the same length. Frame metres, UTC seconds since 1970, nT. */
export interface Readings {
  readonly count: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Sensor above ground, metres. */
  readonly heightM: Float64Array;
  readonly timeS: Float64Array;
  /** Line as numbered or found: index into `lineNames`. */
  readonly line: Int32Array;
  readonly lineNames: readonly string[];
  readonly raw: Float64Array;
  readonly steps: readonly ReductionStep[];
  /** Last step's field, NaN where flagged. */
  readonly residual: Float64Array;
  readonly flag: Uint8Array;
  /** Standard deviation of a position on each axis, metres, and the time over which it wanders, seconds: as stated. */
  readonly positionSdM: number;
  readonly positionCorrelationS: number;
  readonly warnings: readonly string[];
}
