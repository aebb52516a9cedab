import sqlite3InitModule from '@sqlite.org/sqlite-wasm';
import { beforeAll, describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { US_SURVEY_FOOT_M } from '../../src/units.js';
import { encodeGeoPackage, type Sqlite } from '../../src/vector/encodeGeoPackage.js';
import { boxOf } from '../../src/vector/layerGeometry.js';
import type { Feature, Layer } from '../../src/vector/types.js';
import { hasPythonModule, runPython } from '../support/debianTools.js';
import { openWithGdal } from '../support/gdal.js';
import { GEOMETRY_TYPES, layerOf, X0, Y0 } from './layers.js';

let sqlite: Sqlite;
beforeAll(async () => { sqlite = (await sqlite3InitModule()) as unknown as Sqlite; });

const VALIDATOR = 'osgeo_utils.samples.validate_gpkg';
const all = (): Layer[] => GEOMETRY_TYPES.map(type => layerOf(type));

describe('encodeGeoPackage', () => {
  it('GDAL sees CRS, extent, count, types and values of every layer', async () => {
    const layers = all();
    const { vector, messages } = await openWithGdal({ 'x.gpkg': encodeGeoPackage(layers, sqlite) }, { ogrinfo: ['-features', '-al'] });
    expect(messages).toEqual([]);
    expect(vector!.layers.map(layer => layer.name)).toEqual(layers.map(layer => layer.name));
    for (const [i, seen] of vector!.layers.entries()) {
      const layer = layers[i]!;
      expect(seen.featureCount).toBe(3);
      expect(seen.fields.map(field => [field.name, field.type])).toEqual([['name', 'String'], ['count', 'Integer64'], ['size_m', 'Real']]);
      const place = seen.geometryFields[0]!;
      expect(place.type.replaceAll(' ', '').toLowerCase()).toBe(layer.geometryType.toLowerCase());
      expect(place.coordinateSystem!.projjson!.id).toEqual({ authority: 'EPSG', code: 2272 });
      const boxes = layer.features.flatMap(({ geometry }) => (geometry ? [boxOf(geometry)] : []));
      expect(place.extent![0]).toBeCloseTo(Math.min(...boxes.map(box => box[0])) / US_SURVEY_FOOT_M, 6);
      expect(place.extent![3]).toBeCloseTo(Math.max(...boxes.map(box => box[3])) / US_SURVEY_FOOT_M, 6);
      expect(seen.features!.map(feature => feature.properties)).toEqual([
        { name: 'Großer Őrség 北', count: 7, size_m: 12.35 }, { name: 'a, "b"', count: -2_000_000_000_123, size_m: null }, { name: null, count: null, size_m: 0 },
      ]);
      expect(seen.features![2]!.geometry).toBeNull();
    }
  });

  it('finds through its R-tree what lies in a box', async () => {
    const features: Feature[] = Array.from({ length: 900 }, (_, i) => ({ geometry: { type: 'Point', coordinates: [X0 + (i % 30) * 10, Y0 + Math.floor(i / 30) * 10] }, values: { count: i } }));
    const bytes = encodeGeoPackage([layerOf('Point', features)], sqlite);
    const spat = [X0 + 95, Y0 + 35, X0 + 125, Y0 + 65].map(bound => String(bound / US_SURVEY_FOOT_M));
    const { vector } = await openWithGdal({ 'x.gpkg': bytes }, { ogrinfo: ['-al', '-features', '-spat', ...spat] });
    const inside = [4, 5, 6].flatMap(row => [10, 11, 12].map(column => row * 30 + column));
    expect(vector!.layers[0]!.features!.map(feature => feature.properties.count as number).toSorted((a, b) => a - b)).toEqual(inside);
  });

  it('holds layers in several systems, and one of nothing', async () => {
    const wgs84: Layer = { ...layerOf('Point', [{ geometry: { type: 'Point', coordinates: [-80, 40] }, values: {} }]), name: 'degrees', crs: crs('EPSG:4326') };
    const { vector, messages } = await openWithGdal({ 'x.gpkg': encodeGeoPackage([wgs84, layerOf('Polygon', [])], sqlite) }, { ogrinfo: ['-al'] });
    expect(messages).toEqual([]);
    expect(vector!.layers.map(layer => [layer.featureCount, layer.geometryFields[0]!.coordinateSystem!.projjson!.id!.code])).toEqual([[1, 4326], [0, 2272]]);
  });

  it('gives the same bytes again, whatever was written before', () => {
    const first = encodeGeoPackage(all(), sqlite);
    encodeGeoPackage([layerOf('Point', [])], sqlite);
    expect(encodeGeoPackage(all(), sqlite)).toEqual(first);
  });

  it.skipIf(!hasPythonModule(VALIDATOR))('passes Debian\'s validator', () => {
    const run = runPython(['-m', VALIDATOR, '{x.gpkg}'], { 'x.gpkg': encodeGeoPackage(all(), sqlite) });
    expect(`${run.stdout}${run.stderr}`).not.toMatch(/Req|Error|Traceback/);
    expect(run.status).toBe(0);
  });

  it.skipIf(!hasPythonModule('osgeo.ogr'))('keeps its R-tree true when GDAL edits a row', () => {
    const script = `
import sys
from osgeo import ogr
ogr.UseExceptions()
d = ogr.Open(sys.argv[1], 1)
l = d.GetLayer(0)
f = l.GetFeature(1)
f.SetGeometry(ogr.CreateGeometryFromWkt('POINT (5000 6000)'))
l.SetFeature(f)
l.DeleteFeature(2)
g = ogr.Feature(l.GetLayerDefn())
g.SetGeometry(ogr.CreateGeometryFromWkt('POINT (7000 8000)'))
l.CreateFeature(g)
r = d.ExecuteSQL('SELECT id, minx, maxy FROM rtree_test_point_geom ORDER BY id')
print([(x.GetField(0), round(x.GetField(1)), round(x.GetField(2))) for x in r])
`;
    const run = runPython(['{edit.py}', '{x.gpkg}'], { 'x.gpkg': encodeGeoPackage([layerOf('Point')], sqlite), 'edit.py': new TextEncoder().encode(script) });
    expect(run.stderr).toBe('');
    expect(run.stdout.trim()).toBe('[(1, 5000, 6000), (4, 7000, 8000)]');
  });
});
