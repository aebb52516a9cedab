import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs } from '../../src/geodesy/crs.js';
import { LOCATE_DEFAULTS, locateRecords } from '../../src/records/locateRecords.js';
import type { RecordFileSettings, RecordSource } from '../../src/records/recordSource.js';
import type { UnplacedRecord, WellRecord } from '../../src/records/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import type { InputFeature } from '../../src/vector/types.js';
import { centreX, centreY, frame, testSite } from './testSite.js';

const LATLON = { recordId: 'id', latitude: 'lat', longitude: 'lon' };

function csv(text: string, settings: RecordFileSettings = {}): RecordSource {
  return { kind: 'table', name: 'permits.csv', table: parseCsv(text, 'permits.csv'), settings: { columns: LATLON, datum: 'NAD83', errorM: 0, ...settings } };
}

function one(source: RecordSource, site = testSite()): WellRecord {
  const { placed, unplaced } = locateRecords([source], site);
  expect(unplaced).toEqual([]);
  expect(placed).toHaveLength(1);
  return placed[0]!;
}

function complaint(run: () => unknown): UserError['complaint'] {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.complaint;
    throw error;
  }
  throw new Error('nothing was thrown');
}

function unplaced(text: string, settings: RecordFileSettings = {}): readonly UnplacedRecord[] {
  return locateRecords([csv(text, settings)], testSite()).unplaced;
}

function failure(text: string, settings: RecordFileSettings = {}): UserError['complaint'] {
  return complaint(() => locateRecords([csv(text, settings)], testSite()));
}

function point(coordinates: number[], properties: InputFeature['properties'] = {}): InputFeature {
  return { geometry: { type: 'Point', coordinates }, properties };
}

/** Metres in a degree on GRS 80 at 39.3 N: meridian 111,016 m, parallel 86,271 m (series of Snyder 1987, p. 25). */
const [NORTH_M, EAST_M] = [111_016, 86_271];

describe('error budget', () => {
  it('sums source, digits and datum shift by covariance', () => {
    const record = one(csv('id,lat,lon\nA,"39°18\'00""","80°12\'00"" W"\n', { datum: 'NAD27', errorM: undefined, source: 'map', mapScale: 24_000 }));
    // One second of arc, uniform: 1/√12 of 30.84 m and 23.96 m; NMAS 5.68 m; shift 0.15 m.
    const north = Math.hypot(5.68, NORTH_M / 3600 / Math.sqrt(12), 0.15);
    const east = Math.hypot(5.68, EAST_M / 3600 / Math.sqrt(12), 0.15);
    expect(record.posSdM).toBeCloseTo(Math.sqrt((north ** 2 + east ** 2) / 2), 2);
    // Whole seconds weigh enough to be kept as an even spread: the ellipse encloses a region that is none.
    for (const ratio of [record.semiMajM / (2.4477 * north), record.semiMinM / (2.4477 * east)]) {
      expect(ratio).toBeGreaterThan(1);
      expect(ratio).toBeLessThan(1.02);
    }
    expect(record.excess!.massHeld).toBeGreaterThan(0.955);
    expect(record.basis).toBe('1:24,000 map 5.7 m (National Map Accuracy Standards); digits 8.9 m north, 6.9 m east; datum shift 0.15 m; 5 % blunders within 1609 m');
    expect(record.datum).toBe('NAD27');
    expect(record.shift).toBe('test NAD27');
  });
  it('turns the ellipse by the grid convergence', () => {
    const record = one(csv('id,lat,lon\nA,39.300,-80.200\n'));
    // UTM 17N (central meridian 81 W): γ = 0.8° sin 39.3° = 0.507°; latitude is the coarser axis, along true north.
    expect(Math.min(record.azimDeg, 180 - record.azimDeg)).toBeCloseTo(0.507, 1);
    expect(record.azimDeg).toBeGreaterThan(179);
    expect(record.semiMajM / record.semiMinM).toBeCloseTo(NORTH_M / EAST_M, 2);
  });
  it('moves by the datum shift', () => {
    const record = one(csv('id,lat,lon\nA,39.30000,-80.20000\n', { datum: 'NAD27' }));
    expect(record.x - centreX).toBeCloseTo(0.00019 * EAST_M, 0);
    expect(record.y - centreY).toBeCloseTo(0.00009 * NORTH_M, 0);
  });
  it('reads projected coordinates in the unit of their CRS', () => {
    const feet = crs('EPSG:26749'); // West Virginia North, NAD27, US survey feet
    const [e, n] = feet.forward(-80.2, 39.3);
    const text = `id,e,n\nA,${(e * 3937 / 1200).toFixed(1)},${(n * 3937 / 1200).toFixed(1)}\n`;
    const record = one(csv(text, { columns: { recordId: 'id', easting: 'e', northing: 'n' }, crs: feet, datum: undefined }));
    const [x, y] = frame.forward(-80.2 + 0.00019, 39.3 + 0.00009);
    expect(Math.hypot(record.x - x, record.y - y)).toBeLessThan(0.03);
    expect(record.datum).toBe('NAD27');
  });
  it('gives a shared shift to the group, and keeps it in the density', () => {
    const record = one(csv('id,lat,lon,sheet\nA,39.300000,-80.200000,north\n', {
      columns: { ...LATLON, group: 'sheet' }, datum: 'WGS 84', sharedSdM: 12,
    }));
    expect(record.group).toEqual({ id: 'permits.csv / WGS 84 / north', sharedSdM: 13 });
    expect(record.posSdM).toBeCloseTo(Math.hypot(13, 2), 1);
  });
  it('lets the row override the file, and the file the class', () => {
    const text = 'id,lat,lon,err\nA,39.300000,-80.200000,\nB,39.300100,-80.200000,100 ft\n';
    const { placed } = locateRecords([csv(text, { columns: { ...LATLON, errorM: 'err' }, errorM: 7 })], testSite());
    expect(placed[0]!.posSdM).toBeCloseTo(7, 2);
    expect(placed[1]!.posSdM).toBeCloseTo(30.48, 2);
  });
  it('spreads blunders over a mile outside the drawn ellipse', () => {
    const record = one(csv('id,lat,lon\nA,39.300000,-80.200000\n', { errorM: 3, blunderShare: 0.1 }));
    const blunder = record.density.parts.find(({ role }) => role === 'blunder')!;
    expect(blunder).toMatchObject({ kind: 'disc', weight: 0.1, radiusM: LOCATE_DEFAULTS.blunderRadiusM });
    expect(LOCATE_DEFAULTS.blunderRadiusM).toBeCloseTo(1609.347, 3);
    expect(record.semiMajM).toBeCloseTo(3 * 2.4477, 1);
    expect(record.density.parts.reduce((sum, part) => sum + part.weight, 0)).toBeCloseTo(1, 12);
  });
});

describe('digits', () => {
  it('count per value; a shorter one among cut ones is noted', () => {
    const { placed } = locateRecords([csv('id,lat,lon\nA,39.3001,-80.2001\nB,39.301,-80.2002\nC,39.3003,-80.2003\n')], testSite());
    // Half a digit is all that the place rests on; an ellipse through the corners of 95 % of it is a little less than 2.4477 σ.
    const ratio = placed[1]!.semiMajM / (2.4477 * NORTH_M * 1e-3 / Math.sqrt(12));
    expect(ratio).toBeGreaterThan(0.95);
    expect(ratio).toBeLessThan(0.98);
    expect(placed.map(({ note }) => note.includes('fewer decimals'))).toEqual([false, true, false]);
  });
  it('are not doubted where the column keeps its zeros', () => {
    const { placed } = locateRecords([csv('id,lat,lon\nA,39.3010,-80.2001\nB,39.301,-80.2002\n')], testSite());
    expect(placed.map(({ note }) => note)).toEqual(['', '']);
  });
});

describe('datum', () => {
  const rows = 'id,lat,lon,datum\nA,39.30000,-80.20000,NAD 27\nB,39.30010,-80.20000,nad1983\nC,39.30020,-80.20000,\n';
  const columns = { ...LATLON, datum: 'datum' };
  it('is taken from the row, a blank one from the file', () => {
    const { placed } = locateRecords([csv(rows, { columns, datum: 'NAD27' })], testSite());
    expect(placed.map(({ datum }) => datum)).toEqual(['NAD27', 'NAD83', 'NAD27']);
  });
  it('is a mixture with the stated weights where nobody knows', () => {
    const record = one(csv('id,lat,lon,datum\nC,39.300000,-80.200000,unknown\n', { columns, datum: undefined, errorM: 4, blunderShare: 0, unknownDatum: { NAD27: 7, NAD83: 3 } }));
    expect(record.datum).toBe('unknown');
    expect(record.density.parts.map(({ weight }) => weight)).toEqual([0.7, 0.3]);
    expect(record.x - centreX).toBeCloseTo(0.7 * 0.00019 * EAST_M, 0);
    expect(record.note).toBe('datum not stated, taken as NAD27 70 %, NAD83 30 %');
    expect(record.shift).toBe('70 % NAD27: test NAD27; 30 % NAD83: none');
    // Between the parts: p(1 − p) times the square of their distance (16.4 m east, 10 m north).
    const between = 0.21 * ((0.00019 * EAST_M) ** 2 + (0.00009 * NORTH_M) ** 2);
    expect(record.posSdM).toBeCloseTo(Math.sqrt((2 * 16 + between) / 2), 1);
  });
  it('is refused where it is blank and no weights are stated, or a word that nobody knows', () => {
    const blank = complaint(() => locateRecords([csv(rows, { columns, datum: undefined })], testSite()));
    expect(blank).toMatchObject({ code: 'datum_unknown', where: 'permits.csv, row 3' });
    expect(blank.advice).toContain('unknown_datum');
    const word = complaint(() => locateRecords([csv('id,lat,lon,datum\nA,39.3,-80.2,NAD72\n', { columns })], testSite()));
    expect(word).toMatchObject({ code: 'datum_unknown', where: 'permits.csv, row 1, column datum', found: '"NAD72"' });
    expect(complaint(() => locateRecords([csv('id,lat,lon\nA,39.3,-80.2\n', { datum: 'NAD72' })], testSite()))).toMatchObject({ code: 'datum_unknown', where: 'permits.csv, datum' });
    expect(complaint(() => locateRecords([csv('id,lat,lon\nA,39.3,-80.2\n', { datum: undefined, unknownDatum: { NAD27: 0 } })], testSite()))).toMatchObject({ code: 'key_invalid' });
  });
});

describe('rows that cannot be placed', () => {
  const good = 'G,39.3001,-80.2001\n';
  it('names a wrong sign with the value and what to do', () => {
    expect(unplaced(`id,lat,lon\n${good}A,39.3000,80.2000\n`)).toEqual([{
      recordId: 'A', source: 'permits.csv', row: 2, column: 'lat, lon', value: '39.3000, 80.2000',
      problem: expect.stringMatching(/^lies 11,\d{3} km from the parcel, more than the 10 km that max_distance_m allows$/),
      advice: 'with the sign of the longitude changed it would lie 0 m from the parcel\'s centre; correct the row',
    }]);
  });
  it('names swapped coordinates, in range and out of range', () => {
    expect(unplaced(`id,lat,lon\n${good}A,-80.2010,39.3000\n`)[0]!.advice).toBe('with latitude and longitude swapped it would lie 86 m from the parcel\'s centre; correct the row');
    expect(unplaced(`id,lat,lon\n${good}A,-104.2,39.3\n`)[0]!.problem).toBe('is no place on Earth: a latitude goes to 90°, a longitude to 180°');
    expect(unplaced(`id,lat,lon\n${good}A,80.2010 W,39.3000 N\n`)[0]!.advice).toContain('latitude and longitude swapped');
  });
  it('names a latitude in the south, and easting and northing that no CRS can express', () => {
    expect(unplaced(`id,lat,lon\n${good}A,-39.3010,-80.2000\n`)[0]!.advice).toContain('with the sign of the latitude changed it would lie 111 m');
    const settings = { columns: { recordId: 'id', easting: 'e', northing: 'n' }, crs: frame, datum: undefined };
    expect(unplaced(`id,e,n\nA,1e12,-7e13\n`, settings)[0]).toMatchObject({
      column: 'e, n', value: '1e12, -7e13', problem: 'is no place that EPSG:26917 can express', advice: expect.stringContaining('raise max_distance_m'),
    });
  });
  it('says only the distance where no slip explains it', () => {
    expect(unplaced(`id,lat,lon\n${good}A,38.3000,-80.2000\n`)[0]).toMatchObject({ problem: expect.stringContaining('lies 111 km'), advice: expect.stringContaining('compare the row') });
  });
  it('measures near distances from the parcel\'s edge', () => {
    expect(unplaced(`id,lat,lon\n${good}A,39.4000,-80.2000\n`)[0]!.problem).toContain('lies 10.9 km');
  });
  it('names missing coordinates and texts that are no angle', () => {
    const rows = unplaced(`id,lat,lon\n${good}A,,-80.2\nB,39.3,west of barn\nC,39 75 00,-80.2\n`);
    expect(rows.map(({ row, column, problem }) => [row, column, problem])).toEqual([
      [2, 'lat', 'the coordinates are not given'],
      [3, 'lon', '"west of barn" is no longitude'],
      [4, 'lat', '"39 75 00" is no latitude'],
    ]);
  });
  it('names a projected coordinate that is no number, and one in the other unit', () => {
    const settings = { columns: { recordId: 'id', easting: 'e', northing: 'n' }, crs: frame, datum: undefined };
    const [e, n] = [centreX.toFixed(1), centreY.toFixed(1)];
    const rows = unplaced(`id,e,n\nG,${e},${n}\nA,12 E,${n}\nB,${(centreX / 0.3048).toFixed(0)},${(centreY / 0.3048).toFixed(0)}\nC,${n},${e}\n`, settings);
    expect(rows.map(({ recordId }) => recordId)).toEqual(['A', 'B', 'C']);
    expect(rows[0]!.problem).toBe('"12 E" is no number');
    expect(rows[1]!.advice).toContain('with the numbers read as feet it would lie 0 m');
    expect(rows[2]!.advice).toContain('with easting and northing swapped');
  });
  it('names a datum that clashes with the CRS, and a length that is none', () => {
    const settings = { columns: { recordId: 'id', easting: 'e', northing: 'n', datum: 'd', error90M: 'r' }, crs: frame, datum: undefined };
    const rows = unplaced(`id,e,n,d,r\nA,${centreX},${centreY},NAD27,\nB,${centreX},${centreY},,-4\n`, settings);
    expect(rows.map(({ column, value }) => [column, value])).toEqual([['d', 'NAD27'], ['r', '-4']]);
  });
  it('numbers an id that stands twice at two places, and refuses the same entry twice', () => {
    const text = 'id,lat,lon\nA,39.3000,-80.2000\nA,39.3010,-80.2000\nA,39.3000,-80.2000\n';
    const { placed, unplaced } = locateRecords([csv(text)], testSite());
    expect(placed.map(({ recordId }) => recordId)).toEqual(['A', 'A#2']);
    expect(placed[1]!.note).toContain('id also in permits.csv, row 1, elsewhere');
    expect(unplaced).toMatchObject([{ row: 3, problem: 'repeats the id and the place of permits.csv, row 1' }]);
  });
});

describe('a file that is described wrongly as a whole', () => {
  it('is refused: column, pair, CRS', () => {
    expect(failure('id,lat,lon\nA,39.3,-80.2\n', { columns: { ...LATLON, latitude: 'latt' } })).toMatchObject({ code: 'column_missing', where: 'permits.csv, columns.latitude', advice: 'did you mean "lat"' });
    expect(failure('id,lat,lon\nA,39.3,-80.2\n', { columns: { recordId: 'id' } })).toMatchObject({ code: 'key_missing' });
    expect(failure('id,e,n\nA,1,2\n', { columns: { easting: 'e', northing: 'n' } })).toMatchObject({ code: 'crs_missing' });
    expect(failure('id,lat,lon\nA,39.3,-80.2\n', { crs: frame })).toMatchObject({ code: 'key_invalid' });
  });
  it('is refused when every row has the same slip', () => {
    expect(failure('id,lat,lon\nA,-80.2,39.3\nB,-80.201,39.3\n')).toMatchObject({ code: 'coordinates_swapped', advice: 'exchange the two column names in the survey file' });
    expect(failure('id,lat,lon\nA,39.3,80.2\nB,39.3,80.201\n')).toMatchObject({ code: 'position_invalid', advice: expect.stringContaining('west_positive') });
  });
  it('is refused when every row is in the other unit', () => {
    const [e, n] = [centreX / 0.3048, centreY / 0.3048];
    const columns = { recordId: 'id', easting: 'e', northing: 'n' };
    expect(failure(`id,e,n\nA,${e},${n}\nB,${e + 30},${n}\n`, { columns, crs: frame, datum: undefined }))
      .toMatchObject({ code: 'position_invalid', found: expect.stringContaining('the numbers read as feet'), advice: 'state a CRS whose unit is the foot' });
  });
  it('leaves the rows to their own fate where the slips differ', () => {
    expect(unplaced('id,lat,lon\nA,-80.2,39.3\nB,39.3,80.201\n')).toHaveLength(2);
  });
  it('reads unsigned west longitudes where it says so', () => {
    const { placed } = locateRecords([csv('id,lat,lon\nA,39.3000,80.2000\nB,39.3001,80.2000 W\nC,39.3002,-80.2000\n', { westPositive: true })], testSite());
    for (const { x } of placed) expect(Math.abs(x - centreX)).toBeLessThan(0.5);
    expect(placed).toHaveLength(3);
  });
});

describe('vector files', () => {
  it('take the place from the point, digits from the finest of the file', () => {
    const source: RecordSource = {
      kind: 'vector', name: 'wells.geojson', crs: crs('EPSG:4326'), settings: { columns: { recordId: 'api' }, errorM: 0, blunderShare: 0 },
      features: [point([-80.2, 39.3], { api: 4703301 }), point([-80.2011, 39.3], { api: null }), { geometry: null, properties: { api: 'X' } }],
    };
    const { placed, unplaced } = locateRecords([source], testSite());
    expect(placed.map(({ recordId, datum }) => [recordId, datum])).toEqual([['4703301', 'WGS 84'], ['row 2', 'WGS 84']]);
    expect(placed[0]!.posSdM).toBeCloseTo(Math.hypot(5, 2, Math.hypot(NORTH_M, EAST_M) * 1e-4 / Math.sqrt(24)), 1);
    expect(unplaced).toMatchObject([{ recordId: 'X', row: 3, column: 'geometry', problem: 'no geometry, not a point' }]);
  });
  it('may be said to be on another datum, and have no columns of coordinates', () => {
    const source: RecordSource = { kind: 'vector', name: 'wells.geojson', crs: crs('EPSG:4326'), settings: { datum: 'NAD27' }, features: [point([-80.2, 39.3])] };
    expect(locateRecords([source], testSite()).placed[0]!.datum).toBe('NAD27');
    expect(complaint(() => locateRecords([{ ...source, settings: { columns: LATLON } }], testSite()))).toMatchObject({ code: 'key_invalid' });
  });
});
