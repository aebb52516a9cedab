import type { Bounds } from './types.js';

export interface GridOptions {
  /** Side of a cell, metres; NaN: a fifth of the spacing, rounded. */
  readonly cellM?: number;
  /** Distance between lines, metres; NaN: the mean distance between readings that fill their rectangle evenly. */
  readonly spacingM?: number;
  /** 0 is a plain plate (minimum curvature), 1 a membrane. */
  readonly tension?: number;
  /** Distance from readings beyond which no cell is filled, metres; NaN: from the spacing. */
  readonly reachM?: number;
  /** Largest error that the solver may leave, as a share of the data's range. */
  readonly tolerance?: number;
  /** Steps of the solver on the finest grid. */
  readonly maxSteps?: number;
  /** What the grid has to cover; null: the readings and the reach around them. */
  readonly bounds?: Bounds | null;
}

export const GRID_DEFAULTS = Object.freeze({
  cellM: NaN,
  spacingM: NaN,
  /** Smith & Wessel (1990) advise about 0.25 for potential fields. */
  tension: 0.25,
  reachM: NaN,
  /** A hundredth of a nanotesla where the readings span 4,000 nT: so little may two tiles differ at their seam. */
  tolerance: 2.5e-6,
  maxSteps: 200,
  bounds: null,
});
