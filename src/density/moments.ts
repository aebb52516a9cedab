import { partMoments, placeParts } from './parts.js';
import type { Covariance, Density } from './types.js';

/** Mean of the density without its blunder share, frame metres. */
export function densityMean(density: Density): { x: number; y: number } {
  let [x, y] = [0, 0];
  for (const part of placeParts(density)) {
    const middle = partMoments(part);
    x += part.weight * middle.x;
    y += part.weight * middle.y;
  }
  return { x, y };
}

/** Covariance of the density without its blunder share, m²: within the parts and between them. */
export function densityCovariance(density: Density): Covariance {
  const mean = densityMean(density);
  let [ee, en, nn] = [0, 0, 0];
  for (const part of placeParts(density)) {
    const { x, y, cov } = partMoments(part);
    const [dx, dy] = [x - mean.x, y - mean.y];
    ee += part.weight * (cov[0] + dx * dx);
    en += part.weight * (cov[1] + dx * dy);
    nn += part.weight * (cov[2] + dy * dy);
  }
  return [ee, en, nn];
}
