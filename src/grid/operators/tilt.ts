import type { Grid } from '../../raster/types.js';
import { gradient } from './gradient.js';
import type { SpectralOptions } from './spectral.js';
import type { TransformedGrid } from './types.js';

/**
 * Tilt of the gradient, degrees in −90 … 90: positive over a source, zero near its edge, whatever its strength. Where the
 * field is flat it is the tilt of noise.
 *
 * Source: Miller & Singh (1994), Journal of Applied Geophysics 32, 213-217.
 */
export function tilt(grid: Grid, options: SpectralOptions = {}): TransformedGrid {
  const { east, north, down } = gradient(grid, options);
  const values = down.map((d, n) => (Math.atan2(d, Math.sqrt(east[n]! ** 2 + north[n]! ** 2)) * 180) / Math.PI);
  return { ...grid, values, notes: ['tilt of the gradient, degrees'], warnings: [] };
}
