import type { Rings } from './types.js';

/**
 * Area that a ring shares with the circle of radius 1 about the origin, exact; positive for a counter-clockwise ring.
 * Each edge spans a triangle with the centre: within the circle it counts as such, beyond it as the circle's sector.
 */
export function unitCircleOverlap(ring: Rings[number]): number {
  let sum = 0;
  for (let i = 0; i < ring.length; i++) {
    const [ax, ay] = ring[i]!;
    const [bx, by] = ring[(i + 1) % ring.length]!;
    sum += edge(ax, ay, bx - ax, by - ay);
  }
  return sum;
}

function edge(ax: number, ay: number, dx: number, dy: number): number {
  const length2 = dx * dx + dy * dy;
  if (length2 === 0) return 0;
  const [bx, by] = [ax + dx, ay + dy];
  // Parameters along the edge at which its line meets the circle.
  const middle = -(ax * dx + ay * dy) / length2;
  const root2 = middle * middle - (ax * ax + ay * ay - 1) / length2;
  if (root2 <= 0) return sector(ax, ay, bx, by);
  const root = Math.sqrt(root2);
  const [from, to] = [Math.max(0, middle - root), Math.min(1, middle + root)];
  if (to <= from) return sector(ax, ay, bx, by);
  const [px, py, qx, qy] = [ax + from * dx, ay + from * dy, ax + to * dx, ay + to * dy];
  return (from > 0 ? sector(ax, ay, px, py) : 0) + (px * qy - qx * py) / 2 + (to < 1 ? sector(qx, qy, bx, by) : 0);
}

/** Sector of the circle between two directions, signed. */
function sector(ax: number, ay: number, bx: number, by: number): number {
  return Math.atan2(ax * by - ay * bx, ax * bx + ay * by) / 2;
}
