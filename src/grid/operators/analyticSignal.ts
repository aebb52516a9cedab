import type { Grid } from '../../raster/types.js';
import { gradient } from './gradient.js';
import type { SpectralOptions } from './spectral.js';
import type { TransformedGrid } from './types.js';

/**
 * Amplitude of the analytic signal: length of the gradient, in the grid's unit a metre. Over a pole or a dipole its peak is not
 * right above: it is displaced towards the equator by 0.09 of the depth below the sensor for a pole and 0.15 for a dipole
 * where the field dips 65°, by 0.21 and 0.31 at 30°.
 *
 * Source: Nabighian (1972), Geophysics 37, 507-517; Roest, Verhoef & Pilkington (1992), Geophysics 57, 116-125.
 */
export function analyticSignal(grid: Grid, options: SpectralOptions = {}): TransformedGrid {
  const { east, north, down } = gradient(grid, options);
  const values = down.map((d, n) => Math.sqrt(east[n]! ** 2 + north[n]! ** 2 + d * d));
  return { ...grid, values, notes: ['amplitude of the analytic signal'], warnings: [] };
}
