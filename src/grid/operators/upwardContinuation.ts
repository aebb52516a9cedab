import { UserError } from '../../errors.js';
import type { Grid } from '../../raster/types.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { SpectralOperator, TransformedGrid } from './types.js';

/** The padding spans this many heights: from there on less than a thousandth of a point's weight comes round the torus. */
const PAD_PER_HEIGHT = 6;

/** e^(−|k|h): the field as it is `heightM` higher. A plane stays as it is. Source: Blakely (1995), ch. 12. */
export function upwardOperator(heightM: number): SpectralOperator {
  return {
    response(east, north, out) {
      out[0] = Math.exp(-heightM * Math.sqrt(east * east + north * north));
      out[1] = 0;
    },
    plane: (plane) => plane,
  };
}

/**
 * The field `heightM` (≥ 0, metres) above the surface that the grid lies on, in the grid's unit. It takes in the ground around
 * each cell within a few heights; near edges and gaps that is the fill, not readings.
 */
export function upwardContinuation(grid: Grid, heightM: number, options: SpectralOptions = {}): TransformedGrid {
  if (!(heightM >= 0 && Number.isFinite(heightM))) throw new UserError({ code: 'value_invalid', where: 'upward continuation, height_m', found: String(heightM), wanted: 'a height of 0 m or more' });
  const values = spectral(grid, upwardOperator(heightM), { padM: PAD_PER_HEIGHT * heightM, ...options });
  return { ...grid, values, notes: [`continued ${heightM} m upwards`], warnings: [] };
}
