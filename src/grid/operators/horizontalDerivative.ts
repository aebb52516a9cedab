import type { Grid } from '../../raster/types.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { SpectralOperator, TransformedGrid } from './types.js';

/** i k·direction: growth of the field towards `azimuthDeg`, clockwise from grid north. A plane gives its slope. Source: Blakely (1995), eq. 12.12. */
export function horizontalDerivativeOperator(azimuthDeg: number): SpectralOperator {
  const east = Math.sin((azimuthDeg * Math.PI) / 180);
  const north = Math.cos((azimuthDeg * Math.PI) / 180);
  return {
    response(kEast, kNorth, out) {
      out[0] = 0;
      out[1] = kEast * east + kNorth * north;
    },
    plane: (plane) => ({ level: plane.east * east + plane.north * north, east: 0, north: 0 }),
  };
}

/** First derivative towards `azimuthDeg` (0 grid north, 90 east), in the grid's unit a metre. NaN stays NaN. */
export function horizontalDerivative(grid: Grid, azimuthDeg: number, options: SpectralOptions = {}): TransformedGrid {
  const values = spectral(grid, horizontalDerivativeOperator(azimuthDeg), options);
  return { ...grid, values, notes: [`first derivative towards azimuth ${azimuthDeg}°`], warnings: [] };
}
