import type { Position } from 'geojson';
import { Builder } from 'flatbuffers';
import { ColumnType } from 'flatgeobuf/lib/mjs/flat-geobuf/column-type.js';
import { Column } from 'flatgeobuf/lib/mjs/flat-geobuf/column.js';
import { Crs as CrsTable } from 'flatgeobuf/lib/mjs/flat-geobuf/crs.js';
import { Feature as FeatureTable } from 'flatgeobuf/lib/mjs/flat-geobuf/feature.js';
import { GeometryType } from 'flatgeobuf/lib/mjs/flat-geobuf/geometry-type.js';
import { Geometry as GeometryTable } from 'flatgeobuf/lib/mjs/flat-geobuf/geometry.js';
import { Header } from 'flatgeobuf/lib/mjs/flat-geobuf/header.js';
import type { Crs } from '../geodesy/types.js';
import { wktOf } from '../geodesy/wktOf.js';
import { cellValue } from './cellValue.js';
import { checkLayer } from './checkLayer.js';
import { hilbertOf } from './hilbert.js';
import { boxOf, emptyBox, growBox, layerGeometry, mapPositions, type Box, type LayerGeometry } from './layerGeometry.js';
import { NODE_SIZE, packRTree } from './packedRTree.js';
import { orientRings } from './rings.js';
import type { Feature, Field, FieldType, Layer } from './types.js';

/** "fgb", major version 3, "fgb", patch 0. */
export const MAGIC = Uint8Array.of(0x66, 0x67, 0x62, 3, 0x66, 0x67, 0x62, 0);
const COLUMN_TYPES: Readonly<Record<FieldType, ColumnType>> = { text: ColumnType.String, real: ColumnType.Double, integer: ColumnType.Long };

/**
 * A layer as FlatGeobuf bytes with its spatial index: coordinates in the CRS's own units, features along a Hilbert
 * curve, the header with envelope, columns and CRS. A feature without a place comes last, has an inverted box and so is
 * seen by a full scan and by no box query. A layer without features or places has no index, as the format lays down.
 * Outer rings run counter-clockwise. Source: FlatGeobuf specification 3.0 (flatgeobuf.org).
 */
export function encodeFlatGeobuf(layer: Layer): Uint8Array {
  checkLayer(layer);
  const unit = layer.crs.metresPerUnit;
  const toUnits = ([x, y]: Position): Position => [x! / unit, y! / unit];
  const items = layer.features.map(feature => {
    const geometry = layerGeometry(layer, feature);
    const scaled = geometry && (unit === 1 ? geometry : mapPositions(geometry, toUnits));
    return { feature, geometry: scaled, box: boxOf(scaled), order: Infinity };
  });
  const extent = emptyBox();
  for (const { geometry, box } of items) if (geometry) for (const [x, y] of [[box[0], box[1]], [box[2], box[3]]] as const) growBox(extent, x, y);
  const indexed = extent[0] <= extent[2];
  for (const item of items) if (item.geometry) item.order = hilbertOf(item.box, extent);
  // Ties stay in the layer's order, since sorting is stable: the same layer gives the same bytes.
  items.sort((a, b) => (a.order === b.order ? 0 : a.order - b.order));

  const builder = new Builder();
  const parts: Uint8Array[] = [MAGIC, header(layer, { extent: indexed ? extent : null })];
  const bodies = items.map(({ feature, geometry }) => featureBytes(builder, { layer, feature, geometry }));
  if (indexed) {
    let offset = 0;
    parts.push(packRTree(items.map(item => item.box), bodies.map(body => (offset += body.length) - body.length)));
  }
  return joined([...parts, ...bodies]);
}

function header(layer: Layer, { extent }: { extent: Box | null }): Uint8Array {
  const builder = new Builder();
  const columns = Header.createColumnsVector(builder, layer.fields.map(field => column(builder, field)));
  const crs = crsTable(builder, layer.crs);
  const name = builder.createString(layer.name);
  const title = builder.createString(layer.title);
  const envelope = extent ? Header.createEnvelopeVector(builder, extent) : 0;
  Header.startHeader(builder);
  Header.addName(builder, name);
  if (extent) Header.addEnvelope(builder, envelope);
  Header.addGeometryType(builder, GeometryType[layer.geometryType]);
  Header.addColumns(builder, columns);
  Header.addFeaturesCount(builder, BigInt(layer.features.length));
  Header.addIndexNodeSize(builder, extent ? NODE_SIZE : 0);
  Header.addCrs(builder, crs);
  Header.addTitle(builder, title);
  builder.finishSizePrefixed(Header.endHeader(builder));
  return builder.asUint8Array().slice();
}

function column(builder: Builder, field: Field): number {
  const name = builder.createString(field.name);
  const title = builder.createString(field.title);
  Column.startColumn(builder);
  Column.addName(builder, name);
  Column.addType(builder, COLUMN_TYPES[field.type]);
  Column.addTitle(builder, title);
  return Column.endColumn(builder);
}

function crsTable(builder: Builder, crs: Crs): number {
  const org = builder.createString('EPSG');
  const name = builder.createString(crs.name);
  const wkt = builder.createString(wktOf(crs));
  CrsTable.startCrs(builder);
  CrsTable.addOrg(builder, org);
  CrsTable.addCode(builder, crs.epsg);
  CrsTable.addName(builder, name);
  CrsTable.addWkt(builder, wkt);
  return CrsTable.endCrs(builder);
}

function featureBytes(builder: Builder, { layer, feature, geometry }: { layer: Layer; feature: Feature; geometry: LayerGeometry | null }): Uint8Array {
  builder.clear();
  const cells = propertyBytes(layer.fields, feature);
  const properties = cells.length > 0 ? FeatureTable.createPropertiesVector(builder, cells) : 0;
  const shape = geometry ? geometryTable(builder, geometry) : 0;
  FeatureTable.startFeature(builder);
  if (shape) FeatureTable.addGeometry(builder, shape);
  if (properties) FeatureTable.addProperties(builder, properties);
  builder.finishSizePrefixed(FeatureTable.endFeature(builder));
  return builder.asUint8Array().slice();
}

function geometryTable(builder: Builder, geometry: LayerGeometry): number {
  if (geometry.type === 'MultiPolygon') {
    const polygons = geometry.coordinates.map(coordinates => geometryTable(builder, { type: 'Polygon', coordinates }));
    const parts = GeometryTable.createPartsVector(builder, polygons);
    GeometryTable.startGeometry(builder);
    GeometryTable.addType(builder, GeometryType.MultiPolygon);
    GeometryTable.addParts(builder, parts);
    return GeometryTable.endGeometry(builder);
  }
  const paths = pathsIn(geometry);
  const xy = new Float64Array(2 * paths.reduce((sum, path) => sum + path.length, 0));
  const ends: number[] = [];
  let count = 0;
  for (const path of paths) {
    for (const [x, y] of path) {
      xy[2 * count] = x!;
      xy[2 * count + 1] = y!;
      count++;
    }
    ends.push(count);
  }
  const xyVector = GeometryTable.createXyVector(builder, xy);
  // One path needs no ends, since all positions belong to it; but GDAL refuses a MultiLineString without them.
  const endsVector = ends.length > 1 || geometry.type === 'MultiLineString' ? GeometryTable.createEndsVector(builder, Uint32Array.from(ends)) : 0;
  GeometryTable.startGeometry(builder);
  if (endsVector) GeometryTable.addEnds(builder, endsVector);
  GeometryTable.addXy(builder, xyVector);
  GeometryTable.addType(builder, GeometryType[geometry.type]);
  return GeometryTable.endGeometry(builder);
}

function pathsIn(geometry: Exclude<LayerGeometry, { type: 'MultiPolygon' }>): Position[][] {
  switch (geometry.type) {
    case 'Point': return [[geometry.coordinates]];
    case 'LineString': return [geometry.coordinates];
    case 'MultiLineString': return geometry.coordinates;
    case 'Polygon': return orientRings(geometry.coordinates, 'counter-clockwise');
  }
}

/** Number of the column (two bytes) and value, for each value that is there. */
function propertyBytes(fields: readonly Field[], feature: Feature): Uint8Array {
  const encoder = new TextEncoder();
  const cells = fields.map(field => cellValue(field, feature));
  const texts = cells.map(cell => (typeof cell === 'string' ? encoder.encode(cell) : null));
  const size = cells.reduce<number>((sum, cell, i) => (cell === null ? sum : sum + 2 + (texts[i] ? 4 + texts[i].length : 8)), 0);
  const bytes = new Uint8Array(size);
  const view = new DataView(bytes.buffer);
  let at = 0;
  for (const [i, cell] of cells.entries()) {
    if (cell === null) continue;
    view.setUint16(at, i, true);
    at += 2;
    const text = texts[i];
    if (text) {
      view.setUint32(at, text.length, true);
      bytes.set(text, at + 4);
      at += 4 + text.length;
      continue;
    }
    if (fields[i]!.type === 'integer') view.setBigInt64(at, BigInt(cell), true);
    else view.setFloat64(at, cell as number, true);
    at += 8;
  }
  return bytes;
}

function joined(parts: readonly Uint8Array[]): Uint8Array {
  const bytes = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    bytes.set(part, at);
    at += part.length;
  }
  return bytes;
}
