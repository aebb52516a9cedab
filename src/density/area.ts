import type { Area, Rings } from './types.js';

export interface AreaBounds {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

export interface AreaMoments {
  readonly areaM2: number;
  /** Centroid. */
  readonly x: number;
  readonly y: number;
  /** Covariance of a point spread evenly over the area: east-east, east-north, north-north, m². */
  readonly cov: readonly [number, number, number];
}

/** Area in m² of a ring, positive when it runs counter-clockwise. An open ring is closed. */
export function ringAreaM2(ring: Rings[number]): number {
  const [x0, y0] = ring[0] ?? [0, 0];
  let twice = 0;
  for (let i = 0; i < ring.length; i++) {
    const [ax, ay] = ring[i]!;
    const [bx, by] = ring[(i + 1) % ring.length]!;
    // Counted from the first vertex, so that a frame's millions of metres do not eat the digits.
    twice += (ax - x0) * (by - y0) - (bx - x0) * (ay - y0);
  }
  return twice / 2;
}

/** Area in m², holes left out; 0 for an area without polygons. Rings may run either way round. */
export function areaM2(area: Area): number {
  return area.reduce((sum, rings) => sum + rings.reduce((a, ring, i) => a + (i === 0 ? 1 : -1) * Math.abs(ringAreaM2(ring)), 0), 0);
}

/** Bounding box, metres. An area without vertices has an empty one: west and south ∞, east and north −∞. */
export function areaBounds(area: Area): AreaBounds {
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const rings of area) {
    for (const [x, y] of rings[0] ?? []) {
      west = Math.min(west, x);
      east = Math.max(east, x);
      south = Math.min(south, y);
      north = Math.max(north, y);
    }
  }
  return { west, south, east, north };
}

/** Whether a point lies in the area and in none of its holes. A point on an edge belongs to one of its sides. */
export function pointInArea(area: Area, x: number, y: number): boolean {
  let inside = false;
  for (const rings of area) {
    for (const ring of rings) {
      for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
        const [ax, ay] = ring[i]!;
        const [bx, by] = ring[j]!;
        if (ay > y !== by > y && x < ax + ((bx - ax) * (y - ay)) / (by - ay)) inside = !inside;
      }
    }
  }
  return inside;
}

/** Area, centroid and second moments. Throws for an area of no extent: nothing can be spread over it. */
export function areaMoments(area: Area): AreaMoments {
  const { west, south } = areaBounds(area);
  let [m, mx, my, mxx, mxy, myy] = [0, 0, 0, 0, 0, 0];
  for (const rings of area) {
    rings.forEach((ring, index) => {
      const sign = (index === 0 ? 1 : -1) * Math.sign(ringAreaM2(ring));
      for (let i = 0; i < ring.length; i++) {
        const [ax, ay] = [ring[i]![0] - west, ring[i]![1] - south];
        const next = ring[(i + 1) % ring.length]!;
        const [bx, by] = [next[0] - west, next[1] - south];
        // Moments of the triangle between the corner of the box and this edge.
        const w = (sign * (ax * by - bx * ay)) / 2;
        m += w;
        mx += (w * (ax + bx)) / 3;
        my += (w * (ay + by)) / 3;
        mxx += (w * (ax * ax + ax * bx + bx * bx)) / 6;
        myy += (w * (ay * ay + ay * by + by * by)) / 6;
        mxy += (w * (2 * ax * ay + ax * by + bx * ay + 2 * bx * by)) / 12;
      }
    });
  }
  if (!(m > 0)) throw new Error('areaMoments: the area has no extent');
  const [cx, cy] = [mx / m, my / m];
  return { areaM2: m, x: west + cx, y: south + cy, cov: [mxx / m - cx * cx, mxy / m - cx * cy, myy / m - cy * cy] };
}
