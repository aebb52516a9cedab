import { UserError } from '../../errors.js';
import type { Grid } from '../../raster/types.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { SpectralOperator, TransformedGrid } from './types.js';

export interface LineFilterOptions extends SpectralOptions {
  /** Power of the cosine: the higher, the nearer to the lines' direction a stripe has to run to be taken out. */
  readonly degree?: number;
  /** Stripes at most so wide apart, metres, are taken out; unsaid, all. */
  readonly wavelengthM?: number;
}

export const LINE_FILTER_DEFAULTS = Object.freeze({
  /** Half of a stripe at 24° from the lines stays, and three quarters of a round anomaly's short waves. */
  degree: 8,
  wavelengthM: Infinity,
});

/** Steepness of the limit in wave length, as of a Butterworth filter. */
const ORDER = 4;

/**
 * 1 − |cos φ|ⁿ for waves shorter than the limit, φ the angle between the wave and the direction across the lines: takes out
 * stripes that run along lines of azimuth `azimuthDeg`, as levelling leaves them. A plane and the mean stay.
 *
 * Source: directional cosine filter, common practice.
 */
export function lineOperator(azimuthDeg: number, options: LineFilterOptions = {}): SpectralOperator {
  const { degree, wavelengthM } = { ...LINE_FILTER_DEFAULTS, ...options };
  const acrossEast = Math.cos((azimuthDeg * Math.PI) / 180);
  const acrossNorth = -Math.sin((azimuthDeg * Math.PI) / 180);
  const cut = (2 * Math.PI) / wavelengthM;
  return {
    response(east, north, out) {
      const k = Math.sqrt(east * east + north * north);
      out[1] = 0;
      if (k === 0) {
        out[0] = 1;
        return;
      }
      const short = 1 / (1 + (cut / k) ** (2 * ORDER));
      out[0] = 1 - short * Math.abs((east * acrossEast + north * acrossNorth) / k) ** degree;
    },
    plane: (plane) => plane,
  };
}

/**
 * A grid without stripes along its lines, in its unit. Anomalies lose some of their waves
 * across the lines too, and within a few wavelengths of an edge or gap, where a stripe ends, part of it stays. NaN stays NaN.
 */
export function lineFilter(grid: Grid, azimuthDeg: number, options: LineFilterOptions = {}): TransformedGrid {
  const { degree, wavelengthM } = { ...LINE_FILTER_DEFAULTS, ...options };
  if (!(degree > 0)) throw new UserError({ code: 'value_invalid', where: 'line filter, degree', found: String(degree), wanted: 'a number above 0' });
  if (!(wavelengthM > 0)) throw new UserError({ code: 'value_invalid', where: 'line filter, wavelength_m', found: String(wavelengthM), wanted: 'a length above 0 m' });
  const values = spectral(grid, lineOperator(azimuthDeg, options), options);
  const limit = wavelengthM === Infinity ? '' : ` and shorter than ${wavelengthM} m`;
  return { ...grid, values, notes: [`stripes along azimuth ${azimuthDeg}°${limit} taken out, cosine to the power ${degree}`], warnings: [] };
}
