import { areaM2, pointInArea } from './area.js';
import { gaussianInArea } from './gaussianInArea.js';
import { localFrame } from './localFrame.js';
import { steadyCovariance } from './parts.js';
import { roundedPdf } from './roundedGaussian.js';
import type { Covariance, Density, DensityPart } from './types.js';

/** Value of the whole density, blunders included, at a point, in 1/m². */
export function densityAt(density: Density, x: number, y: number): number {
  return density.parts.reduce((sum, part) => sum + part.weight * partAt(part, x, y), 0);
}

/** One part's density at a point, its weight left aside, 1/m². */
function partAt(part: DensityPart, x: number, y: number): number {
  switch (part.kind) {
    case 'gaussian': {
      if (!part.rounding) return gaussianAt(x - part.x, y - part.y, part.cov);
      const { inverse: [a, b, c, d], det, halfWidths: [first, second] } = localFrame(part);
      const [dx, dy] = [x - part.x, y - part.y];
      return (roundedPdf(a * dx + b * dy, first) * roundedPdf(c * dx + d * dy, second)) / det;
    }
    case 'disc':
      return Math.hypot(x - part.x, y - part.y) <= part.radiusM ? 1 / (Math.PI * part.radiusM ** 2) : 0;
    case 'area':
      // Seen from the point, the area lies within reach of its own error by the mass of that error inside it.
      if (part.cov) return gaussianInArea(part.area, { x, y, cov: part.cov }) / areaM2(part.area);
      return pointInArea(part.area, x, y) ? 1 / areaM2(part.area) : 0;
  }
}

/** Bivariate Gaussian of mean zero at (dx, dy), 1/m². */
export function gaussianAt(dx: number, dy: number, cov: Covariance): number {
  const [ee, en, nn] = steadyCovariance(cov);
  const det = ee * nn - en * en;
  return Math.exp(-(nn * dx * dx - 2 * en * dx * dy + ee * dy * dy) / (2 * det)) / (2 * Math.PI * Math.sqrt(det));
}
