import { describe, expect, it } from 'vitest';
import { US_SURVEY_FOOT_M } from '../../src/units.js';
import { encodeShapefile } from '../../src/vector/encodeShapefile.js';
import { boxOf, eachPosition, layerGeometry, polygonsOf, type LayerGeometry } from '../../src/vector/layerGeometry.js';
import { readVector } from '../../src/vector/readVector.js';
import { doubleRingArea } from '../../src/vector/rings.js';
import type { Layer } from '../../src/vector/types.js';
import { openWithGdal } from '../support/gdal.js';
import { complaintOf } from './complaint.js';
import { GEOMETRY_TYPES, layerOf, memoryFiles } from './layers.js';

const filesOf = (layer: Layer): Record<string, Uint8Array> => Object.fromEntries(Object.entries(encodeShapefile(layer)).map(([ending, bytes]) => [`x.${ending}`, bytes]));

const polygonFiles = (): Record<string, Uint8Array> => filesOf(layerOf('Polygon'));

function count(geometry: LayerGeometry): number {
  let positions = 0;
  eachPosition(geometry, () => positions++);
  return positions;
}

/** Twice the area, holes taken off, whichever way the rings run. */
function area(geometry: LayerGeometry): number {
  let sum = 0;
  for (const rings of polygonsOf(geometry)) for (const [k, ring] of rings.entries()) sum += (k === 0 ? 1 : -1) * Math.abs(doubleRingArea(ring));
  return sum;
}

const without = (...endings: string[]): Record<string, Uint8Array> =>
  Object.fromEntries(Object.entries(polygonFiles()).filter(([name]) => !endings.some(ending => name.endsWith(ending))));

describe('encodeShapefile', () => {
  it.each(GEOMETRY_TYPES)('%s: GDAL sees CRS, extent, count, types and values', async geometryType => {
    const layer = layerOf(geometryType);
    const { vector, messages } = await openWithGdal(filesOf(layer), { ogrinfo: ['-features', '-al'] });
    expect(messages).toEqual([]);
    const seen = vector!.layers[0]!;
    expect(seen.featureCount).toBe(3);
    expect(seen.fields.map(field => [field.name, field.type])).toEqual([['name', 'String'], ['count', 'Integer64'], ['size_m', 'Real']]);
    expect(seen.geometryFields[0]!.coordinateSystem!.projjson!.id).toEqual({ authority: 'EPSG', code: 2272 });
    const boxes = layer.features.flatMap(({ geometry }) => (geometry ? [boxOf(geometry)] : []));
    const bounds = [0, 1].map(i => Math.min(...boxes.map(box => box[i]!))).concat([2, 3].map(i => Math.max(...boxes.map(box => box[i]!))));
    seen.geometryFields[0]!.extent!.forEach((bound, i) => expect(bound).toBeCloseTo(bounds[i]! / US_SURVEY_FOOT_M, 6));
    expect(seen.features!.map(feature => feature.properties)).toEqual([
      { name: 'Großer Őrség 北', count: 7, size_m: 12.35 }, { name: 'a, "b"', count: -2_000_000_000_123, size_m: null }, { name: null, count: null, size_m: 0 },
    ]);
  });

  it.each(GEOMETRY_TYPES)('%s: comes back as it was', async geometryType => {
    const layer = layerOf(geometryType);
    const back = await readVector('x.shp', memoryFiles(filesOf(layer)));
    expect(back.crs.code).toBe('EPSG:2272');
    expect(back.notes).toEqual([]);
    expect(back.features.map(feature => feature.properties)).toEqual([
      { name: 'Großer Őrség 北', count: 7, size_m: 12.35 }, { name: 'a, "b"', count: -2_000_000_000_123, size_m: null }, { name: null, count: null, size_m: 0 },
    ]);
    for (const [i, feature] of layer.features.entries()) {
      const given = layerGeometry(layer, feature);
      const got = back.features[i]!.geometry as LayerGeometry | null;
      if (!given) {
        expect(got).toBeNull();
        continue;
      }
      expect(count(got!)).toBe(count(given));
      boxOf(got).forEach((bound, k) => expect(bound).toBeCloseTo(boxOf(given)[k]!, 8));
      expect(area(got!)).toBeCloseTo(area(given), 4);
      for (const rings of polygonsOf(got!)) expect(rings.map(ring => Math.sign(doubleRingArea(ring)))).toEqual(rings.map((_, k) => (k === 0 ? -1 : 1)));
    }
  });

  it('keeps every digit of a real without stated decimals', async () => {
    const values = [Math.PI, -1.2345678901234567e-100, 1e21, 0.1 + 0.2, -123456789.12345679];
    const layer: Layer = { ...layerOf('Point'), fields: [{ name: 'v', type: 'real', title: '' }], features: values.map(v => ({ geometry: { type: 'Point', coordinates: [5e5, 1e5] }, values: { v } })) };
    const back = await readVector('x.shp', memoryFiles(filesOf(layer)));
    expect(back.features.map(feature => feature.properties.v)).toEqual(values);
  });

  it('cuts a text at a whole letter where dBASE ends', async () => {
    const layer = layerOf('Point', [{ geometry: { type: 'Point', coordinates: [5e5, 1e5] }, values: { name: 'ő'.repeat(200) } }]);
    const back = await readVector('x.shp', memoryFiles(filesOf(layer)));
    expect(back.features[0]!.properties.name).toBe(`${'ő'.repeat(125)}…`);
  });

  it('writes a layer of nothing', async () => {
    const { vector, messages } = await openWithGdal(filesOf(layerOf('Polygon', [])));
    expect(messages).toEqual([]);
    expect(vector!.layers[0]!.featureCount).toBe(0);
  });
});

describe('reading a Shapefile', () => {

  it('asks for the CRS where there is no .prj', async () => {
    const said = await complaintOf(readVector('x.shp', memoryFiles(without('.prj'))));
    expect(said).toMatchObject({ code: 'crs_missing', where: 'x.shp' });
    expect(said.advice).toContain('.prj');
  });
  it('takes the CRS that is stated, and refuses one that differs from the file\'s own', async () => {
    const { crs } = layerOf('Polygon');
    expect((await readVector('x.shp', memoryFiles(without('.prj')), { crs })).crs.code).toBe('EPSG:2272');
    const other = { ...crs, epsg: 2271, code: 'EPSG:2271' };
    expect(await complaintOf(readVector('x.shp', memoryFiles(polygonFiles()), { crs: other }))).toMatchObject({ code: 'key_invalid' });
  });
  it('does without a .dbf and says so', async () => {
    const back = await readVector('x.shp', memoryFiles(without('.dbf')));
    expect(back.features.map(feature => feature.properties)).toEqual([{}, {}, {}]);
    expect(back.notes[0]).toContain('.dbf');
  });
  it('says which encoding it took where there is no .cpg', async () => {
    expect((await readVector('x.shp', memoryFiles(without('.cpg')))).notes[0]).toContain('Windows-1252');
  });
  it('finds the parts in upper case', async () => {
    const upper = Object.fromEntries(Object.entries(polygonFiles()).map(([name, bytes]) => [name === 'x.shp' ? name : `x.${name.slice(2).toUpperCase()}`, bytes]));
    const back = await readVector('x.shp', memoryFiles(upper));
    expect([back.crs.code, back.features[0]!.properties.name]).toEqual(['EPSG:2272', 'Großer Őrség 北']);
  });
  it.each([
    ['nothing', (shp: Uint8Array) => shp.slice(0, 0), 'file_empty'],
    ['a text', () => new TextEncoder().encode('hello '.repeat(30)), 'file_unreadable'],
    ['half of it', (shp: Uint8Array) => shp.slice(0, shp.length / 2), 'file_unreadable'],
  ])('refuses %s', async (_, damage, code) => {
    const files = polygonFiles();
    expect(await complaintOf(readVector('x.shp', memoryFiles({ ...files, 'x.shp': damage(files['x.shp']!) })))).toMatchObject({ code, where: 'x.shp' });
  });
  it('refuses rows that do not fit the shapes', async () => {
    const other = filesOf(layerOf('Polygon', layerOf('Polygon').features.slice(0, 2)));
    expect(await complaintOf(readVector('x.shp', memoryFiles({ ...polygonFiles(), 'x.dbf': other['x.dbf']! })))).toMatchObject({ code: 'file_unreadable', where: 'x.shp' });
  });
  it('refuses an encoding that it does not know', async () => {
    const said = await complaintOf(readVector('x.shp', memoryFiles({ ...polygonFiles(), 'x.cpg': 'KLINGON' })));
    expect(said).toMatchObject({ code: 'file_unreadable', where: 'x.cpg' });
  });
});
