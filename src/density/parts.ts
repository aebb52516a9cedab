import { areaMoments } from './area.js';
import type { Covariance, Density, DensityPart } from './types.js';

/** A Gaussian narrower than this is taken as this wide, metres: no position is better than a millimetre. */
export const MIN_SD_M = 0.001;

/** Middle and covariance of one part; weight left aside. */
export function partMoments(part: DensityPart): { x: number; y: number; cov: Covariance } {
  switch (part.kind) {
    case 'gaussian':
      return { x: part.x, y: part.y, cov: part.cov };
    case 'disc':
      // A disc's points have the variance R²/4 on each axis.
      return { x: part.x, y: part.y, cov: [part.radiusM ** 2 / 4, 0, part.radiusM ** 2 / 4] };
    case 'area': {
      const { x, y, cov } = areaMoments(part.area);
      return { x, y, cov: part.cov ? [cov[0] + part.cov[0], cov[1] + part.cov[1], cov[2] + part.cov[2]] : cov };
    }
  }
}

/** Parts of role `place`, their weights scaled to sum to 1. Throws where there is none. */
export function placeParts(density: Density): DensityPart[] {
  const parts = density.parts.filter((part) => part.role === 'place' && part.weight > 0);
  const total = parts.reduce((sum, part) => sum + part.weight, 0);
  if (!(total > 0)) throw new Error('density: no part of role "place" has weight');
  return parts.map((part) => ({ ...part, weight: part.weight / total }));
}

/** A Gaussian's covariance as it is used: at least MIN_SD_M wide in every direction. */
export function steadyCovariance([ee, en, nn]: Covariance): Covariance {
  const floor = MIN_SD_M * MIN_SD_M;
  const det = ee * nn - en * en;
  const trace = ee + nn;
  if (!(trace >= 0) || !Number.isFinite(trace) || !Number.isFinite(en)) throw new Error(`density: [${ee}, ${en}, ${nn}] is no covariance`);
  // The smaller variance is about det/trace.
  return det >= floor * trace && trace > floor ? [ee, en, nn] : [ee + floor, en, nn + floor];
}
