import type { Geometry, Position } from 'geojson';
import { UserError } from '../errors.js';

/** How deep the positions of each type lie in its coordinates. */
const DEPTHS: Readonly<Record<string, number>> = { Point: 0, MultiPoint: 1, LineString: 1, MultiLineString: 2, Polygon: 2, MultiPolygon: 3 };

/**
 * Checks that a geometry from a file has the shape that its type lays down: finite positions at the right depth, lines
 * of two and more, rings of four and more that end where they begin. Crossings are the site's affair.
 * Source: RFC 7946, section 3.1.
 */
export function checkInputGeometry(geometry: Geometry, where: string): void {
  if (geometry.type === 'GeometryCollection') {
    if (!Array.isArray(geometry.geometries)) throw wrong(where, 'a GeometryCollection without geometries');
    for (const part of geometry.geometries) checkInputGeometry(part, where);
    return;
  }
  const depth = Object.hasOwn(DEPTHS, geometry.type) ? DEPTHS[geometry.type]! : undefined;
  if (depth === undefined) throw wrong(where, `the geometry type ${JSON.stringify((geometry as { type?: unknown }).type) ?? 'nothing'}`);
  checkNested(geometry.coordinates, depth, { type: geometry.type, where });
}

function checkNested(nested: unknown, depth: number, at: { type: string; where: string }): void {
  if (!Array.isArray(nested)) throw wrong(at.where, `${JSON.stringify(nested) ?? 'nothing'} among the coordinates of a ${at.type}`);
  if (depth === 0) {
    if (nested.length < 2 || !Number.isFinite(nested[0]) || !Number.isFinite(nested[1])) throw wrong(at.where, `the position ${JSON.stringify(nested)}`);
    return;
  }
  if (nested.length === 0) throw wrong(at.where, `an empty ${at.type}`);
  for (const inner of nested) checkNested(inner, depth - 1, at);
  if (depth !== 1 || at.type === 'MultiPoint') return;
  const path = nested as Position[];
  if (at.type.endsWith('LineString')) {
    if (path.length < 2) throw wrong(at.where, 'a line of one position');
  } else if (path.length < 4 || path[0]![0] !== path.at(-1)![0] || path[0]![1] !== path.at(-1)![1]) {
    throw new UserError({
      code: 'polygon_invalid', where: at.where, found: path.length < 4 ? `a ring of ${path.length} positions` : `a ring from ${path[0]!.join(', ')} to ${path.at(-1)!.join(', ')}`,
      wanted: 'a closed ring of four positions or more',
    });
  }
}

function wrong(where: string, found: string): UserError {
  return new UserError({ code: 'position_invalid', where, found, wanted: 'a point, line or polygon with finite coordinates' });
}
