import type { Bounds } from '../geodesy/types.js';
import type { Grid } from '../raster/types.js';

/** Values at places, flat columns of the same length: frame metres, and nT as a rule. NaN values and places are left out. */
export interface Samples {
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  readonly value: ArrayLike<number>;
  /** Standard error of each value, in its unit: where several share a cell, they count by its inverse square. Absent: all alike. */
  readonly sd?: ArrayLike<number>;
}

/** What there is to say of a grid, in words. */
export interface GridRemarks {
  /** For the report: what was done, with numbers. */
  readonly notes: readonly string[];
  /** What the user has to know. */
  readonly warnings: readonly string[];
}

/** A grid of values with what it rests on. It is a Grid, so it goes wherever one goes. */
export interface GridResult extends Grid, GridRemarks {
  /** Distance beyond which no cell is filled, metres, from the cell's centre to the nearest reading. */
  readonly reachM: number;
  /** Line spacing (or mean distance of readings) that cell, reach and tension were judged by, metres. */
  readonly spacingM: number;
  /** NaN where no plate was solved; then there were no steps and nothing was left. */
  readonly tension: number;
  /** Cells with a value. */
  readonly filled: number;
  /** Cells with a value that hold readings. */
  readonly pinned: number;
  /** Steps of the solver on the finest grid; the most that a tile took. */
  readonly iterations: number;
  /** Estimate of the largest error left by the solver, in the data's unit and as a share of the data's range. */
  readonly remaining: number;
  readonly remainingShare: number;
  readonly converged: boolean;
}

/** Cells of a grid before it has values. */
export interface GridFrame {
  readonly width: number;
  readonly height: number;
  readonly west: number;
  readonly north: number;
  readonly cellM: number;
}

export type { Bounds };
