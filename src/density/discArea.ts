import type { Area } from './types.js';

/** Corners of the polygon; its edge then strays from the circle by less than 1e−5 of the radius. */
const CORNERS = 720;

/** A disc as a polygon of exactly the same area. */
export function discArea({ x, y, radiusM }: { x: number; y: number; radiusM: number }): Area {
  const angle = (2 * Math.PI) / CORNERS;
  const radius = radiusM * Math.sqrt(angle / Math.sin(angle));
  const ring = Array.from({ length: CORNERS }, (_, i): [number, number] => [x + radius * Math.cos(i * angle), y + radius * Math.sin(i * angle)]);
  return [[[...ring, ring[0]!]]];
}
