/**
 * Where a regular grid lies in the survey's projected frame. Row 0 lies in the north. `west` and `north` are the outer
 * edges of the first cell (pixel is area), metres.
 */
export interface GridPlace {
  readonly width: number;
  readonly height: number;
  readonly west: number;
  readonly north: number;
  readonly cellM: number;
}

/** A grid with its values, which run west to east, then southwards. NaN is a cell without a value. */
export interface Grid extends GridPlace {
  readonly values: Float32Array | Float64Array;
}

/** A grid that need not be in memory as a whole. */
export interface RowSource extends GridPlace {
  /**
   * `count` whole rows from row `first` on, as in a Grid: `width × count` values. Asked for from north to south, each
   * row once; the values are read before the next call, so the caller may use the same array again.
   */
  readRows(first: number, count: number): Float32Array | Float64Array | Promise<Float32Array | Float64Array>;
}
