import type { Geometry, LineString, MultiLineString, MultiPolygon, Point, Polygon, Position } from 'geojson';
import type { Feature, Layer } from './types.js';

/** Geometries that layers are made of. */
export type LayerGeometry = Point | LineString | MultiLineString | Polygon | MultiPolygon;

/**
 * A feature's geometry as the layer's type: a single line or polygon in a layer of several becomes one of one part.
 * Any other type than the layer's is our bug, as formats with one type a layer could not hold it.
 */
export function layerGeometry(layer: Layer, feature: Feature): LayerGeometry | null {
  const { geometry } = feature;
  if (geometry === null) return null;
  if (geometry.type === layer.geometryType) return geometry as LayerGeometry;
  if (geometry.type === 'LineString' && layer.geometryType === 'MultiLineString') return { type: 'MultiLineString', coordinates: [geometry.coordinates] };
  if (geometry.type === 'Polygon' && layer.geometryType === 'MultiPolygon') return { type: 'MultiPolygon', coordinates: [geometry.coordinates] };
  throw new Error(`layer ${layer.name} of ${layer.geometryType} holds a ${geometry.type}`);
}

/** A new geometry whose every position is moved. */
export function mapPositions<G extends Geometry>(geometry: G, move: (position: Position) => Position): G {
  if (geometry.type === 'GeometryCollection') return { ...geometry, geometries: geometry.geometries.map(part => mapPositions(part, move)) };
  return { ...geometry, coordinates: mapNested(geometry.coordinates, move) };
}

/** Calls `visit` with every position, in order. */
export function eachPosition(geometry: Geometry, visit: (position: Position) => void): void {
  if (geometry.type === 'GeometryCollection') for (const part of geometry.geometries) eachPosition(part, visit);
  else eachNested(geometry.coordinates, visit);
}

/** West, south, east, north; inverted (∞, ∞, −∞, −∞) for no geometry or none of its positions, which meets no box. */
export type Box = [west: number, south: number, east: number, north: number];

export function emptyBox(): Box {
  return [Infinity, Infinity, -Infinity, -Infinity];
}

export function growBox(box: Box, x: number, y: number): void {
  if (x < box[0]) box[0] = x;
  if (y < box[1]) box[1] = y;
  if (x > box[2]) box[2] = x;
  if (y > box[3]) box[3] = y;
}

export function boxOf(geometry: Geometry | null): Box {
  const box = emptyBox();
  if (geometry) eachPosition(geometry, position => growBox(box, position[0]!, position[1]!));
  return box;
}

/** The polygons of a geometry as lists of rings; none for points and lines. */
export function polygonsOf(geometry: LayerGeometry): Position[][][] {
  if (geometry.type === 'Polygon') return [geometry.coordinates];
  return geometry.type === 'MultiPolygon' ? geometry.coordinates : [];
}

/** The lines and rings of a geometry; none for points. */
export function pathsOf(geometry: LayerGeometry): Position[][] {
  switch (geometry.type) {
    case 'Point': return [];
    case 'LineString': return [geometry.coordinates];
    case 'MultiLineString': return geometry.coordinates;
    case 'Polygon': return geometry.coordinates;
    case 'MultiPolygon': return geometry.coordinates.flat();
  }
}

type Nested = Position | readonly Nested[];

function isPosition(nested: Nested): nested is Position {
  return typeof nested[0] === 'number';
}

function mapNested(nested: Nested, move: (position: Position) => Position): Nested {
  return isPosition(nested) ? move(nested) : (nested as readonly Nested[]).map(inner => mapNested(inner, move));
}

function eachNested(nested: Nested, visit: (position: Position) => void): void {
  if (isPosition(nested)) visit(nested);
  else for (const inner of nested as readonly Nested[]) eachNested(inner, visit);
}
