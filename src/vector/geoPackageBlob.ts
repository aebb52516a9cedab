import type { Position } from 'geojson';
import { boxOf, type LayerGeometry } from './layerGeometry.js';
import { orientRings } from './rings.js';

const WKB_TYPES: Readonly<Record<LayerGeometry['type'], number>> = { Point: 1, LineString: 2, Polygon: 3, MultiLineString: 5, MultiPolygon: 6 };
const LITTLE_ENDIAN = 1;
/** Bit 0 little-endian; bits 1 to 3 the envelope: 1 for x and y bounds, 0 for none, as a point needs none. */
const FLAGS_POINT = 0b0001;
const FLAGS_BOUNDED = 0b0011;

/**
 * A geometry as GeoPackage keeps it: a head with the CRS and the bounds, then ISO WKB, all little-endian, outer rings
 * counter-clockwise. Source: OGC 12-128r17, 2.1.3 (GeoPackageBinary); OGC 06-103r4, 8.2 (WKB).
 */
export function geoPackageBlob(geometry: LayerGeometry, srsId: number): Uint8Array {
  const point = geometry.type === 'Point';
  const bytes = new Uint8Array((point ? 8 : 40) + wkbSize(geometry));
  const writer = new Writer(new DataView(bytes.buffer));
  for (const byte of [0x47, 0x50, 0, point ? FLAGS_POINT : FLAGS_BOUNDED]) writer.byte(byte);
  writer.integer(srsId);
  if (!point) {
    const [west, south, east, north] = boxOf(geometry);
    for (const bound of [west, east, south, north]) writer.real(bound);
  }
  writeWkb(writer, geometry);
  return bytes;
}

class Writer {
  #at = 0;
  constructor(private readonly view: DataView) {}
  byte(value: number): void { this.view.setUint8(this.#at, value); this.#at += 1; }
  integer(value: number): void { this.view.setInt32(this.#at, value, true); this.#at += 4; }
  real(value: number): void { this.view.setFloat64(this.#at, value, true); this.#at += 8; }
  path(path: readonly Position[]): void {
    this.integer(path.length);
    for (const [x, y] of path) {
      this.real(x!);
      this.real(y!);
    }
  }
}

function wkbSize(geometry: LayerGeometry): number {
  switch (geometry.type) {
    case 'Point': return 5 + 16;
    case 'LineString': return 9 + 16 * geometry.coordinates.length;
    case 'Polygon': return geometry.coordinates.reduce((sum, ring) => sum + 4 + 16 * ring.length, 9);
    default: return partsOf(geometry).reduce((sum, part) => sum + wkbSize(part), 9);
  }
}

function writeWkb(writer: Writer, geometry: LayerGeometry): void {
  writer.byte(LITTLE_ENDIAN);
  writer.integer(WKB_TYPES[geometry.type]);
  switch (geometry.type) {
    case 'Point':
      writer.real(geometry.coordinates[0]!);
      writer.real(geometry.coordinates[1]!);
      break;
    case 'LineString':
      writer.path(geometry.coordinates);
      break;
    case 'Polygon':
      writer.integer(geometry.coordinates.length);
      for (const ring of orientRings(geometry.coordinates, 'counter-clockwise')) writer.path(ring);
      break;
    default: {
      const parts = partsOf(geometry);
      writer.integer(parts.length);
      for (const part of parts) writeWkb(writer, part);
    }
  }
}

function partsOf(geometry: Extract<LayerGeometry, { type: 'MultiLineString' | 'MultiPolygon' }>): LayerGeometry[] {
  return geometry.type === 'MultiPolygon'
    ? geometry.coordinates.map(coordinates => ({ type: 'Polygon', coordinates }))
    : geometry.coordinates.map(coordinates => ({ type: 'LineString', coordinates }));
}
