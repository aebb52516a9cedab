import type { Grid } from '../../raster/types.js';

/** A plane over the frame: `level` at the middle of the grid, slopes per metre towards east and north. */
export interface Plane {
  readonly level: number;
  readonly east: number;
  readonly north: number;
}

/** What a linear operator does to a wave and to a plane; it is the same at every place. */
export interface SpectralOperator {
  /**
   * Writes the complex factor (re, im) of the wave e^(i(east·x + north·y)), wave numbers in radians a metre, x and y in
   * metres to east and north. Has to give the conjugate for the opposite wave. Called once with 0, 0: the mean's factor.
   */
  response(east: number, north: number, out: Float64Array): void;
  /** What becomes of the plane that is taken off before the transform; it is put back after. */
  plane(plane: Plane): Plane;
}

/** A transformed grid: cells as in the grid that it was made from, NaN where that is NaN. */
export interface TransformedGrid extends Grid {
  readonly values: Float64Array;
  /** For the report: what was done, with numbers. */
  readonly notes: readonly string[];
  /** What the user has to know. */
  readonly warnings: readonly string[];
}
