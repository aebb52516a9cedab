import { describe, expect, it } from 'vitest';
import { areaM2 } from '../../src/density/area.js';
import { massInEllipse } from '../../src/density/massInEllipse.js';
import { crs } from '../../src/geodesy/crs.js';
import { Random } from '../../src/numerics/random.js';
import { locateRecords, type LocateOptions } from '../../src/records/locateRecords.js';
import type { RecordFileSettings } from '../../src/records/recordSource.js';
import type { Records, WellRecord } from '../../src/records/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { madeLayer, MILE_M } from './madeSections.js';
import { centreX, centreY, frame, testSite } from './testSite.js';

const FOOT_M = 1200 / 3937;
const layer = madeLayer();
const SECTION = layer.section({ township: 5, townshipDir: 'N', range: 1, rangeDir: 'E', section: 15 }, 'test');
const AREA = [[[...SECTION.frameVertices, SECTION.frameVertices[0]!]]];

function locate(text: string, settings: RecordFileSettings = {}, options: LocateOptions = {}): Records {
  const table = parseCsv(text, 'p.csv');
  const known = { recordId: 'id', latitude: 'lat', longitude: 'lon', location: 'loc', section: 'sec', township: 'twp', townshipDir: 'td', range: 'rng', rangeDir: 'rd', calls: 'calls', aliquot: 'part', group: 'sheet', source: 'src' } as const;
  const columns = Object.fromEntries(Object.entries(known).filter(([, name]) => table.names.includes(name)));
  return locateRecords([{ kind: 'table', name: 'p.csv', table, settings: { columns, datum: 'NAD83', source: 'gps', ...settings } }], testSite(), { sections: layer, ...options });
}
const said = (loc: string, settings: RecordFileSettings = {}): WellRecord => {
  const { placed, unplaced } = locate(`id,loc\nA,"${loc.replaceAll('"', '""')}"\n`, settings);
  expect(unplaced).toEqual([]);
  return placed[0]!;
};

/** Distance of a frame place from the line through two frame places, metres; over a mile the frame's scale costs 0.6 m. */
function fromLine(a: readonly [number, number], b: readonly [number, number], { x, y }: { x: number; y: number }): number {
  return Math.abs((b[0] - a[0]) * (y - a[1]) - (b[1] - a[1]) * (x - a[0])) / Math.hypot(b[0] - a[0], b[1] - a[1]);
}
const corner = (i: number): readonly [number, number] => SECTION.frameVertices[i]!;
const line = (side: 'N' | 'S' | 'E' | 'W'): [readonly [number, number], readonly [number, number], readonly [number, number]] =>
  SECTION.lines[side].map(corner) as [readonly [number, number], readonly [number, number], readonly [number, number]];

describe('what a location says', () => {
  it('footage calls: as far from the section\'s real lines as they say', () => {
    const record = said('660 FNL 1980 FEL Sec 15 T5N R1E');
    // The nearest piece of each line counts: 1,980 ft from the east is the eastern half of the north line.
    const [, nMiddle, nEast] = line('N');
    const [, eMiddle, eNorth] = line('E');
    expect(fromLine(nMiddle, nEast, record) / FOOT_M).toBeCloseTo(660, 0);
    expect(fromLine(eMiddle, eNorth, record) / FOOT_M).toBeCloseTo(1980, -1);
    // 3 m and 1 in 500 of measuring, 5.7 m at the corners of which two and two share each call.
    expect(record.posSdM).toBeGreaterThan(4);
    expect(record.posSdM).toBeLessThan(7);
    expect(record.density.parts.find(({ role }) => role === 'blunder')).toMatchObject({ kind: 'area', area: AREA });
  });
  it('calls beside a part are measured from it where they fit in, else from the section', () => {
    const [ne, joined, apart] = ['330 FSL 990 FWL of the NE/4 Sec 15 T5N R1E', '330 FSL 990 FWL NE/4 Sec 15 T5N R1E', '2310 FNL 1650 FEL SW/4 NE/4 Sec 15 T5N R1E'].map((text) => said(text));
    expect([joined!.x, joined!.y]).toEqual([ne!.x, ne!.y]);
    // 2,310 ft are more than the quarter of a quarter has: from the section, within a few yards of the other's.
    expect(Math.hypot(apart!.x - ne!.x, apart!.y - ne!.y)).toBeLessThan(15);
    expect(apart!.note).toBe('');
  });
  it('a tie to a corner, and the calls that say the same', () => {
    const [tie, calls] = [said('40 rods N and 20 rods E of SW cor Sec 15 T5N R1E'), said('660 FSL 330 FWL Sec 15 T5N R1E')];
    expect(Math.hypot(tie.x - calls.x, tie.y - calls.y)).toBeLessThan(1e-6);
    const [quarter, same] = [said('40 rods S and 20 rods E of N/4 cor Sec 15 T5N R1E'), said('660 FNL 330 FWL NE/4 Sec 15 T5N R1E')];
    expect(Math.hypot(quarter.x - same.x, quarter.y - same.y)).toBeLessThan(1e-6);
  });
  it('the centre of a part lies a quarter of the way where the part is a quarter', () => {
    const record = said('C NE/4 Sec 15 T5N R1E');
    expect(Math.hypot(record.x - (SECTION.frameVertices.reduce((s, p) => s + p[0], 0) / 8 + MILE_M / 4), record.y - (SECTION.frameVertices.reduce((s, p) => s + p[1], 0) / 8 + MILE_M / 4))).toBeLessThan(30);
  });
  it.each([['NE/4 SW/4', 40], ['N/2', 320], ['Sec', 640]])('%s alone is an even spread over %i acres', (part, acres) => {
    const record = said(part === 'Sec' ? 'Sec 15 T5N R1E' : `${part} Sec 15 T5N R1E`);
    const place = record.density.parts.find(({ role }) => role === 'place')!;
    if (place.kind !== 'area') throw new Error('no area');
    // An acre is 10 square chains.
    expect(areaM2(place.area) / (10 * (66 * FOOT_M) ** 2) / acres).toBeCloseTo(1, 1);
    // A line follows its two ends: of the corners' variance it has a third to two thirds.
    for (const at of [0, 2] as const) expect([place.cov![at] / 5.7 ** 2 > 0.33, place.cov![at] / 5.7 ** 2 < 0.7]).toEqual([true, true]);
    // Its ellipse encloses the region that holds 95 %, and so more than that.
    const held = massInEllipse({ parts: [{ ...place, weight: 1, role: 'place' }] }, record);
    expect(held).toBeGreaterThan(0.95);
    expect(record.excess!.massHeld).toBeCloseTo(held, 2);
    expect(record.group).toBeNull();
    expect(record.density.parts.find(({ role }) => role === 'blunder')!.kind).toBe(part === 'Sec' ? 'disc' : 'area');
  });
  it('distances from the corner of a map, on the datum of the map', () => {
    const record = said('1,000\' N of 39°17\'30", 2,000\' E of 80°12\'30" NAD27', { source: 'map', mapScale: 24_000 });
    const [x, y] = frame.forward(-80.20833333 + 2000 * FOOT_M / 86_295 + 0.00019, 39.29166667 + 1000 * FOOT_M / 111_014 + 0.00009);
    expect(Math.hypot(record.x - x, record.y - y)).toBeLessThan(0.5);
    expect(record.posSdM).toBeCloseTo(5.68, 1);
    expect(record).toMatchObject({ datum: 'NAD27', note: expect.stringContaining('taken as west') });
  });
  it.each([`UTM zone 17 E ${centreX.toFixed(0)} N ${centreY.toFixed(0)}`, `UTM 17N ${centreX.toFixed(0)}E ${centreY.toFixed(0)}N NAD83`, `State Plane zone 4701 Easting ${crs('EPSG:26853').forward(-80.2, 39.3).map((v) => (v / FOOT_M).toFixed(0)).join(' US survey feet, Northing ')} US survey feet`, '39.3 N 80.2 W', 'N 39° 18\' 00.0" W 80° 12\' 00.0"'])('coordinates in words: %s', (text) => {
    const record = said(text);
    expect(Math.hypot(record.x - centreX, record.y - centreY)).toBeLessThan(2);
  });
  it('columns of section, township, range, calls and part make up one location', () => {
    const { placed } = locate('id,sec,twp,rng,calls,part\nA,15,T5N,R1E,660 FNL 1980 FEL,NW/4 NE/4\nB,Sec 15,5N,1E,,NE/4 SW/4\nC,15,5N,1E,,\n');
    expect(placed[0]).toMatchObject({ x: said('660 FNL 1980 FEL Sec 15 T5N R1E').x, note: '' });
    expect(placed[1]!.basis).toContain('NE/4 SW/4 of section 15, T5N R1E');
    expect(placed[2]!.basis).toContain('anywhere in section 15');
    expect(locate('id,sec,twp,td,rng,rd\nA,15,5,N,1,E\n').placed[0]!.x).toBe(placed[2]!.x);
  });
  it('classes by row, and errors of a class as stated', () => {
    const { placed } = locate('id,loc,src\nA,39.30001 N 80.20001 W,spotted from map\nB,39.30001 N 80.20001 W,gps\nC,39.30002 N 80.20001 W,GPS\nD,39.30001 N 80.20001 W,dowser\n', { mapScale: 24_000, classErrors: { gps: 9 } });
    expect(placed.map(({ recordId }) => recordId)).toEqual(['A', 'B', 'C']);
    expect(placed[0]!.basis).toMatch(/^1:24,000 map 5\.7 m/);
    expect(placed[1]!.posSdM).toBeCloseTo(9, 1);
    expect(placed[1]!.basis).toContain('as stated for its class');
  });
});

describe('several statements of one record', () => {
  const CALLS = '660 FNL 1980 FEL Sec 15 T5N R1E';
  const called = said(CALLS);
  /** Coordinates some metres off the place that the calls lead to. */
  const near = (east: number, north: number): string => {
    const [lon, lat] = frame.inverse(called.x + east, called.y + north);
    return `${lat.toFixed(6)},${lon.toFixed(6)}`;
  };
  it.each<[what: string, row: string, rests: string, disagree: string[], share: number]>([
    ['coordinates near the calls', `${near(6, 4)},${CALLS}`, 'hand-held GPS', [], 0],
    ['coordinates 200 m from the calls', `${near(200, 0)},${CALLS}`, 'hand-held GPS', ['footage calls 660 ft FNL 1980 ft FEL of section 15, T5N R1E'], 0.475],
    ['coordinates in the section named', `${near(200, 0)},Sec 15 T5N R1E`, 'hand-held GPS', [], 0],
    ['coordinates a few metres outside the section named', `${near(0, 660 * FOOT_M + 6)},Sec 15 T5N R1E`, 'hand-held GPS', [], 0],
    ['coordinates 60 m outside the section named', `${near(0, 660 * FOOT_M + 60)},Sec 15 T5N R1E`, 'hand-held GPS', ['section 15, T5N R1E'], 0.475],
    ['calls that lead out of the part named', `,,660 FNL 1980 FEL NE/4 SW/4 Sec 15 T5N R1E`, 'footage calls', ['NE/4 SW/4 of section 15, T5N R1E'], 0.475],
    ['calls in the part named', `,,660 FNL 1980 FEL NW/4 NE/4 Sec 15 T5N R1E`, 'footage calls', [], 0],
    // Coordinates beside coordinates may be copies: they count once.
    ['two coordinates that agree, calls that do not', `${near(300, 0)},${`UTM 17N ${(called.x + 301).toFixed(0)}E ${called.y.toFixed(0)}N`}; ${CALLS}`, 'hand-held GPS', ['footage calls 660 ft FNL 1980 ft FEL of section 15, T5N R1E'], 0.475],
    ['coordinates alone against two that agree', `${near(300, 0)},${`UTM 17N ${called.x.toFixed(0)}E ${called.y.toFixed(0)}N`}; ${CALLS}`, 'hand-held GPS', [expect.stringContaining('coordinates') as unknown as string], 0.95 * 0.05],
  ])('%s', (_, row, rests, disagree, share) => {
    const { placed, disagreements } = locate(`id,lat,lon,loc\nA,${row}\n`);
    const [record] = placed as [WellRecord];
    expect(record.basis.startsWith(rests)).toBe(true);
    expect(disagreements!.map(({ other }) => other)).toEqual(disagree);
    for (const each of disagreements!) expect(each.otherShare).toBeCloseTo(share, 3);
    expect(record.note.includes('disagrees')).toBe(disagree.length > 0);
    expect(record.density.parts.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
  });
  it('disagree by chance alone as seldom as the stated level says', () => {
    const random = new Random(11);
    // Right coordinates and right calls: off by the errors that both are said to have.
    const sd = Math.hypot(2.13, called.posSdM);
    const rows = Array.from({ length: 4000 }, (_, i) => `${i},${near(sd * random.normal(), sd * random.normal())},${CALLS}`);
    const { disagreements } = locate(['id,lat,lon,loc', ...rows].join('\n'), {}, { disagreeBelow: 0.01 });
    // 40 expected, σ 6.3.
    expect(disagreements!.length).toBeGreaterThan(20);
    expect(disagreements!.length).toBeLessThan(60);
  });
  it('uses of a section what the layer has, and notes the rest', () => {
    const { placed } = locate('id,loc\nA,Lot 3 Sec 15 T5N R1E\nB,660 FNL 660 FEL Lot 3 Sec 15 T5N R1E\n');
    expect(placed.map(({ basis }) => basis.slice(0, 8))).toEqual(['anywhere', 'footage ']);
    for (const { note } of placed) expect(note).toMatch(/used in part: lot 3 of section 15, T5N R1E, looked up in sections\.shp, which has no lots/);
  });
  it('what cannot be read does not spoil what can', () => {
    const { placed, unplaced } = locate(`id,lat,lon,loc\nA,39.3000,-80.2000,somewhere near the creek\nB,39.3l,-80.2000,${CALLS}\nC,,,somewhere near the creek\nD,,,\nE,39.3,,\n`);
    expect(placed.map(({ recordId, note }) => [recordId, note.includes('not used')])).toEqual([['A', true], ['B', true]]);
    expect(unplaced.map(({ recordId, column }) => [recordId, column])).toEqual([['C', 'loc'], ['D', 'lat, lon'], ['E', 'lon']]);
  });
});

describe('groups', () => {
  const rows = 'id,lat,lon,sheet\nA,39.30001,-80.20001,S1\nB,39.30101,-80.20001,S1\nC,39.30201,-80.20001,\n';
  it('share a shift by the columns that make them up; a blank cell makes none', () => {
    const { placed } = locate(rows, { sharedSdM: 4 });
    expect(placed.map(({ group }) => group)).toEqual([{ id: 'p.csv / NAD83 / S1', sharedSdM: 4 }, { id: 'p.csv / NAD83 / S1', sharedSdM: 4 }, null]);
    // The density is marginal: the shared part is in it, of the record without a group too.
    for (const { posSdM } of placed) expect(posSdM).toBeCloseTo(Math.hypot(2.13, 4, 0.3), 1);
  });
  it('may take several columns', () => {
    const table = parseCsv('id,lat,lon,sheet,op\nA,39.30001,-80.20001,S1,Bell\nB,39.30101,-80.20001,S1,Cole\n', 'p.csv');
    const { placed } = locateRecords([{ kind: 'table', name: 'p.csv', table, settings: { columns: { recordId: 'id', latitude: 'lat', longitude: 'lon', group: ['sheet', 'op'] }, datum: 'NAD83', sharedSdM: 4 } }], testSite());
    expect(placed.map(({ group }) => group!.id)).toEqual(['p.csv / NAD83 / S1 / Bell', 'p.csv / NAD83 / S1 / Cole']);
  });
});

describe('the decision log', () => {
  it('has one line a row: read as, moved by, rests on, sure to', () => {
    const { log } = locate('id,lat,lon,loc\nA,39.3001,-80.2001,660 FNL 1980 FEL Sec 15 T5N R1E\nB,,,NE/4 SW/4 Sec 15 T5N R1E\nC,39.3001,80.2001,\nD,,,?\n');
    expect(log!.map(({ recordId, source, row }) => [recordId, source, row])).toEqual([['A', 'p.csv', 1], ['B', 'p.csv', 2], ['C', 'p.csv', 3], ['D', 'p.csv', 4]]);
    expect(log![0]).toMatchObject({
      readAs: 'section "660 FNL 1980 FEL Sec 15 T5N R1E"; coordinates "39.3001, -80.2001" on NAD83', movedBy: 'none',
      restsOn: expect.stringContaining('hand-held GPS'), sureTo: expect.stringMatching(/^95 % within [\d.]+ m by [\d.]+ m, azimuth \d+° \(the ellipse round it holds 96\.\d %\), but for a chance of 52\.5 % that it lies elsewhere; disagrees with its footage calls/),
    });
    expect(log![1]!.restsOn).toContain('anywhere in NE/4 SW/4');
    expect(log![2]).toMatchObject({ movedBy: expect.stringContaining('repair proposed: the sign of the longitude'), sureTo: expect.stringContaining('not placed') });
    expect(log![3]!.sureTo).toContain('not placed');
  });
});

describe('without a layer of sections', () => {
  it('says what is missing', () => {
    const table = parseCsv('id,loc\nA,Sec 15 T5N R1E\n', 'p.csv');
    const { unplaced } = locateRecords([{ kind: 'table', name: 'p.csv', table, settings: { columns: { recordId: 'id', location: 'loc' } } }], testSite());
    expect(unplaced).toMatchObject([{ problem: expect.stringContaining('no layer of sections'), advice: expect.stringContaining('sections') }]);
  });
});
