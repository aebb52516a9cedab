import { describe, expect, it } from 'vitest';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { RecordFileSettings, RecordSource } from '../../src/records/recordSource.js';
import type { Records } from '../../src/records/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { centreX, centreY, frame, testSite } from './testSite.js';

const COLUMNS = { recordId: 'id', easting: 'e', northing: 'n', apiNumber: 'api', name: 'name', operator: 'op', wellNumber: 'no', group: 'sheet' };

/** A row some metres east and north of the parcel's middle. */
interface Row { readonly east?: number; readonly north?: number; readonly api?: string; readonly name?: string; readonly op?: string; readonly no?: string; readonly sheet?: string }

function file(name: string, rows: readonly Row[], settings: RecordFileSettings = {}): RecordSource {
  const text = ['id,e,n,api,name,op,no,sheet', ...rows.map(({ east = 0, north = 0, api = '', name: well = '', op = '', no = '', sheet = '' }, i) =>
    `${name[0]}${i + 1},${(centreX + east).toFixed(2)},${(centreY + north).toFixed(2)},${api},${well},${op},${no},${sheet}`)].join('\n');
  return { kind: 'table', name, table: parseCsv(text, name), settings: { columns: COLUMNS, crs: frame, errorM: 5, ...settings } };
}
const pair = (a: Row, b: Row, first: RecordFileSettings = {}, second: RecordFileSettings = {}): Records => locateRecords([file('a.csv', [a], first), file('b.csv', [b], second)], testSite());

describe('two rows of one well', () => {
  const API = '37-059-01234';
  it.each<[what: string, a: Row, b: Row, joined: boolean, disagree: boolean]>([
    ['the same number and place', { api: API }, { api: '3705901234', east: 4 }, true, false],
    ['the same number with the hole and event of the well', { api: '3705901234' }, { api: '37-059-01234-01-00', north: 6 }, true, false],
    ['the same number, 400 m apart', { api: API }, { api: API, east: 400 }, true, true],
    ['two numbers at one place with the same name', { api: API, name: 'Corwin', no: '2' }, { api: '37-059-01235', name: 'Corwin', no: '2' }, false, false],
    ['the same name and number, 8 m apart', { name: 'J. W. Corwin', no: '2' }, { name: 'JW CORWIN', no: 'No. 02', east: 8 }, true, false],
    ['the same name and number, 60 m apart', { name: 'Corwin', no: '2' }, { name: 'Corwin', no: '2', east: 60 }, false, false],
    ['the same name, other wells', { name: 'Corwin', no: '2' }, { name: 'Corwin', no: '3', east: 1 }, false, false],
    ['the same number, other names', { name: 'Corwin', no: '2' }, { name: 'Hadley', no: '2', east: 1 }, false, false],
    ['operator and number, no name', { op: 'Bell & Sons', no: '7' }, { op: 'Bell and Sons', no: '7', east: 1 }, true, false],
    ['a name that holds its number', { name: 'Corwin 2' }, { name: 'Corwin #2', east: 3 }, true, false],
    ['a name without a number', { name: 'Corwin' }, { name: 'Corwin', east: 3 }, false, false],
    ['nothing but the place', {}, { east: 1 }, false, false],
    ['one with a number, one without, the same name', { api: API, name: 'Corwin', no: '2' }, { name: 'Corwin', no: '2', east: 3 }, true, false],
    ['a number that is none', { api: '12345' }, { api: '12345', east: 1 }, false, false],
  ])('%s', (_, a, b, joined, disagree) => {
    const { placed, joined: list, disagreements, log } = pair(a, b);
    expect(placed).toHaveLength(joined ? 1 : 2);
    expect(list).toHaveLength(joined ? 1 : 0);
    expect(disagreements).toHaveLength(disagree ? 1 : 0);
    expect(log).toHaveLength(2);
    if (!joined) return;
    expect(list![0]).toMatchObject({ recordId: 'b1', source: 'b.csv', row: 1, into: 'a1' });
    expect(placed[0]!.joined).toEqual(['a.csv, row 1', 'b.csv, row 1']);
    expect(placed[0]!.note).toContain('joined from a.csv, row 1 and b.csv, row 1');
    expect(log![1]!.sureTo).toContain('joined into a1');
    expect(placed[0]!.density.parts.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
  });

  it('are weighted by their inverse covariances where they are independent', () => {
    const [record] = pair({ api: API }, { api: API, east: 10 }, { errorM: 3 }, { errorM: 4 }).placed as [Records['placed'][number]];
    // 1/9 and 1/16: the mean lies 9/25 of the way, σ is 12/5 (the centimetre's digits aside).
    expect(record.x - centreX).toBeCloseTo(3.6, 1);
    expect(record.posSdM).toBeCloseTo(2.4, 2);
    expect(record.semiMajM).toBeCloseTo(2.4477 * 2.4, 1);
    expect(record.basis).toMatch(/^weighted by their errors: .*\(a\.csv, row 1\) and .*\(b\.csv, row 1\)$/);
  });
  it('leave the better one alone where their errors are not independent', () => {
    const source = file('a.csv', [{ api: API, sheet: 'S1' }, { api: API, sheet: 'S1', east: 6 }]);
    const same = locateRecords([source], testSite()).placed;
    expect(same).toHaveLength(1);
    expect(same[0]!.x - centreX).toBeCloseTo(0, 1);
    const grouped = pair({ api: API, sheet: 'S1' }, { api: API, sheet: 'S1', east: 6 }, { sharedSdM: 3 }, { errorM: 2 }).placed[0]!;
    expect(grouped.x - centreX).toBeCloseTo(6, 1);
    expect(grouped.recordId).toBe('a1');
  });
  it('that contradict each other each keep a chance, by their blunder shares', () => {
    const even = pair({ api: API }, { api: API, east: 400 }, { errorM: 3 }).placed[0]!;
    const near = (record: typeof even, east: number): number => record.density.parts.reduce((sum, part) =>
      sum + (part.kind === 'gaussian' && Math.abs(part.x - centreX - east) < 1 ? part.weight : 0), 0);
    expect(near(even, 0)).toBeCloseTo(0.475, 6);
    expect(near(even, 400)).toBeCloseTo(0.475, 6);
    // The place drawn is the better one's; the other is no part of its ellipse.
    expect([even.x - centreX, even.posSdM]).toEqual([expect.closeTo(0, 1), expect.closeTo(3, 1)]);
    const uneven = pair({ api: API }, { api: API, east: 400 }, { errorM: 3, blunderShare: 0.02 }, { blunderShare: 0.1 }).placed[0]!;
    // Odds 0.98 × 0.1 to 0.9 × 0.02 that the first is right.
    expect(near(uneven, 400) / 0.9).toBeCloseTo(0.018 / (0.098 + 0.018), 6);
  });
  it('that have one id too are not noted as wells of their own', () => {
    const text = 'id,e,n,api,name,op,no,sheet';
    const row = (east: number): string => `A,${(centreX + east).toFixed(2)},${centreY.toFixed(2)},${API},,,,`;
    const table = parseCsv([text, row(0), row(4), `A,${(centreX + 90).toFixed(2)},${centreY.toFixed(2)},,,,,`].join('\n'), 'a.csv');
    const { placed } = locateRecords([{ kind: 'table', name: 'a.csv', table, settings: { columns: COLUMNS, crs: frame, errorM: 5 } }], testSite());
    expect(placed.map(({ recordId, note }) => [recordId, note.includes('id also in')])).toEqual([['A', false], ['A#3', true]]);
  });
  it('are not looked for among very many namesakes', () => {
    const rows = Array.from({ length: 3000 }, (_, i) => ({ east: 3 * (i % 60) - 90, north: 3 * Math.floor(i / 60) - 70, name: 'Unknown', no: '1' }));
    const { placed, joined } = locateRecords([file('a.csv', rows, { errorM: 0.1 })], testSite());
    expect(placed.length + joined!.length).toBe(3000);
    expect(joined!.length).toBeLessThan(30);
  });
  it('may be three, or more', () => {
    const { placed, joined } = locateRecords([file('a.csv', [{ api: API }]), file('b.csv', [{ api: API, east: 3 }]), file('c.csv', [{ api: API, north: 3 }])], testSite());
    expect(placed.map(({ recordId, joined: rows }) => [recordId, rows])).toEqual([['a1', ['a.csv, row 1', 'b.csv, row 1', 'c.csv, row 1']]]);
    expect(joined).toHaveLength(2);
    expect(placed[0]!.posSdM).toBeCloseTo(5 / Math.sqrt(3), 1);
  });
});

describe('API numbers', () => {
  it('are checked against the table; what it does not know is listed, not refused', () => {
    const { placed, apiRemarks } = locateRecords([file('a.csv', [{ api: '37-059-01234' }, { api: '99-059-01234', east: 50 }, { api: '37-058-01234', east: 100 }, { api: '3705901', east: 150 }])], testSite());
    expect(placed).toHaveLength(4);
    expect(placed.map(({ apiNumber }) => apiNumber)).toEqual(['37-059-01234', '99-059-01234', '37-058-01234', undefined]);
    expect(apiRemarks!.map(({ row, remark }) => [row, remark])).toEqual([
      [2, expect.stringContaining('state 99')], [3, expect.stringContaining('county 058')], [4, expect.stringContaining('no API number')],
    ]);
  });
  it('may leave the state to the file', () => {
    expect(locateRecords([file('a.csv', [{ api: '059-01234' }], { apiState: '37' })], testSite()).placed[0]!.apiNumber).toBe('37-059-01234');
  });
});
