import type { Grid } from '../../raster/types.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { SpectralOperator, TransformedGrid } from './types.js';

/** |k|: growth of the field downwards, towards its sources. A plane has none. Source: Blakely (1995), ch. 12. */
export const VERTICAL_DERIVATIVE: SpectralOperator = Object.freeze({
  response(east: number, north: number, out: Float64Array) {
    out[0] = Math.sqrt(east * east + north * north);
    out[1] = 0;
  },
  plane: () => ({ level: 0, east: 0, north: 0 }),
});

/** First vertical derivative, positive downwards, in the grid's unit a metre. NaN stays NaN. */
export function verticalDerivative(grid: Grid, options: SpectralOptions = {}): TransformedGrid {
  return { ...grid, values: spectral(grid, VERTICAL_DERIVATIVE, options), notes: ['first vertical derivative, positive downwards'], warnings: [] };
}
