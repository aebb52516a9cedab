import type { Position } from 'geojson';
import { wktOf } from '../geodesy/wktOf.js';
import { checkLayer } from './checkLayer.js';
import { encodeDbf } from './encodeDbf.js';
import { boxOf, emptyBox, growBox, layerGeometry, mapPositions, pathsOf, polygonsOf, type Box, type LayerGeometry } from './layerGeometry.js';
import { orientRings } from './rings.js';
import type { Layer } from './types.js';

export type ShapefilePart = 'shp' | 'shx' | 'dbf' | 'prj' | 'cpg';

const SHAPE_TYPES: Readonly<Record<Layer['geometryType'], number>> = { Point: 1, LineString: 3, MultiLineString: 3, Polygon: 5, MultiPolygon: 5 };
const NULL_SHAPE = 0;
const HEADER_BYTES = 100;
const RECORD_HEADER_BYTES = 8;

/**
 * A layer as the parts of a Shapefile, by ending: coordinates in the CRS's own units, outer rings clockwise, a feature
 * without a place as a null shape, attributes in UTF-8 (see `encodeDbf`), the CRS as WKT.
 * Source: ESRI Shapefile Technical Description, 1998.
 */
export function encodeShapefile(layer: Layer): Record<ShapefilePart, Uint8Array> {
  checkLayer(layer);
  const unit = layer.crs.metresPerUnit;
  const shapes = layer.features.map(feature => {
    const geometry = layerGeometry(layer, feature);
    return geometry && mapPositions(geometry, ([x, y]) => [x! / unit, y! / unit]);
  });
  const extent = emptyBox();
  for (const shape of shapes) {
    if (!shape) continue;
    const box = boxOf(shape);
    growBox(extent, box[0], box[1]);
    growBox(extent, box[2], box[3]);
  }
  const type = SHAPE_TYPES[layer.geometryType];
  const contents = shapes.map(shape => (shape === null ? nullShape() : shape.type === 'Point' ? pointShape(shape.coordinates) : pathShape(shape, type)));
  const encoder = new TextEncoder();
  return { ...shpAndShx(contents, { type, extent }), dbf: encodeDbf(layer), prj: encoder.encode(wktOf(layer.crs)), cpg: encoder.encode('UTF-8') };
}

function nullShape(): Uint8Array {
  const bytes = new Uint8Array(4);
  new DataView(bytes.buffer).setInt32(0, NULL_SHAPE, true);
  return bytes;
}

function pointShape([x, y]: Position): Uint8Array {
  const bytes = new Uint8Array(20);
  const view = new DataView(bytes.buffer);
  view.setInt32(0, SHAPE_TYPES.Point, true);
  view.setFloat64(4, x!, true);
  view.setFloat64(12, y!, true);
  return bytes;
}

function pathShape(shape: LayerGeometry, type: number): Uint8Array {
  const paths = type === SHAPE_TYPES.Polygon ? polygonsOf(shape).flatMap(rings => orientRings(rings, 'clockwise')) : pathsOf(shape);
  const count = paths.reduce((sum, path) => sum + path.length, 0);
  const bytes = new Uint8Array(44 + 4 * paths.length + 16 * count);
  const view = new DataView(bytes.buffer);
  view.setInt32(0, type, true);
  for (const [i, bound] of boxOf(shape).entries()) view.setFloat64(4 + 8 * i, bound, true);
  view.setInt32(36, paths.length, true);
  view.setInt32(40, count, true);
  let first = 0;
  let at = 44 + 4 * paths.length;
  for (const [i, path] of paths.entries()) {
    view.setInt32(44 + 4 * i, first, true);
    first += path.length;
    for (const [x, y] of path) {
      view.setFloat64(at, x!, true);
      view.setFloat64(at + 8, y!, true);
      at += 16;
    }
  }
  return bytes;
}

function shpAndShx(contents: readonly Uint8Array[], head: { type: number; extent: Box }): Record<'shp' | 'shx', Uint8Array> {
  const size = contents.reduce((sum, content) => sum + RECORD_HEADER_BYTES + content.length, HEADER_BYTES);
  const shp = new Uint8Array(size);
  const shx = new Uint8Array(HEADER_BYTES + RECORD_HEADER_BYTES * contents.length);
  writeHeader(shp, head);
  writeHeader(shx, head);
  const main = new DataView(shp.buffer);
  const index = new DataView(shx.buffer);
  let at = HEADER_BYTES;
  for (const [i, content] of contents.entries()) {
    // Offsets and lengths count in words of 16 bits, most significant byte first.
    index.setInt32(HEADER_BYTES + RECORD_HEADER_BYTES * i, at / 2);
    index.setInt32(HEADER_BYTES + RECORD_HEADER_BYTES * i + 4, content.length / 2);
    main.setInt32(at, i + 1);
    main.setInt32(at + 4, content.length / 2);
    shp.set(content, at + RECORD_HEADER_BYTES);
    at += RECORD_HEADER_BYTES + content.length;
  }
  return { shp, shx };
}

function writeHeader(bytes: Uint8Array, { type, extent }: { type: number; extent: Box }): void {
  const view = new DataView(bytes.buffer);
  view.setInt32(0, 9994);
  view.setInt32(24, bytes.length / 2);
  view.setInt32(28, 1000, true);
  view.setInt32(32, type, true);
  // A layer without any place has an extent of zeros, as the format has no word for none.
  if (extent[0] <= extent[2]) for (const [i, bound] of extent.entries()) view.setFloat64(36 + 8 * i, bound, true);
}
