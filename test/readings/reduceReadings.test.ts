import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs } from '../../src/geodesy/crs.js';
import { Random } from '../../src/numerics/random.js';
import { madSd, median } from '../../src/numerics/robust.js';
import { decimalYearOf, mainFieldAlong } from '../../src/readings/mainFieldAlong.js';
import type { ReadingColumns, ReadingFile, ReadingsSource } from '../../src/readings/readingSource.js';
import type { ReduceOptions } from '../../src/readings/reduceOptions.js';
import { reduceReadings } from '../../src/readings/reduceReadings.js';
import type { CsvColumn } from '../../src/table/writeCsv.js';
import { CORNER, degrees, START_S, table, testSite, walked, type Walked } from './support.js';

const SITE = testSite();
/** Everything off that is estimated from the readings. */
const PLAIN: Partial<ReduceOptions> = { heading: false, drift: 'never', regionalM: 0, despike: false };
const COLUMNS: ReadingColumns = { field: 'nt', time: 'utc', longitude: 'lon', latitude: 'lat', line: 'line', height: 'h' };
const FEET = SITE.frame.metresPerUnit;

function columnsOf(walk: Walked, field: ArrayLike<number>): CsvColumn[] {
  const { lon, lat } = degrees(SITE, walk.x, walk.y);
  return [
    { name: 'utc', utcS: walk.timeS, decimals: 1 }, { name: 'lon', values: lon, decimals: 9 }, { name: 'lat', values: lat, decimals: 9 },
    { name: 'nt', values: field, decimals: 3 }, { name: 'line', values: walk.line.map((k) => k + 101), decimals: 0 },
    { name: 'h', values: new Float64Array(walk.x.length).fill(1.7), decimals: 2 },
    { name: 'e', values: walk.x.map((x) => x / FEET), decimals: 4 }, { name: 'n', values: walk.y.map((y) => y / FEET), decimals: 4 },
  ];
}

function file(walk: Walked, field: ArrayLike<number>, change: Partial<ReadingFile> = {}): ReadingFile {
  return { table: table(columnsOf(walk, field)), columns: COLUMNS, ...change };
}

function baseLog(from: number, to: number, field: (timeS: number) => number) {
  const utcS = Float64Array.from({ length: Math.floor((to - from) / 3) + 1 }, (_, i) => from + 3 * i);
  return { table: table([{ name: 'utc', utcS, decimals: 1 }, { name: 'nt', values: utcS.map(field), decimals: 3 }], 'base.csv'), columns: { time: 'utc', field: 'nt' } };
}

function complaint(source: ReadingsSource, options: Partial<ReduceOptions> = PLAIN): UserError {
  try {
    reduceReadings(source, SITE, options);
  } catch (error) {
    if (error instanceof UserError) return error;
    throw error;
  }
  throw new Error('nothing was thrown');
}

const WALK = walked({ lines: 6, spacingM: 30, stepM: 1 });
const END_S = WALK.timeS.at(-1)!;
const MAIN = mainFieldAlong({ ...WALK, flag: new Uint8Array(WALK.x.length) }, SITE, 0);
const FLAT = MAIN.map((value) => value + 40);

describe('reduceReadings', () => {
  it('is raw less main field with everything else off', () => {
    const readings = reduceReadings({ files: [file(WALK, FLAT)] }, SITE, PLAIN);
    expect(readings.steps.map((step) => step.column)).toEqual(['clean_nt', 'main_nt']);
    readings.residual.forEach((value) => expect(Math.abs(value - 40)).toBeLessThan(0.005));
    expect(readings.lineNames).toEqual(['101', '102', '103', '104', '105', '106']);
    expect(readings.flag.every((code) => code === 0)).toBe(true);
  });

  it('puts the readings where they were taken, from WGS 84 and from feet of the frame', () => {
    const fromDegrees = reduceReadings({ files: [file(WALK, FLAT)] }, SITE, PLAIN);
    const fromFeet = reduceReadings({ files: [file(WALK, FLAT, { crs: SITE.frame, columns: { field: 'nt', time: 'utc', easting: 'e', northing: 'n', height: 'h' } })] }, SITE, PLAIN);
    // Nine decimals of a degree are 0.1 mm; four of a foot, 0.03 mm.
    for (const readings of [fromDegrees, fromFeet]) {
      readings.x.forEach((x, i) => expect(Math.hypot(x - WALK.x[i]!, readings.y[i]! - WALK.y[i]!)).toBeLessThan(2e-4));
    }
  });

  it('reads eastings and northings of another system', () => {
    const utm = crs('EPSG:26917');
    const places = Array.from(WALK.x, (x, i) => utm.forward(...SITE.frame.inverse(x, WALK.y[i]!)));
    const columns = [...columnsOf(WALK, FLAT), { name: 'ue', values: places.map((p) => p[0]), decimals: 4 }, { name: 'un', values: places.map((p) => p[1]), decimals: 4 }];
    const readings = reduceReadings({ files: [{ table: table(columns), crs: utm, columns: { field: 'nt', time: 'utc', easting: 'ue', northing: 'un', height: 'h' } }] }, SITE, PLAIN);
    readings.x.forEach((x, i) => expect(Math.hypot(x - WALK.x[i]!, readings.y[i]! - WALK.y[i]!)).toBeLessThan(2e-4));
  });

  it('takes nothing off for a constant base', () => {
    const constant = reduceReadings({ files: [file(WALK, FLAT)], base: baseLog(START_S - 60, END_S + 60, () => 51_700) }, SITE, PLAIN);
    const none = reduceReadings({ files: [file(WALK, FLAT)] }, SITE, PLAIN);
    expect(constant.steps.map((step) => step.column)).toEqual(['clean_nt', 'base_nt', 'main_nt']);
    expect([...constant.residual]).toEqual([...none.residual]);
  });

  it('takes the base\'s variation off, and a clock that is behind brings it to its time', () => {
    const wave = (timeS: number): number => 20 * Math.sin((timeS - START_S) / 300);
    const field = FLAT.map((value, i) => value + wave(WALK.timeS[i]!));
    const base = baseLog(START_S - 60, END_S + 60, (timeS) => 51_700 + wave(timeS));
    const spread = (readings: ReturnType<typeof reduceReadings>): number => Math.max(...readings.residual) - Math.min(...readings.residual);
    expect(spread(reduceReadings({ files: [file(WALK, field)], base }, SITE, PLAIN))).toBeLessThan(0.02);
    const late = { ...WALK, timeS: WALK.timeS.map((timeS) => timeS - 25) };
    expect(spread(reduceReadings({ files: [file(late, field)], base }, SITE, PLAIN))).toBeGreaterThan(2);
    const set = reduceReadings({ files: [file(late, field, { clockOffsetS: 25 })], base }, SITE, PLAIN);
    expect(spread(set)).toBeLessThan(0.02);
    expect(set.timeS[0]).toBeCloseTo(START_S, 6);
  });

  it('brings lagging positions to their readings', () => {
    // 1.2 m/s, half a second old: 0.6 m behind on the way.
    const behind = { ...WALK, y: WALK.y.map((y, i) => y - 0.6 * WALK.way[i]!) };
    const readings = reduceReadings({ files: [file(behind, FLAT)] }, SITE, { ...PLAIN, positionLagS: 0.5 });
    // Times are written to a tenth of a second, so a step of 1 m is known to a tenth of its time.
    readings.y.forEach((y, i) => expect(Math.abs(y - WALK.y[i]!)).toBeLessThan(0.1));
  });

  it('flags faults, keeps the columns before them and leaves the residual empty', () => {
    const field = FLAT.slice();
    field[100] = NaN;
    field[200] = 0;
    field[300]! += 900;
    const readings = reduceReadings({ files: [file(WALK, field)] }, SITE, { ...PLAIN, despike: true });
    expect([readings.flag[100], readings.flag[200], readings.flag[300]]).toEqual([1, 1, 2]);
    expect(readings.flag.reduce((sum, code) => sum + (code > 0 ? 1 : 0), 0)).toBe(3);
    expect(readings.raw[300]).toBeCloseTo(FLAT[300]! + 900, 2);
    expect([readings.residual[100], readings.residual[200], readings.residual[300]]).toEqual([NaN, NaN, NaN]);
    expect(readings.steps[0]!.summary).toContain('2 dropout, 1 spike');
  });

  it('leaves readings in a base gap out on request, with their flag', () => {
    const base = baseLog(START_S - 60, END_S + 60, () => 51_700);
    const keep = base.table.columns.get('utc')!.map((text) => Math.abs(Date.parse(text) / 1000 - START_S - 400) > 100);
    const gapped = { ...base, table: table([...base.table.columns].map(([name, texts]) => ({ name, texts: texts.filter((_, i) => keep[i]) })), 'base.csv') };
    const filled = reduceReadings({ files: [file(WALK, FLAT)], base: gapped }, SITE, PLAIN);
    expect(filled.flag.includes(3)).toBe(false);
    expect(filled.warnings.join()).toMatch(/interpolated across/);
    const left = reduceReadings({ files: [file(WALK, FLAT)], base: gapped }, SITE, { ...PLAIN, baseGaps: 'leave_out' });
    const lost = left.flag.reduce((sum, code) => sum + (code === 3 ? 1 : 0), 0);
    // 200 s at 1.2 m/s and a reading a metre, less ten seconds for a turn.
    expect(lost).toBeGreaterThan(220);
    expect(lost).toBeLessThan(250);
    expect(left.residual.reduce((sum, value) => sum + (Number.isNaN(value) ? 1 : 0), 0)).toBe(lost);
  });

  it('sorts by time and joins files, whose lines are their own', () => {
    const half = WALK.x.length / 2;
    const part = (from: number, to: number): Walked => ({ x: WALK.x.slice(from, to), y: WALK.y.slice(from, to), timeS: WALK.timeS.slice(from, to), line: WALK.line.slice(from, to).map((k) => k % 3), way: WALK.way.slice(from, to) });
    const second = file(part(half, 2 * half), FLAT.slice(half));
    const first = file(part(0, half), FLAT.slice(0, half));
    const readings = reduceReadings({ files: [{ ...second, table: { ...second.table, source: 'b.csv' } }, first] }, SITE, PLAIN);
    expect([...readings.timeS]).toEqual([...WALK.timeS]);
    expect(readings.lineNames).toEqual(['101', '102', '103', 'readings.csv/101', 'readings.csv/102', 'readings.csv/103']);
    expect(readings.line[0]).toBe(3);
    expect(readings.warnings.join()).toContain('sorted by time');
  });

  it('finds the lines where no column names them', () => {
    const { line: _, ...columns } = COLUMNS;
    const readings = reduceReadings({ files: [file(WALK, FLAT, { columns })] }, SITE, PLAIN);
    expect(readings.lineNames).toHaveLength(6);
    expect([...readings.line]).toEqual([...WALK.line]);
  });

  it.each([[1, 0], [1, 2], [2, 6], [1, 200]])('works on %d lines of %d m with every step on', (lines, lengthM) => {
    const walk = walked({ lines, lengthM });
    const main = mainFieldAlong({ ...walk, flag: new Uint8Array(walk.x.length) }, SITE, 0);
    const made = file(walk, main.map((value, i) => value + 40 + 0.1 * Math.sin(i)));
    const base = baseLog(START_S - 60, walk.timeS.at(-1)! + 60, () => 51_700);
    for (const source of [{ files: [made], base }, { files: [made] }]) {
      const readings = reduceReadings(source, SITE);
      expect(readings.count).toBe(walk.x.length);
      // Regional field or the survey's middle is taken off: what is left is the ripple.
      for (const value of readings.residual) expect(Math.abs(value)).toBeLessThan(0.25);
    }
  });

  it('takes a made day apart: base, heading and slope go, the casing stays', () => {
    const walk = walked({ lines: 20, spacingM: 10, stepM: 0.4 });
    const random = new Random(11);
    const main = mainFieldAlong({ ...walk, flag: new Uint8Array(walk.x.length) }, SITE, 0);
    const wave = (timeS: number): number => 15 * Math.sin((timeS - START_S) / 900);
    const casing = walk.x.map((x, i) => 2000 * (1 + ((x - CORNER[0] - 95) ** 2 + (walk.y[i]! - CORNER[1] - 81) ** 2) / 9) ** -1.5);
    const field = main.map((value, i) => value + 60 + casing[i]! + 0.3 * (walk.x[i]! - CORNER[0]) + 1.4 * walk.way[i]! + wave(walk.timeS[i]!) + 0.2 * random.normal());
    const readings = reduceReadings({ files: [file(walk, field)], base: baseLog(START_S - 60, walk.timeS.at(-1)! + 60, (timeS) => 51_650 + wave(timeS)) }, SITE);
    expect(readings.steps.map((step) => step.column)).toEqual(['clean_nt', 'base_nt', 'head_nt', 'main_nt', 'reg_nt']);
    const left = readings.residual.map((value, i) => value - casing[i]!);
    expect(Math.abs(median(left))).toBeLessThan(0.3);
    expect(madSd(left)).toBeLessThan(0.35);
    const peak = casing.indexOf(Math.max(...casing));
    // The regional field takes well under 1 % of the casing.
    expect(Math.abs(readings.residual[peak]! / casing[peak]! - 1)).toBeLessThan(0.01);
    for (const step of readings.steps) {
      expect(step.column.length).toBeLessThanOrEqual(10);
      expect(step.summary).toMatch(/\d.*\.$/);
    }
  });

  it('takes anomalies without times as they are', () => {
    const { time: _, ...columns } = COLUMNS;
    const field = FLAT.map((value, i) => value - MAIN[i]!);
    const source = { files: [file(WALK, field, { columns })] };
    const plain = reduceReadings(source, SITE, { kind: 'anomaly', regionalM: 0 });
    expect(plain.steps.map((step) => step.column)).toEqual(['clean_nt']);
    expect(plain.timeS.every(Number.isNaN)).toBe(true);
    plain.residual.forEach((value) => expect(value).toBeCloseTo(40, 2));
    const timed = reduceReadings(source, SITE, { kind: 'anomaly', speedMS: 2 });
    expect(timed.timeS[200]! - timed.timeS[0]!).toBeCloseTo(100, 1);
    expect(decimalYearOf(timed.timeS[0]!)).toBeCloseTo(SITE.decimalYear, 6);
    expect(timed.warnings.join()).toContain('2 m/s');
  });

  it('spreads readings that share a whole second', () => {
    const coarse = { ...WALK, timeS: WALK.timeS.map((timeS) => Math.floor(timeS / 5) * 5) };
    const readings = reduceReadings({ files: [file(coarse, FLAT)] }, SITE, PLAIN);
    expect(readings.flag.every((code) => code === 0)).toBe(true);
    readings.timeS.forEach((timeS, i) => expect(Math.abs(timeS - WALK.timeS[i]!)).toBeLessThan(6));
  });
});

describe('reduceReadings answers bad input', () => {
  const { lon, lat } = degrees(SITE, WALK.x, WALK.y);
  const moved = (change: { lon?: ArrayLike<number>; lat?: ArrayLike<number> }): ReadingFile => {
    const columns = columnsOf(WALK, FLAT).map((column) => (column.name === 'lon' && change.lon ? { ...column, values: change.lon } : column.name === 'lat' && change.lat ? { ...column, values: change.lat } : column));
    return { table: table(columns as CsvColumn[]), columns: COLUMNS };
  };

  it.each([
    ['longitude and latitude in each other\'s column', () => moved({ lon: lat, lat: lon }), 'coordinates_swapped', 'exchange the two column names'],
    ['a longitude without its sign', () => moved({ lon: lon.map((v) => -v) }), 'outside_area', 'wrong sign'],
    ['readings of the next county', () => moved({ lat: lat.map((v) => v + 0.3) }), 'outside_area', '33 km from the parcel'],
    ['eastings without a CRS', () => file(WALK, FLAT, { columns: { field: 'nt', time: 'utc', easting: 'e', northing: 'n', height: 'h' } }), 'crs_missing', '"crs"'],
    ['eastings in a geographic CRS', () => file(WALK, FLAT, { crs: crs('EPSG:4269'), columns: { field: 'nt', time: 'utc', easting: 'e', northing: 'n', height: 'h' } }), 'crs_missing', 'geographic'],
    ['eastings and northings exchanged', () => file(WALK, FLAT, { crs: SITE.frame, columns: { field: 'nt', time: 'utc', easting: 'n', northing: 'e', height: 'h' } }), 'coordinates_swapped', 'parcel'],
    ['a column that is not there', () => file(WALK, FLAT, { columns: { ...COLUMNS, field: 'tmi' } }), 'column_missing', 'tmi'],
    ['no position columns', () => file(WALK, FLAT, { columns: { field: 'nt', time: 'utc', height: 'h' } }), 'key_missing', 'longitude and latitude'],
    ['no height', () => file(WALK, FLAT, { columns: { field: 'nt', time: 'utc', longitude: 'lon', latitude: 'lat' } }), 'key_missing', 'sensor_height_m'],
    ['fields far off', () => file(WALK, FLAT.map((v) => v - 20_000)), 'field_out_of_range', 'main field there'],
  ])('%s', (_, make, code, words) => {
    const error = complaint({ files: [make()] });
    expect(error.code).toBe(code);
    expect(error.message).toContain(words);
    expect(error.message).toContain('readings.csv');
  });

  it('names the row of a field that is no number', () => {
    const columns = columnsOf(WALK, FLAT).map((column) => (column.name === 'nt' ? { name: 'nt', texts: Array.from(FLAT, (v, i) => (i === 6 ? 'n/a' : v.toFixed(2))) } : column));
    const error = complaint({ files: [{ table: table(columns), columns: COLUMNS }] });
    expect(error.code).toBe('value_invalid');
    expect(error.message).toContain('row 7, column nt');
  });

  it('times without a zone, and no times where variation has to go', () => {
    const columns = columnsOf(WALK, FLAT).map((column) => (column.name === 'utc' ? { name: 'utc', texts: Array.from(WALK.timeS, (t) => new Date(t * 1000).toISOString().slice(0, 19)) } : column));
    const zoneless = { table: table(columns), columns: COLUMNS };
    expect(complaint({ files: [zoneless] }).code).toBe('zone_missing');
    expect(reduceReadings({ files: [{ ...zoneless, zone: 'UTC' }] }, SITE, PLAIN).timeS[0]).toBe(START_S);
    const { time: _, ...timeless } = COLUMNS;
    expect(complaint({ files: [file(WALK, FLAT, { columns: timeless })] }, {}).message).toContain('"kind": "anomaly"');
  });

  it('a base log of another day, beside anomalies, or without readings', () => {
    const yesterday = baseLog(START_S - 86_400, END_S - 86_400, () => 51_700);
    expect(complaint({ files: [file(WALK, FLAT)], base: yesterday }).code).toBe('base_no_overlap');
    expect(complaint({ files: [file(WALK, FLAT)], base: yesterday }, { kind: 'anomaly' }).code).toBe('key_invalid');
    expect(complaint({ files: [] }).code).toBe('no_data');
  });

  it('a date that the main field is not known for, and a date far from the survey file\'s', () => {
    const years = (n: number): Walked => ({ ...WALK, timeS: WALK.timeS.map((t) => t + n * 365 * 86_400) });
    expect(complaint({ files: [file(years(9), FLAT)] }).code).toBe('date_out_of_range');
    expect(reduceReadings({ files: [file(years(1), FLAT)] }, SITE, PLAIN).warnings.join()).toContain('more than a month');
  });
});
