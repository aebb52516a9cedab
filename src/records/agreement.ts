import { gaussianInArea } from '../density/gaussianInArea.js';
import type { Covariance, DensityPart } from '../density/types.js';
import type { Solution } from './solution.js';

/** How two places of one well stand to each other. */
export interface Agreement {
  /** Between their middles, metres. */
  readonly distanceM: number;
  /** Chance that two right places lie at least so far apart, by their errors. */
  readonly p: number;
}

type Place = Pick<Solution, 'x' | 'y' | 'parts'>;

/**
 * Whether two places can be one. Of two points the square of their distance in standard deviations of the difference is
 * χ² with two degrees of freedom (Mahalanobis 1936), so p = exp(−d²/2). Of a point and an area p is the mass of the
 * point's error, blurred by that of the area's lines, that lies inside: of a well on the very line it is even between 0
 * and 1, of one inside it is more. Where a place is a mixture, its part that agrees best counts.
 */
export function agreement(a: Place, b: Place): Agreement {
  let p = 0;
  for (const one of a.parts) for (const two of b.parts) p = Math.max(p, partAgreement(one, two));
  return { distanceM: Math.hypot(a.x - b.x, a.y - b.y), p: Math.min(1, p) };
}

function partAgreement(a: DensityPart, b: DensityPart): number {
  if (a.kind === 'gaussian' && b.kind === 'gaussian') {
    const [ee, en, nn] = sum(a.cov, b.cov);
    const [dx, dy] = [a.x - b.x, a.y - b.y];
    return Math.exp(-(nn * dx * dx - 2 * en * dx * dy + ee * dy * dy) / (2 * (ee * nn - en * en)));
  }
  if (a.kind === 'area' && b.kind === 'gaussian') return gaussianInArea(a.area, { x: b.x, y: b.y, cov: sum(b.cov, a.cov ?? NONE) });
  if (a.kind === 'gaussian' && b.kind === 'area') return partAgreement(b, a);
  if (a.kind === 'area' && b.kind === 'area') return Math.max(cornersInside(a, b), cornersInside(b, a));
  throw new Error(`agreement: no rule for a ${a.kind} and a ${b.kind}`);
}

/** Best chance that a corner, a middle of a side or the middle of one area lies in another. */
function cornersInside(inner: Extract<DensityPart, { kind: 'area' }>, outer: Extract<DensityPart, { kind: 'area' }>): number {
  const cov = sum(sum(inner.cov ?? NONE, outer.cov ?? NONE), POINT);
  let best = 0;
  for (const [ring] of inner.area) {
    ring!.forEach(([x, y], i) => {
      const [nx, ny] = ring![(i + 1) % ring!.length]!;
      best = Math.max(best, gaussianInArea(outer.area, { x, y, cov }), gaussianInArea(outer.area, { x: (x + nx) / 2, y: (y + ny) / 2, cov }));
    });
  }
  return best;
}

const NONE: Covariance = [0, 0, 0];
/** A corner is no wider than a centimetre; a Gaussian needs some width. */
const POINT: Covariance = [1e-4, 0, 1e-4];

function sum(a: Covariance, b: Covariance): Covariance {
  return [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
}
