import { owensT } from './owensT.js';
import { steadyCovariance } from './parts.js';
import type { Area, Covariance, Rings } from './types.js';

/** Mass of a Gaussian that lies in an area, exact. */
export function gaussianInArea(area: Area, gaussian: { readonly x: number; readonly y: number; readonly cov: Covariance }): number {
  let sum = 0;
  for (const rings of area) {
    rings.forEach((ring, i) => { sum += (i === 0 ? 1 : -1) * Math.abs(gaussianInRing(ring, gaussian)); });
  }
  return sum;
}

/**
 * Mass of a Gaussian within a ring, positive for a counter-clockwise one. In standardised coordinates each edge spans a
 * triangle with the mean, whose mass is a difference of (atan t)/2π − T(h, t), h the distance of the edge's line and
 * t h the place along it.
 *
 * Source: Owen (1956), section on polygons; DiDonato & Hageman (1982).
 */
function gaussianInRing(ring: Rings[number], { x, y, cov }: { x: number; y: number; cov: Covariance }): number {
  const [ee, en, nn] = steadyCovariance(cov);
  // Lower Cholesky factor of the covariance, inverted by substitution.
  const l11 = Math.sqrt(ee);
  const l21 = en / l11;
  const l22 = Math.sqrt(nn - l21 * l21);
  const points = ring.map(([px, py]) => {
    const u = (px - x) / l11;
    return [u, (py - y - l21 * u) / l22] as const;
  });
  let sum = 0;
  for (let i = 0; i < points.length; i++) {
    const [ax, ay] = points[i]!;
    const [bx, by] = points[(i + 1) % points.length]!;
    const length = Math.hypot(bx - ax, by - ay);
    const cross = ax * by - ay * bx;
    if (length === 0 || cross === 0) continue;
    const h = Math.abs(cross) / length;
    const along = (px: number, py: number): number => (px * (bx - ax) + py * (by - ay)) / (length * h);
    sum += Math.sign(cross) * (wedge(h, along(bx, by)) - wedge(h, along(ax, ay)));
  }
  return sum;
}

function wedge(h: number, t: number): number {
  return Math.atan(t) / (2 * Math.PI) - owensT(h, t);
}
