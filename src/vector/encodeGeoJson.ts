import type { Position } from 'geojson';
import { UserError } from '../errors.js';
import { ByteText } from '../table/byteText.js';
import { cellValue, roundTo } from './cellValue.js';
import { checkLayer } from './checkLayer.js';
import { emptyBox, growBox, layerGeometry, mapPositions, eachPosition, pathsOf, type Box, type LayerGeometry } from './layerGeometry.js';
import { orientRings } from './rings.js';
import type { Layer } from './types.js';

export interface GeoJsonOptions {
  /** Longitude and latitude (degrees) on the layer's own datum to those of WGS 84. */
  toWgs84(lonDeg: number, latDeg: number): readonly [lonDeg: number, latDeg: number];
  /** Decimals of a degree; 9 are a tenth of a millimetre, so that positions come back as they went in. */
  readonly decimals: number;
}
export const GEOJSON_DEFAULTS: Readonly<Pick<GeoJsonOptions, 'decimals'>> = Object.freeze({ decimals: 9 });

/**
 * A layer as a GeoJSON FeatureCollection, one feature a line: WGS 84, longitude first, outer rings counter-clockwise, no
 * `crs` member, a `bbox` where any feature has a place, properties in field order. A feature without a place has a null
 * geometry. A line or polygon across the antimeridian is refused, since it would have to be cut in two.
 * Source: RFC 7946, sections 3.1.6, 3.1.9, 3.2, 4 and 5.
 */
export function encodeGeoJson(layer: Layer, options: Pick<GeoJsonOptions, 'toWgs84'> & Partial<GeoJsonOptions>): Uint8Array {
  checkLayer(layer);
  const { toWgs84, decimals } = { ...GEOJSON_DEFAULTS, ...options };
  const move = ([x, y]: Position): Position => {
    const [lon, lat] = layer.crs.kind === 'geographic' ? [x!, y!] : layer.crs.inverse(x!, y!);
    const [lonDeg, latDeg] = toWgs84(lon, lat);
    if (!Number.isFinite(lonDeg) || !Number.isFinite(latDeg)) throw new Error(`layer ${layer.name}: ${x}, ${y} has no longitude and latitude`);
    return [roundTo(lonDeg, decimals), roundTo(latDeg, decimals)];
  };
  const geometries = layer.features.map((feature, index) => {
    const geometry = layerGeometry(layer, feature);
    return geometry && wound(uncut(mapPositions(geometry, move), `layer ${layer.name}, feature ${index + 1}`));
  });
  const out = new ByteText();
  out.text(`{"type":"FeatureCollection","name":${JSON.stringify(layer.name)},"title":${JSON.stringify(layer.title)},`);
  const box = bboxOf(geometries);
  if (box) out.text(`"bbox":${JSON.stringify(box)},`);
  out.text('"features":[');
  for (const [index, feature] of layer.features.entries()) {
    out.text(index === 0 ? '\n' : ',\n');
    const properties = layer.fields.map(field => `${JSON.stringify(field.name)}:${JSON.stringify(cellValue(field, feature))}`);
    out.text(`{"type":"Feature","geometry":${JSON.stringify(geometries[index]!)},"properties":{${properties.join(',')}}}`);
  }
  out.text('\n]}\n');
  return out.toBytes();
}

/** Outer rings counter-clockwise, seen in longitude and latitude. */
function wound(geometry: LayerGeometry): LayerGeometry {
  if (geometry.type === 'Polygon') return { type: 'Polygon', coordinates: orientRings(geometry.coordinates, 'counter-clockwise') };
  if (geometry.type === 'MultiPolygon') return { type: 'MultiPolygon', coordinates: geometry.coordinates.map(rings => orientRings(rings, 'counter-clockwise')) };
  return geometry;
}

/** Half of the globe: a step that is longer goes the other way round, across the antimeridian. */
const HALF_TURN_DEG = 180;

function uncut(geometry: LayerGeometry, where: string): LayerGeometry {
  for (const path of pathsOf(geometry)) {
    for (let i = 1; i < path.length; i++) {
      if (Math.abs(path[i]![0]! - path[i - 1]![0]!) <= HALF_TURN_DEG) continue;
      throw new UserError({
        code: 'position_invalid', where, found: 'a shape across the antimeridian (longitude 180°)', wanted: 'shapes on one side of it in GeoJSON',
        advice: 'use the FlatGeobuf layer in the project\'s own CRS',
      });
    }
  }
  return geometry;
}

/** Bounds in degrees; west is greater than east where the features lie on both sides of the antimeridian (section 5.2). */
function bboxOf(geometries: ReadonlyArray<LayerGeometry | null>): Box | null {
  const plain = emptyBox();
  const turned = emptyBox();
  for (const geometry of geometries) {
    if (!geometry) continue;
    eachPosition(geometry, ([lon, lat]) => {
      growBox(plain, lon!, lat!);
      growBox(turned, lon! < 0 ? lon! + 2 * HALF_TURN_DEG : lon!, lat!);
    });
  }
  if (plain[0] > plain[2]) return null;
  return plain[2] - plain[0] <= Math.max(HALF_TURN_DEG, turned[2] - turned[0]) ? plain : [turned[0], turned[1], turned[2] - 2 * HALF_TURN_DEG, turned[3]];
}
