import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { Feature as GeoJsonFeature } from 'geojson';
import { deserialize } from 'flatgeobuf/lib/mjs/geojson.js';
import { Random } from '../../src/numerics/random.js';
import { US_SURVEY_FOOT_M } from '../../src/units.js';
import { encodeFlatGeobuf } from '../../src/vector/encodeFlatGeobuf.js';
import { hilbertIndex } from '../../src/vector/hilbert.js';
import { boxOf, type Box } from '../../src/vector/layerGeometry.js';
import { levelStarts } from '../../src/vector/packedRTree.js';
import { readFlatGeobuf } from '../../src/vector/readFlatGeobuf.js';
import type { Feature } from '../../src/vector/types.js';
import { openWithGdal } from '../support/gdal.js';
import { GEOMETRY_TYPES, layerOf, memoryFiles, X0, Y0 } from './layers.js';

// The package's reader talks to the console; its talk is not ours to show.
beforeEach(() => { vi.spyOn(console, 'debug').mockImplementation(() => undefined); });
afterEach(() => { vi.restoreAllMocks(); });

/** The package's own reader: through the index, the features that meet a box in the file's units. */
async function readWithPackage(bytes: Uint8Array, box: Box): Promise<GeoJsonFeature[]> {
  const found: GeoJsonFeature[] = [];
  const rect = { minX: box[0], minY: box[1], maxX: box[2], maxY: box[3] };
  for await (const feature of deserialize(bytes, { rect })) found.push(feature as GeoJsonFeature);
  return found;
}

/** Points in clumps, lines and lone places, some without any, in metres. */
function scattered(count: number, seed: number): Feature[] {
  const random = new Random(seed);
  return Array.from({ length: count }, (_, i) => {
    const clump = random.integer(5) * 400;
    const x = X0 + clump + random.normal() * 60;
    const y = Y0 + clump / 2 + random.normal() * 30;
    const values = { name: `n${i}`, count: i, size_m: i / 8 };
    return { values, geometry: i % 97 === 5 ? null : { type: 'LineString', coordinates: [[x, y], i % 3 === 0 ? [x, y] : [x + random.normal() * 10, y + random.normal() * 10]] } };
  });
}

describe('hilbertIndex', () => {
  it('steps to a neighbour each time and meets every cell of a corner once', () => {
    const cells = Array.from({ length: 64 * 64 }, (_, i) => [i % 64, i >> 6] as const);
    const byPlace = new Map(cells.map(([x, y]) => [hilbertIndex(x, y), [x, y] as const]));
    const places = [...byPlace.keys()].toSorted((a, b) => a - b);
    expect(places).toHaveLength(64 * 64);
    expect(places.at(-1)! - places[0]!).toBe(64 * 64 - 1);
    for (let i = 1; i < places.length; i++) {
      const [x0, y0] = byPlace.get(places[i - 1]!)!;
      const [x1, y1] = byPlace.get(places[i]!)!;
      expect(Math.abs(x1 - x0) + Math.abs(y1 - y0)).toBe(1);
    }
  });
});

describe('levelStarts', () => {
  it.each([[1, 2], [2, 3], [16, 17], [17, 20], [256, 273], [257, 277]])('%d leaves make %d nodes', (leaves, nodes) => {
    expect(levelStarts(leaves).at(-1)!.end).toBe(nodes);
  });
});

describe('encodeFlatGeobuf', () => {
  it.each(GEOMETRY_TYPES)('%s: GDAL sees CRS, extent, count, types and values', async geometryType => {
    const layer = layerOf(geometryType);
    const { vector, messages } = await openWithGdal({ 'x.fgb': encodeFlatGeobuf(layer) }, { ogrinfo: ['-features', '-al'] });
    expect(messages).toEqual([]);
    const seen = vector!.layers[0]!;
    expect(seen.name).toBe(layer.name);
    expect(seen.featureCount).toBe(3);
    expect(seen.fields.map(field => [field.name, field.type])).toEqual([['name', 'String'], ['count', 'Integer64'], ['size_m', 'Real']]);
    const place = seen.geometryFields[0]!;
    expect(place.type.replaceAll(' ', '').toLowerCase()).toBe(geometryType.toLowerCase());
    expect(place.coordinateSystem!.projjson!.id).toEqual({ authority: 'EPSG', code: 2272 });
    const extent = [Infinity, Infinity, -Infinity, -Infinity];
    for (const { geometry } of layer.features) {
      const box = boxOf(geometry);
      for (const i of [0, 1]) extent[i] = Math.min(extent[i]!, box[i]! / US_SURVEY_FOOT_M);
      for (const i of [2, 3]) extent[i] = Math.max(extent[i]!, box[i]! / US_SURVEY_FOOT_M);
    }
    place.extent!.forEach((bound, i) => expect(bound).toBeCloseTo(extent[i]!, 6));
    const byCount = new Map(seen.features!.map(feature => [feature.properties.count, feature]));
    expect(byCount.get(7)!.properties).toEqual({ name: 'Großer Őrség 北', count: 7, size_m: 12.35 });
    expect(byCount.get(-2_000_000_000_123)!.properties).toEqual({ name: 'a, "b"', count: -2_000_000_000_123 });
    expect(byCount.get(undefined)).toMatchObject({ properties: { size_m: 0 }, geometry: null });
  });

  it('reads a box through the index exactly as a full scan does', async () => {
    for (const count of [1, 2, 16, 17, 300, 3000]) {
      const features = scattered(count, count);
      const bytes = encodeFlatGeobuf(layerOf('LineString', features));
      const boxes = features.map(({ geometry }) => boxOf(geometry).map(bound => bound / US_SURVEY_FOOT_M) as Box);
      const all = await readFlatGeobuf('x.fgb', memoryFiles({ 'x.fgb': bytes }));
      expect(all.features.map(feature => feature.properties.count as number).toSorted((a, b) => a - b)).toEqual(features.map((_, i) => i));
      const random = new Random(count + 1);
      for (let k = 0; k < 40; k++) {
        const middle = boxes[random.integer(count)]!;
        // Every fourth query is a single point that lies on a feature's corner; others grow to hundreds of feet.
        const half = k % 4 === 0 ? 0 : random.uniform() ** 3 * 1500;
        const [x, y] = Number.isFinite(middle[0]) ? [middle[0], middle[1]] : [X0 / US_SURVEY_FOOT_M, Y0 / US_SURVEY_FOOT_M];
        const query: Box = [x - half, y - half / 2, x + half / 3, y + half];
        const scan = boxes.flatMap((box, i) => (box[0] <= query[2] && box[2] >= query[0] && box[1] <= query[3] && box[3] >= query[1] ? [i] : []));
        const found = (await readWithPackage(bytes, query)).map(feature => feature.properties!.count as number);
        expect(found.toSorted((a, b) => a - b)).toEqual(scan);
      }
    }
  });

  it('reads the same boxes through GDAL', async () => {
    const random = new Random(8);
    const features: Feature[] = Array.from({ length: 2000 }, (_, i) => ({ geometry: { type: 'Point', coordinates: [X0 + random.uniform() * 900, Y0 + random.uniform() * 700] }, values: { count: i } }));
    const bytes = encodeFlatGeobuf(layerOf('Point', features));
    for (let k = 0; k < 5; k++) {
      const [west, south] = [X0 + random.uniform() * 600, Y0 + random.uniform() * 500];
      const [east, north] = [west + 20 + random.uniform() * 200, south + 20 + random.uniform() * 200];
      const spat = [west, south, east, north].map(bound => String(bound / US_SURVEY_FOOT_M));
      const { vector } = await openWithGdal({ 'x.fgb': bytes }, { ogrinfo: ['-al', '-features', '-spat', ...spat] });
      const inside = features.flatMap(({ geometry }, i) => {
        const [x, y] = boxOf(geometry);
        return x >= west && x <= east && y >= south && y <= north ? [i] : [];
      });
      expect(inside.length).toBeGreaterThan(0);
      expect(vector!.layers[0]!.features!.map(feature => feature.properties.count as number).toSorted((a, b) => a - b)).toEqual(inside);
    }
  });

  it('writes a layer of nothing, and one of places unknown, without an index', async () => {
    for (const features of [[], [{ geometry: null, values: { name: 'lost' } }]]) {
      const { vector, messages } = await openWithGdal({ 'x.fgb': encodeFlatGeobuf(layerOf('Polygon', features)) }, { ogrinfo: ['-features', '-al'] });
      expect(messages).toEqual([]);
      expect(vector!.layers[0]!.featureCount).toBe(features.length);
      expect(vector!.layers[0]!.geometryFields[0]!.coordinateSystem!.projjson!.id!.code).toBe(2272);
    }
  });

  it('gives the same bytes again', () => {
    const layer = layerOf('LineString', scattered(500, 3));
    expect(encodeFlatGeobuf(layer)).toEqual(encodeFlatGeobuf(layer));
  });
});
