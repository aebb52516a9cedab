import type { Area } from '../density/types.js';
import { pointInArea } from '../density/area.js';

/** Distance from a point to the nearest edge of an area, 0 inside it; frame metres. */
export function distanceToAreaM(area: Area, x: number, y: number): number {
  if (pointInArea(area, x, y)) return 0;
  let least = Infinity;
  for (const rings of area) {
    for (const ring of rings) {
      for (let i = 1; i < ring.length; i++) {
        const [ax, ay] = ring[i - 1]!;
        const [bx, by] = ring[i]!;
        const [dx, dy] = [bx - ax, by - ay];
        const squared = dx * dx + dy * dy;
        // A ring may repeat a vertex: then its edge is the vertex.
        const t = squared === 0 ? 0 : Math.min(1, Math.max(0, ((x - ax) * dx + (y - ay) * dy) / squared));
        least = Math.min(least, Math.hypot(x - ax - t * dx, y - ay - t * dy));
      }
    }
  }
  return least;
}
