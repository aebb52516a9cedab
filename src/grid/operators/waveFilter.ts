import { UserError } from '../../errors.js';
import type { Grid } from '../../raster/types.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { SpectralOperator, TransformedGrid } from './types.js';

export type FilterShape = 'gaussian' | 'butterworth';

export interface WaveFilterOptions extends SpectralOptions {
  /** Waves that stay: those longer or those shorter than the cut-off. */
  readonly keep?: 'long' | 'short';
  readonly shape?: FilterShape;
  /** Steepness of the Butterworth filter. */
  readonly order?: number;
}

export const WAVE_FILTER_DEFAULTS = Object.freeze({
  keep: 'long' as 'long' | 'short',
  /** No overshoot beside a sharp anomaly. */
  shape: 'gaussian' as FilterShape,
  order: 4,
});

/**
 * Long waves: e^(−ln 2 (k/k₀)²), or 1/(1 + (k/k₀)^2n) after Butterworth (1930, Wireless Engineer 7, 536-541; squared gain
 * taken as gain). Both halve a wave of the cut-off's length, k₀ = 2π/wavelength. Short waves: 1 less that. A plane is long.
 */
export function waveOperator(wavelengthM: number, options: WaveFilterOptions = {}): SpectralOperator {
  const { keep, shape, order } = { ...WAVE_FILTER_DEFAULTS, ...options };
  const cut2 = ((2 * Math.PI) / wavelengthM) ** 2;
  return {
    response(east, north, out) {
      const ratio2 = (east * east + north * north) / cut2;
      const long = shape === 'gaussian' ? Math.exp(-Math.LN2 * ratio2) : 1 / (1 + ratio2 ** order);
      out[0] = keep === 'long' ? long : 1 - long;
      out[1] = 0;
    },
    plane: (plane) => (keep === 'long' ? plane : { level: 0, east: 0, north: 0 }),
  };
}

/** Long or short waves of a grid, in its unit; long and short of the same cut-off add up to the grid. NaN stays NaN. */
export function waveFilter(grid: Grid, wavelengthM: number, options: WaveFilterOptions = {}): TransformedGrid {
  const { keep, shape } = { ...WAVE_FILTER_DEFAULTS, ...options };
  const shortest = 2 * grid.cellM;
  if (!(wavelengthM > shortest && Number.isFinite(wavelengthM))) {
    throw new UserError({ code: 'value_invalid', where: 'wave filter, wavelength_m', found: String(wavelengthM), wanted: `more than two cells, ${shortest} m, the shortest wave that the grid holds` });
  }
  const values = spectral(grid, waveOperator(wavelengthM, options), { padM: wavelengthM, ...options });
  const longest = Math.max(grid.width, grid.height) * grid.cellM;
  const warnings = wavelengthM <= longest ? [] : [`the cut-off of ${wavelengthM} m is longer than the grid (${longest} m): only a plane tells of such waves`];
  return { ...grid, values, notes: [`${keep === 'long' ? 'longer' : 'shorter'} than ${wavelengthM} m, ${shape} filter`], warnings };
}
