import type { Geometry, Position } from 'geojson';
import { UserError } from '../../errors.js';

/** Vertices closer than this are one: layers repeat a corner to the millimetre, corners lie hundreds of feet apart. */
export const SAME_VERTEX_M = 0.05;

/**
 * The one ring of a section's or lot's polygon: frame metres, counter-clockwise, neither closed nor with repeated
 * vertices. Throws UserError `polygon_invalid` for anything that is not one piece without holes.
 */
export function outerRing(geometry: Geometry | null, where: string): [x: number, y: number][] {
  const polygon = onlyPolygon(geometry, where);
  if (polygon.length !== 1) throw invalid(where, `a polygon with ${polygon.length - 1} hole${polygon.length === 2 ? '' : 's'}`, 'a polygon without holes');
  const ring: [number, number][] = [];
  for (const [x, y] of polygon[0]!) {
    if (!Number.isFinite(x) || !Number.isFinite(y)) throw invalid(where, `a vertex at ${x}, ${y}`, 'vertices with finite coordinates');
    const last = ring.at(-1);
    if (!last || Math.hypot(x! - last[0], y! - last[1]) > SAME_VERTEX_M) ring.push([x!, y!]);
  }
  while (ring.length > 1 && Math.hypot(ring[0]![0] - ring.at(-1)![0], ring[0]![1] - ring.at(-1)![1]) <= SAME_VERTEX_M) ring.pop();
  const twice = twiceArea(ring);
  if (ring.length < 3 || twice === 0) throw invalid(where, `a polygon of ${ring.length} different vertices without an area`, 'a polygon with an area');
  return twice > 0 ? ring : ring.toReversed();
}

function onlyPolygon(geometry: Geometry | null, where: string): Position[][] {
  if (geometry?.type === 'Polygon') return geometry.coordinates;
  if (geometry?.type === 'MultiPolygon') {
    if (geometry.coordinates.length === 1) return geometry.coordinates[0]!;
    throw invalid(where, `a polygon in ${geometry.coordinates.length} pieces`, 'a polygon in one piece');
  }
  throw invalid(where, geometry ? `a ${geometry.type}` : 'no geometry', 'a polygon');
}

/** Twice the area, positive counter-clockwise, counted from the first vertex so that large coordinates cost no digits. */
export function twiceArea(ring: ReadonlyArray<readonly [number, number]>): number {
  const [x0, y0] = ring[0] ?? [0, 0];
  let twice = 0;
  for (let i = 0; i < ring.length; i++) {
    const [ax, ay] = ring[i]!;
    const [bx, by] = ring[(i + 1) % ring.length]!;
    twice += (ax - x0) * (by - y0) - (bx - x0) * (ay - y0);
  }
  return twice;
}

function invalid(where: string, found: string, wanted: string): UserError {
  return new UserError({ code: 'polygon_invalid', where, found, wanted, advice: 'mend the section layer, or place these records otherwise' });
}
