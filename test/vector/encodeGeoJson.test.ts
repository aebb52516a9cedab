import type { FeatureCollection, Position } from 'geojson';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs } from '../../src/geodesy/crs.js';
import { encodeGeoJson } from '../../src/vector/encodeGeoJson.js';
import { eachPosition, mapPositions, polygonsOf, type LayerGeometry } from '../../src/vector/layerGeometry.js';
import { readVector } from '../../src/vector/readVector.js';
import { doubleRingArea, orientRings } from '../../src/vector/rings.js';
import type { Layer } from '../../src/vector/types.js';
import { openWithGdal } from '../support/gdal.js';
import { GEOMETRY_TYPES, layerOf, memoryFiles } from './layers.js';

const asItIs = (lon: number, lat: number): [number, number] => [lon, lat];
const parse = (bytes: Uint8Array): FeatureCollection => JSON.parse(new TextDecoder().decode(bytes)) as FeatureCollection;

function positions(geometry: LayerGeometry): Position[] {
  const list: Position[] = [];
  eachPosition(geometry, position => list.push(position));
  return list;
}

const wgs84 = (layer: Layer): Layer => ({ ...layer, crs: crs('EPSG:4326') });

describe('encodeGeoJson', () => {
  it.each(GEOMETRY_TYPES)('%s: GDAL sees WGS 84, count, types and values', async geometryType => {
    const layer = layerOf(geometryType);
    const { vector, messages } = await openWithGdal({ 'x.geojson': encodeGeoJson(layer, { toWgs84: asItIs }) }, { ogrinfo: ['-features', '-al'] });
    expect(messages).toEqual([]);
    const seen = vector!.layers[0]!;
    expect(seen.name).toBe(layer.name);
    expect(seen.featureCount).toBe(3);
    expect(seen.fields.map(field => [field.name, field.type])).toEqual([['name', 'String'], ['count', 'Integer64'], ['size_m', 'Real']]);
    expect(seen.geometryFields[0]!.coordinateSystem!.projjson!.id).toEqual({ authority: 'EPSG', code: 4326 });
    expect(seen.features!.map(feature => feature.properties)).toEqual([
      { name: 'Großer Őrség 北', count: 7, size_m: 12.35 }, { name: 'a, "b"', count: -2_000_000_000_123, size_m: null }, { name: null, count: null, size_m: 0 },
    ]);
  });

  it.each(GEOMETRY_TYPES)('%s: comes back where it was, to a tenth of a millimetre', async geometryType => {
    const layer = layerOf(geometryType);
    const back = await readVector('x.geojson', memoryFiles({ 'x.geojson': encodeGeoJson(layer, { toWgs84: asItIs }) }));
    for (const [i, { geometry }] of back.features.entries()) {
      const given = layer.features[i]!.geometry as LayerGeometry | null;
      if (!given) {
        expect(geometry).toBeNull();
        continue;
      }
      expect(geometry!.type).toBe(layer.geometryType);
      const metres = mapPositions(geometry as LayerGeometry, ([lon, lat]) => layer.crs.forward(lon!, lat!));
      // Rings may have been turned, so each place is looked for among the given ones.
      const wanted = positions(given);
      for (const [x, y] of positions(metres)) expect(Math.min(...wanted.map(([wx, wy]) => Math.hypot(x! - wx!, y! - wy!)))).toBeLessThan(1e-4);
      expect(positions(metres)).toHaveLength(wanted.length);
    }
  });

  it.each(['Polygon', 'MultiPolygon'] as const)('%s: outer rings counter-clockwise, holes clockwise', geometryType => {
    for (const { geometry } of parse(encodeGeoJson(layerOf(geometryType), { toWgs84: asItIs })).features) {
      if (!geometry) continue;
      for (const rings of polygonsOf(geometry as LayerGeometry)) expect(rings.map(ring => Math.sign(doubleRingArea(ring)))).toEqual(rings.map((_, i) => (i === 0 ? 1 : -1)));
    }
  });

  it('keeps to the members of RFC 7946', () => {
    const collection = parse(encodeGeoJson(layerOf('Point'), { toWgs84: asItIs })) as FeatureCollection & Record<string, unknown>;
    expect(collection).not.toHaveProperty('crs');
    expect(Object.keys(collection.features[0]!.properties!)).toEqual(['name', 'count', 'size_m']);
    const [west, south, east, north] = collection.bbox as [number, number, number, number];
    expect(west).toBeLessThan(east);
    expect(south).toBeLessThan(north);
    expect(collection.features[2]!.geometry).toBeNull();
    const [lon, lat] = (collection.features[0]!.geometry as { coordinates: Position }).coordinates;
    expect(lon).toBeLessThan(-70);
    expect(lat).toBeGreaterThan(39);
  });

  it('applies the datum shift and the decimals', () => {
    const layer: Layer = { ...layerOf('Point', [{ geometry: { type: 'Point', coordinates: [-80.123456789, 40] }, values: {} }]), crs: crs('EPSG:4267') };
    const shifted = parse(encodeGeoJson(layer, { toWgs84: (lon, lat) => [lon + 0.25, lat - 0.5], decimals: 4 }));
    expect(shifted.features[0]!.geometry).toEqual({ type: 'Point', coordinates: [-79.8735, 39.5] });
    expect(shifted.bbox).toEqual([-79.8735, 39.5, -79.8735, 39.5]);
  });

  it('does not write a place that got lost on the way to WGS 84', () => {
    expect(() => encodeGeoJson(layerOf('Point'), { toWgs84: lon => [lon, NaN] })).toThrow('no longitude');
  });

  it('writes a layer of nothing without a bbox', () => {
    const empty = parse(encodeGeoJson(layerOf('Point', []), { toWgs84: asItIs }));
    expect(empty.features).toEqual([]);
    expect(empty.bbox).toBeUndefined();
  });

  it('refuses a line across the antimeridian, and bounds points on both sides of it', () => {
    const line = wgs84(layerOf('LineString', [{ geometry: { type: 'LineString', coordinates: [[179.9, 51], [-179.9, 51]] }, values: {} }]));
    expect(() => encodeGeoJson(line, { toWgs84: asItIs })).toThrow(UserError);
    const points = wgs84(layerOf('Point', [179.9, -179.8].map(lon => ({ geometry: { type: 'Point', coordinates: [lon, 51] }, values: {} }))));
    expect(parse(encodeGeoJson(points, { toWgs84: asItIs })).bbox!.map(bound => Math.round(bound * 10) / 10)).toEqual([179.9, 51, -179.8, 51]);
  });
});

describe('rings', () => {
  const square: Position[] = [[0, 0], [2, 0], [2, 2], [0, 2], [0, 0]];
  it('has the area of the square, signed, far from the origin too', () => {
    expect(doubleRingArea(square)).toBe(8);
    expect(doubleRingArea(square.toReversed())).toBe(-8);
    expect(doubleRingArea(square.map(([x, y]) => [x! + 5e8, y! + 5e8]))).toBe(8);
  });
  it('turns what has to be turned and nothing else', () => {
    expect(orientRings([square, square], 'counter-clockwise')).toEqual([square, square.toReversed()]);
    expect(orientRings([square, square], 'clockwise')).toEqual([square.toReversed(), square]);
  });
});
