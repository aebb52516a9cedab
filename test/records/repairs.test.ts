import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { Random } from '../../src/numerics/random.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { RecordFileSettings } from '../../src/records/recordSource.js';
import type { RepairKind } from '../../src/records/repairKinds.js';
import type { Records } from '../../src/records/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { MADE_TOWNSHIPS, madeLayer } from './madeSections.js';
import { centreX, centreY, frame, testSite } from './testSite.js';

const layer = madeLayer();
const LATLON = { recordId: 'id', latitude: 'a', longitude: 'b', location: 'loc' };
const PLANE = { recordId: 'id', easting: 'a', northing: 'b', location: 'loc' };
const FEET = crs('EPSG:26853'); // West Virginia North, NAD83, US survey feet
const FOOT_M = 1200 / 3937;

function locate(rows: readonly string[], settings: RecordFileSettings, townships = layer): Records {
  const text = ['id,a,b,loc', ...rows].join('\n');
  return locateRecords([{ kind: 'table', name: 'p.csv', table: parseCsv(text, 'p.csv'), settings: { source: 'gps', ...settings } }], testSite(), { sections: townships });
}

interface Case {
  readonly kind: RepairKind;
  readonly what: string;
  /** Coordinates as written, and the section named beside them. */
  readonly row: readonly [a: string, b: string, loc?: string];
  readonly settings: RecordFileSettings;
  /** A good row of the same file. */
  readonly good: readonly [a: string, b: string];
  /** Where the record then lies: longitude and latitude, or a section. */
  readonly at: readonly [lon: number, lat: number] | null;
}

const angles: RecordFileSettings = { columns: LATLON, datum: 'NAD83' };
const GOOD = ['39.3000', '-80.2000'] as const;
const SEC15 = 'Sec 15 T5N R1E';
const projected = (system: string, lon = -80.2, lat = 39.3, by = 1): [string, string] => {
  const to = crs(system);
  const [e, n] = to.forward(lon, lat);
  return [((e / to.metresPerUnit) * by).toFixed(1), ((n / to.metresPerUnit) * by).toFixed(1)];
};
const plane = (system: string): RecordFileSettings => ({ columns: PLANE, crs: crs(system) });
const IN_16 = projected('EPSG:26916');

const TRUE_CASES: readonly Case[] = [
  { kind: 'longitude_sign', what: 'the minus sign left out', row: ['39.3005', '80.2005'], settings: angles, good: GOOD, at: [-80.2005, 39.3005] },
  { kind: 'longitude_sign', what: 'the same, in the section named', row: ['39.3005', '80.2005', SEC15], settings: angles, good: GOOD, at: [-80.2005, 39.3005] },
  { kind: 'latitude_sign', what: 'south for north', row: ['-39.3005', '-80.2005'], settings: angles, good: GOOD, at: [-80.2005, 39.3005] },
  { kind: 'swapped', what: 'longitude in the column of latitudes', row: ['-80.2005', '39.3005'], settings: angles, good: GOOD, at: [-80.2005, 39.3005] },
  { kind: 'swapped_sign', what: 'the same without the sign', row: ['80.2005', '39.3005'], settings: angles, good: GOOD, at: [-80.2005, 39.3005] },
  { kind: 'swapped', what: 'northing for easting', row: projected('EPSG:26917').toReversed() as [string, string], settings: plane('EPSG:26917'), good: projected('EPSG:26917'), at: [-80.2, 39.3] },
  { kind: 'utm_zone', what: 'zone 16 for zone 17', row: projected('EPSG:26917'), settings: plane('EPSG:26916'), good: IN_16, at: [-80.2, 39.3] },
  { kind: 'utm_zone', what: 'zone 18 for zone 17, on NAD27', row: projected('EPSG:26717'), settings: plane('EPSG:26718'), good: projected('EPSG:26718'), at: [-80.2 + 0.00019, 39.3 + 0.00009] },
  { kind: 'feet', what: 'feet where metres are stated', row: projected('EPSG:26917', -80.2, 39.3, 1 / 0.3048), settings: plane('EPSG:26917'), good: projected('EPSG:26917'), at: [-80.2, 39.3] },
  { kind: 'metres', what: 'metres where survey feet are stated', row: projected(FEET.code, -80.2, 39.3, FOOT_M), settings: plane(FEET.code), good: projected(FEET.code), at: [-80.2, 39.3] },
];

const line = ([a, b, loc = '']: readonly [string, string, string?]): string => `${a},${b},${loc}`;

describe('a slip that explains a place out of reach', () => {
  it.each(TRUE_CASES)('is proposed, and mended only where the file allows it: $kind, $what', ({ kind, row, settings, good, at }) => {
    const rows = [`G,${line(good)}`, `X,${line(row)}`];
    const proposed = locate(rows, settings);
    expect(proposed.repairs).toMatchObject([{ recordId: 'X', row: 2, kind, applied: false, evidence: expect.stringContaining('from the parcel') }]);
    expect(proposed.repairs![0]!.distanceBeforeM).toBeGreaterThan(10_000);
    expect(proposed.repairs![0]!.distanceAfterM).toBeLessThan(1000);
    // Without leave the coordinates place nothing.
    expect(proposed.placed.find(({ recordId }) => recordId === 'X')?.density.parts[0]!.kind ?? 'area').toBe('area');

    const mended = locate(rows, { ...settings, repairs: [kind] });
    const record = mended.placed.find(({ recordId }) => recordId === 'X')!;
    const [x, y] = frame.forward(...at!);
    expect(Math.hypot(record.x - x, record.y - y)).toBeLessThan(0.5);
    expect(record.note).toContain('repaired: ');
    expect(mended.repairs).toMatchObject([{ kind, applied: true, before: expect.stringContaining(row[0]) }]);
    expect(mended.log!.find(({ recordId }) => recordId === 'X')!.movedBy).toContain('repaired: ');
    // Leave for another kind is no leave.
    const other: RepairKind = kind === 'feet' ? 'metres' : 'feet';
    expect(locate(rows, { ...settings, repairs: [other] }).repairs).toMatchObject([{ applied: false }]);
  });

  it.each<[string, Case['row'], RecordFileSettings, Case['good']]>([
    ['a sign that leaves it 13 km off', ['39.42', '80.2'], angles, GOOD],
    ['a sign, but the row names another section than the one it would lie in', ['39.3005', '80.2005', 'Sec 3 T5N R1E'], angles, GOOD],
    ['south for north 12 km off', ['-39.41', '-80.2'], angles, GOOD],
    ['swapped angles 20 km off', ['-80.2', '39.48'], angles, GOOD],
    ['swapped angles without sign 20 km off', ['80.2', '39.48'], angles, GOOD],
    ['a zone that leaves it 15 km off', projected('EPSG:26917', -80.03, 39.3), plane('EPSG:26916'), IN_16],
    ['two zones off', projected('EPSG:26917'), plane('EPSG:26915'), projected('EPSG:26915')],
    ['feet, but 1 % off', projected('EPSG:26917', -80.2, 39.3, 1.01 / 0.3048), plane('EPSG:26917'), projected('EPSG:26917')],
    ['metres, but 1 % off', projected(FEET.code, -80.2, 39.3, 1.4 * FOOT_M), plane(FEET.code), projected(FEET.code)],
    ['a place that is merely far', ['39.9', '-80.9'], angles, GOOD],
  ])('is not proposed on near misses: %s', (_, row, settings, good) => {
    const found = locate([`G,${line(good)}`, `X,${line(row)}`], { ...settings, repairs: ['longitude_sign', 'latitude_sign', 'swapped', 'swapped_sign', 'utm_zone', 'feet', 'metres', 'range_side'] });
    expect(found.repairs).toEqual([]);
    expect([...found.unplaced.map(({ recordId }) => recordId), ...found.placed.filter(({ note }) => note.includes('not used')).map(({ recordId }) => recordId)]).toEqual(['X']);
  });

  it.each<[RepairKind, string]>([
    ['utm_zone', `UTM zone 16 E ${projected('EPSG:26917')[0]} N ${projected('EPSG:26917')[1]} NAD83`],
    ['metres', `UTM zone 17 E ${projected('EPSG:26917')[0]} N ${projected('EPSG:26917')[1]} feet`],
    ['longitude_sign', '39.3000 N 80.2000 E'],
    ['longitude_sign', '39°18\'00" N, 80°12\'00" E'],
    ['metres', `State Plane zone 4701 Easting ${projected(FEET.code, -80.2, 39.3, FOOT_M)[0]}, Northing ${projected(FEET.code, -80.2, 39.3, FOOT_M)[1]} US survey feet`],
  ])('is found in a location in words too: %s in %s', (kind, text) => {
    const row = `X,,,"${text.replaceAll('"', '""')}"`;
    expect(locate([`G,${line(GOOD)}`, row], angles).repairs).toMatchObject([{ kind, applied: false, column: 'loc', before: text }]);
    const { placed, repairs } = locate([`G,${line(GOOD)}`, row], { ...angles, repairs: [kind] });
    expect(repairs).toMatchObject([{ kind, applied: true }]);
    expect(Math.hypot(placed[1]!.x - centreX, placed[1]!.y - centreY)).toBeLessThan(1);
  });
  it('is not mended where two would do', () => {
    // 45 N 45 W: the sign and the order are both good for it.
    const [x, y] = frame.forward(-45, 45);
    const ring = [[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]].map(([sx, sy]) => [x + 200 * sx!, y + 200 * sy!] as const);
    const site = { ...testSite(), parcel: [[ring]], open: [[ring]] };
    const text = 'id,a,b,loc\nG,45.000,-45.000,\nX,45.002,45.001,\n';
    const { repairs, placed } = locateRecords([{ kind: 'table', name: 'p.csv', table: parseCsv(text, 'p.csv'), settings: { ...angles, repairs: ['longitude_sign', 'swapped_sign'] } }], site);
    expect(placed).toHaveLength(1);
    expect(repairs!.map(({ kind, applied }) => [kind, applied]).toSorted()).toEqual([['longitude_sign', false], ['swapped_sign', false]]);
  });
});

describe('a range on the wrong side of the meridian', () => {
  const east = madeLayer(MADE_TOWNSHIPS.filter(({ range }) => range !== '1W'));
  const rows = Array.from({ length: 12 }, (_, i) => `${i},,,Sec ${i + 1} T5N R1E`);

  it('is proposed where the row\'s own coordinates lie in the section of the other side', () => {
    const found = locate(['X,39.3001,-80.2001,Sec 15 T5N R1W'], angles, east);
    expect(found.repairs).toMatchObject([{ kind: 'range_side', applied: false, after: 'Sec 15 T5N R1E', evidence: expect.stringContaining('coordinates lie there') }]);
    expect(found.placed[0]!.note).toContain('not used');
    const mended = locate(['X,39.3001,-80.2001,Sec 15 T5N R1W'], { ...angles, repairs: ['range_side'] }, east);
    expect(mended.repairs).toMatchObject([{ applied: true }]);
    expect(mended.disagreements).toEqual([]);
  });
  it('is proposed of a row without coordinates where the file\'s other rows name sections there, nearly all', () => {
    const found = locate([...rows, 'X,,,660 FNL 660 FEL Sec 15 T5N R1W'], angles, east);
    expect(found.repairs).toMatchObject([{ recordId: 'X', kind: 'range_side', applied: false }]);
    expect(found.unplaced).toMatchObject([{ recordId: 'X', advice: expect.stringContaining('east side of the meridian') }]);
    const mended = locate([...rows, 'X,,,660 FNL 660 FEL Sec 15 T5N R1W'], { ...angles, repairs: ['range_side'] }, east);
    expect(mended.unplaced).toEqual([]);
    expect(mended.placed.at(-1)!.note).toContain('repaired: the range on the east side');
  });
  it.each([
    ['few other rows name sections there', ['X,,,Sec 15 T5N R1W', ...Array.from({ length: 5 }, (_, i) => `${i},,,Sec ${i + 1} T40N R1W`)], east],
    ['its coordinates lie elsewhere', ['X,39.3001,-80.2001,Sec 3 T5N R1W'], east],
    ['the section of the other side is not near either', [...rows, 'X,,,Sec 15 T5N R9W'], east],
    ['the layer has it as written, though out of reach', [...rows, 'X,,,Sec 17 T5N R1W'], layer],
    ['it is there as written', [...rows, 'X,,,Sec 13 T5N R1W'], layer],
  ])('is not proposed where %s', (_, list, townships) => {
    expect(locate(list, { ...angles, repairs: ['range_side'] }, townships).repairs).toEqual([]);
  });
});

describe('right but odd records', () => {
  it('of 10,000 at most 10 are proposed for repair', { timeout: 120_000 }, () => {
    const random = new Random(41);
    const settings = { repairs: ['longitude_sign', 'latitude_sign', 'swapped', 'swapped_sign', 'utm_zone', 'feet', 'metres', 'range_side'] as const };
    let [proposed, records] = [0, 0];
    const count = (rows: string[], file: RecordFileSettings): void => {
      const { repairs, placed, unplaced } = locate(rows, { ...settings, ...file });
      proposed += new Set(repairs!.map(({ row }) => row)).size;
      records += placed.length + unplaced.length - 1;
    };
    const between = (a: number, b: number): number => a + (b - a) * random.uniform();
    // Wells anywhere in the lower 48, in degrees.
    count([`G,${line(GOOD)}`, ...Array.from({ length: 4000 }, (_, i) => `${i},${between(25, 49).toFixed(4)},${between(-124, -67).toFixed(4)},`)], angles);
    // The same in the zones about the parcel, and in a State Plane system in feet, each in its own file.
    for (const [system, n] of [['EPSG:26916', 700], ['EPSG:26917', 700], ['EPSG:26918', 700], [FEET.code, 900]] as const) {
      const { areaOfUse } = crs(system);
      const rows = Array.from({ length: n }, (_, i) => `${i},${line(projected(system, between(areaOfUse.west, areaOfUse.east), between(Math.max(25, areaOfUse.south), Math.min(49, areaOfUse.north))))}`);
      count([`G,${line(projected(system))}`, ...rows], plane(system));
    }
    // Sections of both sides of the meridian, whether the layer has them or not, without coordinates.
    count([`G,${line(GOOD)}`, ...Array.from({ length: 1500 }, (_, i) => `${i},,,Sec ${1 + random.integer(36)} T${1 + random.integer(12)}N R${1 + random.integer(6)}${random.uniform() < 0.5 ? 'E' : 'W'}`)], angles);
    // Wells near section lines that name the section that they are in, their coordinates off by a map's error.
    const near = Array.from({ length: 1500 }, (_, i) => {
      const [x, y] = [centreX + between(-4000, 4000), centreY + between(-4000, 4000)];
      const [section] = layer.sectionsAt(x, y);
      const [lon, lat] = frame.inverse(x + 6 * random.normal(), y + 6 * random.normal());
      return `${i},${lat.toFixed(6)},${lon.toFixed(6)},Sec ${section!.section} T${section!.township}N R${section!.range}${section!.rangeDir}`;
    });
    count([`G,${line(GOOD)}`, ...near], { ...angles, source: 'map', mapScale: 24_000 });
    expect(records).toBe(10_000);
    expect(proposed).toBeLessThanOrEqual(10);
  });
});
