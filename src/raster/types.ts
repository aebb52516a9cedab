/**
 * A regular grid in the survey's projected frame. Row 0 lies in the north, values run west to east, then southwards.
 * `west` and `north` are the outer edges of the first cell (pixel is area), metres. NaN is a cell without a value.
 */
export interface Grid {
  readonly width: number;
  readonly height: number;
  readonly west: number;
  readonly north: number;
  readonly cellM: number;
  readonly values: Float32Array | Float64Array;
}
