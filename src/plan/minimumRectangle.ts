import type { Area } from '../density/types.js';

/** The bounding rectangle of least area; `azimDeg` in [0, 180) is that of its longer side, clockwise from grid north. */
export interface BoundingRectangle {
  readonly azimDeg: number;
  readonly lengthM: number;
  readonly widthM: number;
}

/** Rectangles whose areas differ by less than this part are taken for the same, so that rounding does not choose. */
const SAME_AREA = 1e-9;

/**
 * Bounding rectangle of least area of all polygons together. One of its sides lies along an edge of the convex hull
 * (Freeman & Shapira 1975), so every hull edge is tried. Of equal rectangles the one of least azimuth is taken; a square
 * has the azimuth in [0, 90). Throws where there are no three points off a line.
 */
export function minimumRectangle(area: Area): BoundingRectangle {
  const hull = convexHull(area.flatMap((rings) => rings[0] ?? []));
  if (hull.length < 3) throw new Error('minimumRectangle: the area has no extent');
  let best: BoundingRectangle | null = null;
  for (let i = 0; i < hull.length; i++) {
    const [ax, ay] = hull[i]!;
    const [bx, by] = hull[(i + 1) % hull.length]!;
    const edge = Math.hypot(bx - ax, by - ay);
    const [dx, dy] = [(bx - ax) / edge, (by - ay) / edge];
    let [low, high, far] = [Infinity, -Infinity, 0];
    for (const [x, y] of hull) {
      const along = (x - ax) * dx + (y - ay) * dy;
      low = Math.min(low, along);
      high = Math.max(high, along);
      far = Math.max(far, (y - ay) * dx - (x - ax) * dy);
    }
    const along = high - low;
    const lengthwise = along >= far;
    const azimDeg = halfTurn((Math.atan2(lengthwise ? dx : -dy, lengthwise ? dy : dx) * 180) / Math.PI);
    const candidate = { azimDeg, lengthM: Math.max(along, far), widthM: Math.min(along, far) };
    if (best === null || isBetter(candidate, best)) best = candidate;
  }
  return best!;
}

function isBetter(a: BoundingRectangle, b: BoundingRectangle): boolean {
  const [areaA, areaB] = [a.lengthM * a.widthM, b.lengthM * b.widthM];
  if (Math.abs(areaA - areaB) > SAME_AREA * areaB) return areaA < areaB;
  return a.azimDeg < b.azimDeg;
}

/** An azimuth in [0, 180): a line has no direction. What rounds to 180 is 0. */
export function halfTurn(azimDeg: number): number {
  const turned = ((azimDeg % 180) + 180) % 180;
  return 180 - turned < 1e-9 ? 0 : turned;
}

/** Corners of the convex hull, counter-clockwise, without collinear points. Source: Andrew (1979), monotone chain. */
export function convexHull(points: ReadonlyArray<readonly [number, number]>): Array<readonly [number, number]> {
  const sorted = points.toSorted((a, b) => a[0] - b[0] || a[1] - b[1]);
  return [...halfHull(sorted), ...halfHull(sorted.toReversed())];
}

/** Left turns only; the last point is left to the other half. */
function halfHull(sorted: ReadonlyArray<readonly [number, number]>): Array<readonly [number, number]> {
  const chain: Array<readonly [number, number]> = [];
  for (const p of sorted) {
    while (chain.length >= 2) {
      const [[ax, ay], [bx, by]] = [chain.at(-2)!, chain.at(-1)!];
      if ((bx - ax) * (p[1] - ay) - (by - ay) * (p[0] - ax) > 0) break;
      chain.pop();
    }
    chain.push(p);
  }
  return chain.slice(0, -1);
}
