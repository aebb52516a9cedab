import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { datumByDate, mapDate } from '../../src/records/datumByDate.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { RecordFileSettings } from '../../src/records/recordSource.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { testSite } from './testSite.js';

const RULES = [{ before: '1986-07-01', datum: 'NAD27' }, { before: '2005-01-01', datum: 'NAD83' }];

describe('datum by the date of the map', () => {
  it.each([
    ['1962', 'NAD27'], ['1986-06-30', 'NAD27'], ['1986-07-01', 'NAD83'], ['6/30/1986', 'NAD27'], ['7/1/1986', 'NAD83'], ['1986-06', 'NAD27'],
    ['6/1986', 'NAD27'], ['1991', 'NAD83'], ['2004-12-31T23:00:00Z', 'NAD83'], ['2005-01-01', null], ['', null],
    // The year does not say on which side of July the map lies.
    ['1986', 'unknown'],
  ] as const)('%s is %s', (date, datum) => {
    expect(datumByDate(date, RULES, 'rules').datum).toBe(datum);
  });
  it('takes a rule without a day for every later date', () => {
    expect(datumByDate('2031', [...RULES, { datum: 'NAD83(2011)' }], 'rules').datum).toBe('NAD83(2011)');
  });
  it.each(['1962-13', '1962-02-30', '31/12/1962', '12.5.62', 'about 1960', '62'])('does not read %s, and says so', (date) => {
    expect(mapDate(date)).toBeNull();
    expect(datumByDate(date, RULES, 'rules')).toMatchObject({ datum: null, note: expect.stringContaining(`"${date}" not read`) });
  });
  it('knows leap years', () => {
    expect(mapDate('1960-02-29')).not.toBeNull();
    expect(mapDate('1900-02-29')).toBeNull();
    expect(mapDate('2000-02')).toEqual({ first: '2000-02-01', last: '2000-02-29' });
  });
  it('refuses a rule that is none', () => {
    expect(() => datumByDate('1962', [{ before: '1986', datum: 'NAD27' }], 'p.csv, datum_by_date')).toThrow(UserError);
    expect(() => datumByDate('1962', [{ datum: 'NAD72' }], 'p.csv, datum_by_date')).toThrow(/datum_by_date\[0\].*NAD72/);
  });
});

describe('in a file', () => {
  const place = (rows: string, settings: RecordFileSettings = {}) => locateRecords([{
    kind: 'table', name: 'p.csv', table: parseCsv(`id,lat,lon,date,datum\n${rows}`, 'p.csv'),
    settings: { columns: { recordId: 'id', latitude: 'lat', longitude: 'lon', mapDate: 'date', datum: 'datum' }, datumByDate: RULES, unknownDatum: { NAD27: 0.5, NAD83: 0.5 }, ...settings },
  }], testSite());

  it('goes behind the row\'s own datum and before the file\'s', () => {
    const { placed } = place('A,39.3000,-80.2000,1962,\nB,39.3001,-80.2000,1962,NAD83\nC,39.3002,-80.2000,2010,\n', { datum: 'WGS 84' });
    expect(placed.map(({ datum }) => datum)).toEqual(['NAD27', 'NAD83', 'WGS 84']);
  });
  it('leaves a mixture where a rule\'s day falls within the date, and notes what cannot be read', () => {
    const { placed } = place('A,39.3000,-80.2000,1986,\nB,39.3001,-80.2000,sixties,\n', { datum: 'NAD83' });
    expect(placed[0]).toMatchObject({ datum: 'unknown', note: expect.stringContaining('does not say whether it is before 1986-07-01') });
    expect(placed[0]!.density.parts.filter(({ role }) => role === 'place')).toHaveLength(2);
    expect(placed[1]).toMatchObject({ datum: 'NAD83', note: expect.stringContaining('"sixties" not read') });
  });
});
