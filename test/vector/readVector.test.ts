import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { US_SURVEY_FOOT_M } from '../../src/units.js';
import { encodeFlatGeobuf } from '../../src/vector/encodeFlatGeobuf.js';
import { encodeGeoJson } from '../../src/vector/encodeGeoJson.js';
import { boxOf, layerGeometry } from '../../src/vector/layerGeometry.js';
import { readVector } from '../../src/vector/readVector.js';
import type { VectorInput } from '../../src/vector/types.js';
import { complaintOf } from './complaint.js';
import { GEOMETRY_TYPES, layerOf, memoryFiles } from './layers.js';

const json = (document: unknown): Promise<VectorInput> => readVector('x.geojson', memoryFiles({ 'x.geojson': typeof document === 'string' ? document : JSON.stringify(document) }));
const point = (...coordinates: number[]): object => ({ type: 'Feature', properties: { a: 1 }, geometry: { type: 'Point', coordinates } });
const named = (name: string, ...coordinates: number[]): object => ({ type: 'FeatureCollection', crs: { type: 'name', properties: { name } }, features: [point(...coordinates)] });

describe('GeoJSON', () => {
  it('is WGS 84 where nothing else is said, as collection, feature or geometry', async () => {
    for (const document of [{ type: 'FeatureCollection', features: [point(-80, 40)] }, point(-80, 40), { type: 'Point', coordinates: [-80, 40] }]) {
      const input = await json(document);
      expect(input.crs.code).toBe('EPSG:4326');
      expect(input.rows).toBe(1);
      expect(input.features[0]!.geometry).toEqual({ type: 'Point', coordinates: [-80, 40] });
    }
  });
  it('honours the crs member of the old format, feet to metres', async () => {
    const input = await json(named('urn:ogc:def:crs:EPSG::2272', 1_500_000, 400_000));
    expect(input.crs.code).toBe('EPSG:2272');
    expect(input.features[0]!.geometry).toEqual({ type: 'Point', coordinates: [1_500_000 * US_SURVEY_FOOT_M, 400_000 * US_SURVEY_FOOT_M] });
    expect((await json(named('urn:ogc:def:crs:OGC:1.3:CRS84', -80, 40))).crs.code).toBe('EPSG:4326');
    expect((await json(named('EPSG:4267', -80, 40))).crs.datum).toBe('NAD27');
  });
  it('leaves heights out and says so', async () => {
    const input = await json(point(-80, 40, 300));
    expect(input.features[0]!.geometry).toEqual({ type: 'Point', coordinates: [-80, 40] });
    expect(input.notes[0]).toContain('heights of 1');
  });
  it('keeps values that a table can hold', async () => {
    const input = await json({ type: 'Feature', geometry: null, properties: { t: 'x', n: 1.5, b: true, z: null, deep: { k: [1] } } });
    expect(input.features[0]).toEqual({ geometry: null, properties: { t: 'x', n: 1.5, b: true, z: null, deep: '{"k":[1]}' } });
  });

  it.each<[string, unknown, string]>([
    ['empty text', '', 'file_empty'],
    ['no features', { type: 'FeatureCollection', features: [] }, 'file_empty'],
    ['no JSON', '{"type": "Feature', 'file_unreadable'],
    ['other JSON', '[1, 2]', 'file_unreadable'],
    ['other type', { type: 'Topology' }, 'file_unreadable'],
    ['feature that is none', { type: 'FeatureCollection', features: [7] }, 'file_unreadable'],
    ['null crs', { ...point(-80, 40), crs: null }, 'crs_missing'],
    ['linked crs', { ...point(-80, 40), crs: { type: 'link', properties: { href: 'x' } } }, 'crs_unknown'],
    ['unknown crs', named('EPSG:999999', 1, 1), 'crs_unknown'],
    ['metres as degrees', point(456_000, 4_400_000), 'position_invalid'],
    ['swapped axes', point(40, -100), 'coordinates_swapped'],
    ['degrees as feet', named('EPSG:2272', -80, 40), 'position_invalid'],
    ['text among coordinates', { type: 'Point', coordinates: ['-80', '40'] }, 'position_invalid'],
    ['one number', { type: 'Point', coordinates: [-80] }, 'position_invalid'],
    ['wrong depth', { type: 'Polygon', coordinates: [[0, 0], [1, 0], [1, 1], [0, 0]] }, 'position_invalid'],
    ['unknown geometry', { type: 'Circle', coordinates: [0, 0] }, 'position_invalid'],
    ['short line', { type: 'LineString', coordinates: [[0, 0]] }, 'position_invalid'],
    ['open ring', { type: 'Polygon', coordinates: [[[0, 0], [1, 0], [1, 1], [0, 1]]] }, 'polygon_invalid'],
    ['ring of two', { type: 'Polygon', coordinates: [[[0, 0], [1, 0], [0, 0]]] }, 'polygon_invalid'],
  ])('refuses: %s', async (_, document, code) => {
    const said = await complaintOf(json(document));
    expect(said.code).toBe(code);
    expect(said.where).toMatch(/^x\.geojson/);
  });
  it('names the feature', async () => {
    const said = await complaintOf(json({ type: 'FeatureCollection', features: [point(-80, 40), point(-80, 140)] }));
    expect(said.where).toBe('x.geojson, feature 2');
  });
});

describe('FlatGeobuf', () => {
  it.each(GEOMETRY_TYPES)('%s: comes back as it was', async geometryType => {
    const layer = layerOf(geometryType);
    const back = await readVector('x.fgb', memoryFiles({ 'x.fgb': encodeFlatGeobuf(layer) }));
    expect(back.crs.code).toBe('EPSG:2272');
    expect(back.rows).toBe(3);
    for (const { geometry, properties } of back.features) {
      const given = layer.features.find(feature => feature.values.count === properties.count)!;
      expect(properties.name).toBe(given.values.name);
      expect(geometry?.type).toBe(layerGeometry(layer, given)?.type);
      boxOf(geometry).forEach((bound, i) => expect(bound).toBeCloseTo(boxOf(given.geometry)[i]!, 8));
    }
    // From then on the same features in the same order give the same bytes: nothing is lost on the way.
    const again = { ...layer, features: back.features.map(({ geometry, properties }) => ({ geometry, values: properties as Record<string, string | number | null> })) };
    const twice = await readVector('x.fgb', memoryFiles({ 'x.fgb': encodeFlatGeobuf(again) }));
    expect(twice.features.map(feature => feature.properties)).toEqual(back.features.map(feature => feature.properties));
  });
  it.each([
    ['nothing', (bytes: Uint8Array) => bytes.slice(0, 0), 'file_empty'],
    ['other bytes', (bytes: Uint8Array) => bytes.map(byte => byte ^ 1), 'file_unreadable'],
    ['a file cut short', (bytes: Uint8Array) => bytes.slice(0, -30), 'file_unreadable'],
    ['a head alone', (bytes: Uint8Array) => bytes.slice(0, 20), 'file_unreadable'],
  ])('refuses %s', async (_, damage, code) => {
    expect(await complaintOf(readVector('x.fgb', memoryFiles({ 'x.fgb': damage(encodeFlatGeobuf(layerOf('Polygon'))) })))).toMatchObject({ code, where: 'x.fgb' });
  });
});

describe('readVector', () => {
  it('does not know other endings', async () => {
    for (const name of ['x.kml', 'x']) expect(await complaintOf(readVector(name, memoryFiles({ [name]: 'x' })))).toMatchObject({ code: 'file_unreadable', where: name });
  });
  it('passes on that a file is missing', async () => expect(await complaintOf(readVector('far/x.fgb', memoryFiles({})))).toMatchObject({ code: 'file_missing' }));
  it('takes an agreeing CRS that is stated', async () => {
    const files = memoryFiles({ 'x.json': encodeGeoJson(layerOf('Point'), { toWgs84: (lon, lat) => [lon, lat] }) });
    expect((await readVector('x.json', files, { crs: crs('EPSG:4326') })).crs.code).toBe('EPSG:4326');
    expect((await readVector('x.json', files, { crs: crs('EPSG:4269') })).crs.code).toBe('EPSG:4269');
    const saying = memoryFiles({ 'x.json': JSON.stringify(named('EPSG:4267', -80, 40)) });
    expect(await complaintOf(readVector('x.json', saying, { crs: crs('EPSG:4269') }))).toMatchObject({ code: 'key_invalid' });
  });
});
