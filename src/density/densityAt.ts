import { areaM2, pointInArea } from './area.js';
import { steadyCovariance } from './parts.js';
import type { Covariance, Density } from './types.js';

/** Value of the whole density, blunders included, at a point, in 1/m². */
export function densityAt(density: Density, x: number, y: number): number {
  let sum = 0;
  for (const part of density.parts) {
    switch (part.kind) {
      case 'gaussian':
        sum += part.weight * gaussianAt(x - part.x, y - part.y, part.cov);
        break;
      case 'disc':
        if (Math.hypot(x - part.x, y - part.y) <= part.radiusM) sum += part.weight / (Math.PI * part.radiusM ** 2);
        break;
      case 'area':
        if (pointInArea(part.area, x, y)) sum += part.weight / areaM2(part.area);
        break;
    }
  }
  return sum;
}

/** Bivariate Gaussian of mean zero at (dx, dy), 1/m². */
export function gaussianAt(dx: number, dy: number, cov: Covariance): number {
  const [ee, en, nn] = steadyCovariance(cov);
  const det = ee * nn - en * en;
  return Math.exp(-(nn * dx * dx - 2 * en * dx * dy + ee * dy * dy) / (2 * det)) / (2 * Math.PI * Math.sqrt(det));
}
