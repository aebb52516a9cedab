import { FillRule, intersectD, type PathsD } from 'clipper2-ts';
import { areaM2, ringAreaM2 } from './area.js';
import { blurShifts } from './blurShifts.js';
import { discArea } from './discArea.js';
import { gaussianInArea } from './gaussianInArea.js';
import { roundedInArea } from './roundedInArea.js';
import type { Area, AreaPart, Density } from './types.js';

/** Decimals of a metre that polygons are clipped at. */
const CLIP_DECIMALS = 5;

/**
 * Mass of the whole density, blunders included, that lies in an area: exact for Gaussians and areas, within 1e−6 for a
 * rounded Gaussian, within about 3e−3 for an area with blurred edges; a disc counts as a polygon of the same size (within 1e−5).
 */
export function massIn(density: Density, area: Area): number {
  let sum = 0;
  for (const part of density.parts) {
    if (part.weight === 0) continue;
    if (part.kind === 'gaussian') sum += part.weight * (part.rounding ? roundedInArea(area, part) : gaussianInArea(area, part));
    else if (part.kind === 'disc') sum += part.weight * shareInside(discArea(part), area);
    else sum += part.weight * blurredInside(part, area);
  }
  return Math.min(1, Math.max(0, sum));
}

function blurredInside(part: AreaPart, area: Area): number {
  if (!part.cov) return shareInside(part.area, area);
  return blurShifts(part.area, part.cov).reduce((sum, { weight, area: shifted }) => sum + weight * shareInside(shifted, area), 0);
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
