import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { parsePlssId } from '../../../src/geodesy/sections/plssId.js';
import { meridianCode, meridianName } from '../../../src/geodesy/sections/principalMeridians.js';
import { sectionLayer } from '../../../src/geodesy/sections/sectionLayer.js';
import type { SectionFeatures, SectionReference } from '../../../src/geodesy/sections/types.js';
import { MADE_FRAME, polygonOf, SQUARE } from './madeSection.js';

type Properties = SectionFeatures['features'][number]['properties'];

const GEOMETRY = polygonOf(SQUARE);
const REFERENCE: SectionReference = { township: 7, townshipDir: 'N', range: 12, rangeDir: 'W', section: 3 };

function features(...list: readonly Properties[]): SectionFeatures {
  return { source: 'sections.geojson', crs: MADE_FRAME, features: list.map((properties) => ({ geometry: GEOMETRY, properties })) };
}

function complaint(run: () => unknown): { code: string; message: string } {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return { code: error.code, message: error.message };
    throw error;
  }
  return { code: 'none', message: '' };
}

describe('parsePlssId', () => {
  it('reads the parts of an identifier', () => {
    // Source: the township of the three check sections: Oregon, Willamette Meridian, T 35 S, R 29 E.
    expect(parsePlssId('OR330350S0290E0')).toEqual({
      state: 'OR', meridian: '33', township: 35, townshipQuarters: 0, townshipDir: 'S', range: 29, rangeQuarters: 0, rangeDir: 'E', duplicate: '0',
    });
    expect(parsePlssId(' wy060122N1003WA ')).toEqual({
      state: 'WY', meridian: '06', township: 12, townshipQuarters: 2, townshipDir: 'N', range: 100, rangeQuarters: 3, rangeDir: 'W', duplicate: 'A',
    });
  });

  it('is null for anything else', () => {
    for (const text of ['', 'OR330350S0290E', 'OR330350S0290E00', '33OR0350S0290E0', 'OR330350X0290E0', 'OR330350S0290N0', 'OR330354S0290E0', 'T35S R29E']) expect(parsePlssId(text)).toBeNull();
  });
});

describe('meridianCode', () => {
  it('reads names as they are written, and codes', () => {
    for (const [text, code] of [
      ['Willamette', '33'], ['WILLAMETTE MERIDIAN', '33'], ['33', '33'], ['6', '06'], ['6th P.M.', '06'], ['Sixth Principal Meridian', '06'], ['6th PM', '06'],
      ['Indian Meridian', '17'], ['New Mexico Principal', '23'], ['Mt. Diablo', '21'], ['Montana Principal Meridian', '20'], ['Principal', '20'], ['Gila & Salt River', '14'],
      ['4th Principal Extended', '46'], ['St. Helena', '24'],
    ] as const) expect(meridianCode(text), text).toBe(code);
    for (const text of ['', 'Greenwich', '7th P.M.', 'Will']) expect(meridianCode(text), text).toBeNull();
    expect(meridianName('14')).toBe('Gila and Salt River');
    expect(meridianName('33')).toBe('Willamette');
    expect(meridianName('99')).toBeNull();
  });
});

describe('sectionLayer', () => {
  const cadastral: Properties = { PLSSID: 'OH020070N0120W0', FRSTDIVNO: '03', FRSTDIVTYP: 'SN' };

  it('finds a section by the columns of CadNSDI, with or without its meridian', () => {
    const layer = sectionLayer(features(cadastral, { ...cadastral, FRSTDIVNO: '04' }));
    expect([layer.sections, layer.lots, layer.notes]).toEqual([2, 0, []]);
    expect(layer.section(REFERENCE, 'row 1').name).toBe('section 3, T7N R12W');
    expect(layer.section({ ...REFERENCE, meridian: 'Second' }, 'row 1').where).toBe('sections.geojson, feature 1');
    expect(layer.section({ ...REFERENCE, section: 4 }, 'row 1').where).toBe('sections.geojson, feature 2');
    expect(layer.section(REFERENCE, 'row 1')).toBe(layer.section(REFERENCE, 'row 9'));
  });

  it('says what it looked for where there is none, or more than one', () => {
    const layer = sectionLayer(features(cadastral, { ...cadastral, PLSSID: 'OH010070N0120W0' }));
    const none = complaint(() => layer.section({ ...REFERENCE, section: 9 }, 'permits.csv, row 4'));
    expect(none.code).toBe('position_invalid');
    expect(none.message).toMatch(/permits.csv, row 4: found section 9, T7N R12W, looked up in sections.geojson/);
    for (const other of [{ townshipDir: 'S' }, { rangeDir: 'E' }, { township: 8 }, { townshipHalf: true }, { rangeHalf: true }] as const) {
      expect(layer.count({ ...REFERENCE, ...other })).toBe(0);
    }
    expect(layer.count(REFERENCE)).toBe(2);
    expect(complaint(() => layer.section(REFERENCE, 'row 1')).message).toMatch(/fits 2 polygons.*feature 1 \(Second\), feature 2 \(First\)/);
    expect(layer.section({ ...REFERENCE, meridian: '1st P.M.' }, 'row 1').where).toBe('sections.geojson, feature 2');
    expect(layer.count({ ...REFERENCE, meridian: 'Third' })).toBe(0);
    expect(complaint(() => layer.section({ ...REFERENCE, meridian: 'Greenwich' }, 'row 1')).code).toBe('position_invalid');
  });

  it('reads columns of the user\'s own, with directions beside or behind the numbers, and halves', () => {
    const attributes = { township: 'TWP', townshipDir: 'TD', range: 'RNG', rangeDir: 'RD', section: 'SEC', meridian: 'PM' };
    const layer = sectionLayer(features(
      { TWP: 7, TD: 'N', RNG: 12, RD: 'W', SEC: 3 }, { TWP: 'T07N', RNG: 'R12½W', SEC: '3' }, { TWP: '7.5', TD: 'N', RNG: '12', RD: 'w', SEC: 3 },
    ), { attributes });
    expect(layer.section(REFERENCE, '').where).toContain('feature 1');
    expect(layer.section({ ...REFERENCE, rangeHalf: true, meridian: 'Ute' }, '').where).toContain('feature 2');
    expect(layer.section({ ...REFERENCE, townshipHalf: true }, '').name).toBe('section 3, T7½N R12W');
  });

  it('leaves out what is no section and counts it', () => {
    const layer = sectionLayer(features(
      cadastral, { ...cadastral, FRSTDIVTYP: 'TR' }, { ...cadastral, FRSTDIVNO: null }, { ...cadastral, PLSSID: 'nonsense' },
      { ...cadastral, PLSSID: 'OH020071N0120W0' }, { ...cadastral, SECDIVNO: 'NENE', SECDIVTYP: 'A' }, { ...cadastral, SECDIVNO: 'NWNE', SECDIVTYP: 'A' },
    ));
    expect(layer.sections).toBe(1);
    expect(layer.notes).toHaveLength(5);
    expect(layer.notes.join('\n')).toMatch(/2 features left out, an aliquot part.*feature 6/);
    expect(layer.notes.join('\n')).toMatch(/1 feature left out, not a section by its type \(first: feature 2\)/);
  });

  it('has lots only where the layer has them', () => {
    const bare = sectionLayer(features(cadastral));
    expect(complaint(() => bare.lotPolygon({ ...REFERENCE, lot: '2' }, 'row 1')).message).toMatch(/lot 2 of section 3, T7N R12W.*which has no lots/);
    const layer = sectionLayer(features(cadastral, { ...cadastral, SECDIVNO: '02', SECDIVTYP: 'L' }, { ...cadastral, SECDIVNO: '12a', SECDIVTYP: 'L' }));
    expect([layer.sections, layer.lots]).toEqual([1, 2]);
    expect(layer.section(REFERENCE, '').where).toContain('feature 1');
    const ring = layer.lotPolygon({ ...REFERENCE, lot: '2' }, 'row 1');
    expect(ring).toHaveLength(5);
    expect(ring[0]).toEqual(ring[4]);
    expect(layer.lotPolygon({ ...REFERENCE, lot: '12A' }, 'row 1')).toHaveLength(5);
    expect(complaint(() => layer.lotPolygon({ ...REFERENCE, lot: '3' }, 'row 1')).message).toMatch(/none of that name/);
  });

  it('refuses a layer without the columns', () => {
    expect(complaint(() => sectionLayer(features({ NAME: 'x' }))).code).toBe('column_missing');
    expect(complaint(() => sectionLayer(features({ FRSTDIVNO: '3' }))).message).toMatch(/TWNSHPNO and no column RANGENO/);
    expect(complaint(() => sectionLayer(features())).code).toBe('no_data');
  });
});
