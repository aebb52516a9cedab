import type { Grid } from '../../raster/types.js';
import { horizontalDerivativeOperator } from './horizontalDerivative.js';
import { applyOperator, spectrumOf, type SpectralOptions } from './spectral.js';
import { VERTICAL_DERIVATIVE } from './verticalDerivative.js';

/** The three first derivatives of a grid from one transform: towards east, north and down, in the grid's unit a metre. */
export function gradient(grid: Grid, options: SpectralOptions = {}): { readonly east: Float64Array; readonly north: Float64Array; readonly down: Float64Array } {
  const spectrum = spectrumOf(grid, options);
  return {
    east: applyOperator(spectrum, horizontalDerivativeOperator(90, grid.cellM)),
    north: applyOperator(spectrum, horizontalDerivativeOperator(0, grid.cellM)),
    down: applyOperator(spectrum, VERTICAL_DERIVATIVE),
  };
}
