import { FillRule, intersectD, type PathsD } from 'clipper2-ts';
import { areaM2, ringAreaM2 } from './area.js';
import { discArea } from './discArea.js';
import { owensT } from './owensT.js';
import { steadyCovariance } from './parts.js';
import type { Area, Covariance, Density, Rings } from './types.js';

/** Decimals of a metre that polygons are clipped at. */
const CLIP_DECIMALS = 5;

/**
 * Mass of the whole density, blunders included, that lies in an area: exact for Gaussians and areas; a disc counts as a
 * polygon of the same size (within 1e−5).
 */
export function massIn(density: Density, area: Area): number {
  let sum = 0;
  for (const part of density.parts) {
    if (part.weight === 0) continue;
    if (part.kind === 'gaussian') sum += part.weight * gaussianInArea(area, part);
    else sum += part.weight * shareInside(part.kind === 'disc' ? discArea(part) : part.area, area);
  }
  return Math.min(1, Math.max(0, sum));
}

function gaussianInArea(area: Area, gaussian: { x: number; y: number; cov: Covariance }): number {
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

function shareInside(spread: Area, area: Area): number {
  const total = areaM2(spread);
  if (!(total > 0)) throw new Error('massIn: a part of the density has no extent');
  const [ox, oy] = spread[0]![0]![0]!;
  // The clipper fills by winding number, so holes have to run against their outer ring; near the origin it keeps its digits.
  const paths = (of: Area): PathsD =>
    of.flatMap((rings) => rings.map((ring, i) => {
      const points = ring.map(([px, py]) => ({ x: px - ox, y: py - oy }));
      return (ringAreaM2(ring) > 0) === (i === 0) ? points : points.toReversed();
    }));
  const common = intersectD(paths(spread), paths(area), FillRule.NonZero, CLIP_DECIMALS);
  const inside = common.reduce((sum, path) => sum + ringAreaM2(path.map((p) => [p.x, p.y] as const)), 0);
  return Math.min(1, Math.abs(inside) / total);
}
