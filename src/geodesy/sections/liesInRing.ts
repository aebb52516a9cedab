import type { PlanePoint } from './types.js';

/** Whether a point lies in an open ring, or within `slackM` of it. */
export function liesInRing(ring: readonly PlanePoint[], [x, y]: PlanePoint, slackM: number): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [ax, ay] = ring[i]!;
    const [bx, by] = ring[j]!;
    if (ay > y !== by > y && x < ax + ((bx - ax) * (y - ay)) / (by - ay)) inside = !inside;
    const length2 = (bx - ax) ** 2 + (by - ay) ** 2;
    const t = Math.min(1, Math.max(0, ((x - ax) * (bx - ax) + (y - ay) * (by - ay)) / length2));
    if ((x - ax - t * (bx - ax)) ** 2 + (y - ay - t * (by - ay)) ** 2 <= slackM * slackM) return true;
  }
  return inside;
}
