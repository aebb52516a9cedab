import { describe, expect, it } from 'vitest';
import { massIn } from '../../src/density/massIn.js';
import { region95 } from '../../src/density/region95.js';
import type { DensityPart } from '../../src/density/types.js';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import type { Crs, Datum } from '../../src/geodesy/types.js';
import { Random } from '../../src/numerics/random.js';
import { locateRecords } from '../../src/records/locateRecords.js';
import type { RecordFileSettings } from '../../src/records/recordSource.js';
import type { WellRecord } from '../../src/records/types.js';
import type { Site } from '../../src/site/types.js';
import type { TextTable } from '../../src/table/types.js';
import { testSite } from './testSite.js';

// The records are made as offices made them: a well is surveyed or plotted on a map, read off it on the map's datum and
// written down in so many digits, rounded or cut. Nothing here draws from the density that is put to the test.

const WELLS = 10_000;
const COLUMNS = { recordId: 'id', latitude: 'lat', longitude: 'lon', datum: 'datum', group: 'sheet' };

/** A site round a place, with the shifts of the program itself. */
function siteAt(lonDeg: number, latDeg: number, options: { shipped?: boolean } = {}): Site {
  const frame = crs(`EPSG:${26900 + Math.floor((lonDeg + 180) / 6) + 1}`);
  const [x, y] = frame.forward(lonDeg, latDeg);
  const ring = [[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]].map(([sx, sy]) => [x + 500 * sx!, y + 500 * sy!] as const);
  return { ...testSite(), frame, parcel: [[ring]], open: [[ring]], shiftFrom: (from) => datumShift(from, 'NAD83', options) };
}

/** Longitude and latitude of a frame place on another datum. */
function onDatum(frame: Crs, datum: Datum, [x, y]: readonly [number, number]): [number, number] {
  const { lonDeg, latDeg } = datumShift('NAD83', datum).place(...frame.inverse(x, y));
  return [lonDeg, latDeg];
}

type Point = readonly [x: number, y: number];

/** Decimals of a number, what follows cut off. */
function cut(value: number, decimals: number): string {
  // A text of more digits, shortened, is cut without the rounding of a multiplication.
  const text = value.toFixed(decimals + 8);
  return text.slice(0, text.length - 8);
}

/** Angle in degrees, minutes and whole seconds, the last rounded or cut. */
function dms(deg: number, toWhole: (seconds: number) => number): string {
  const seconds = toWhole(Math.abs(deg) * 3600);
  return `${deg < 0 ? '-' : ''}${Math.floor(seconds / 3600)} ${Math.floor(seconds / 60) % 60} ${seconds % 60}`;
}

function inDisc(random: Random, radius: number): Point {
  const [r, angle] = [radius * Math.sqrt(random.uniform()), 2 * Math.PI * random.uniform()];
  return [r * Math.cos(angle), r * Math.sin(angle)];
}

/**
 * How far a 1:24,000 map puts a well off, metres before `toStandard`: the well placed among details of its photograph
 * (0.2 mm) and drawn (0.17 mm) with a pen, plates in and out of register, control of the sheet, the paper's stretch each
 * way, a scale read to its nearest mark. Every part has an edge that it never passes; none is Gaussian.
 */
function rawSlip(random: Random): Point {
  const even = (half: number): number => half * (2 * random.uniform() - 1);
  const [placed, drawn] = [inDisc(random, 5), inDisc(random, 4)];
  const register = (): number => 4 * (random.uniform() - random.uniform());
  return [placed[0] + drawn[0] + register() + even(3) + even(3) + even(4), placed[1] + drawn[1] + register() + even(3) + even(2) + even(4)];
}

/** 40 ft at 1:24,000: the radius within which the map standard wants 90 % of the points. */
const STANDARD_M = 12.192;
const rawRadii = ((random) => Float64Array.from({ length: 40_000 }, () => Math.hypot(...rawSlip(random))).toSorted())(new Random(99));
/** Brings the made map to the standard, no better and no worse. */
const toStandard = STANDARD_M / rawRadii[36_000]!;

interface Made {
  readonly lat: string;
  readonly lon: string;
  readonly datum: string;
  readonly sheet?: string;
}

interface Case {
  readonly name: string;
  readonly settings: RecordFileSettings;
  /** What the record of a well at `truth` says. */
  read(truth: Point, random: Random, ways: Ways): Made;
}

interface Ways {
  lonLat(datum: Datum, at: Point): [lonDeg: number, latDeg: number];
  onMap(at: Point): Point;
  sheet(n: number): Point;
}

const decimals = (n: number) => ([lon, lat]: readonly [number, number], datum: string): Made => ({ lat: lat.toFixed(n), lon: lon.toFixed(n), datum });
const cutTo = (n: number) => ([lon, lat]: readonly [number, number], datum: string): Made => ({ lat: cut(lat, n), lon: cut(lon, n), datum });

/** A survey: six legs of a taped traverse, each off by an even error along and across it, and an instrument set up within a hand's breadth. Half a metre on each axis. */
function traversed([x, y]: Point, random: Random): Point {
  const [dx, dy] = inDisc(random, 0.4);
  let [along, across] = [0, 0];
  for (let leg = 0; leg < 6; leg++) {
    along += 0.324 * (2 * random.uniform() - 1);
    across += 0.324 * (2 * random.uniform() - 1);
  }
  return [x + dx + along, y + dy + across];
}

const MAP: RecordFileSettings = { source: 'map', mapScale: 24_000 };
const SURVEYED: RecordFileSettings = { source: 'surveyed' };
const UNKNOWN = { unknownDatum: { NAD27: 0.7, NAD83: 0.3 } };
/** Wells to a sheet, and how far the sheets lie off, by their control and by how their net was drawn: 6 m on each axis. */
const PER_SHEET = 20;
const SHEET_SD_M = 6;

const CASES: readonly Case[] = [
  { name: 'surveyed, rounded to 5 decimals', settings: SURVEYED, read: (truth, random, { lonLat }) => decimals(5)(lonLat('NAD83', traversed(truth, random)), 'NAD83') },
  { name: 'surveyed, rounded to 4 decimals', settings: SURVEYED, read: (truth, random, { lonLat }) => decimals(4)(lonLat('NAD83', traversed(truth, random)), 'NAD83') },
  { name: 'surveyed, rounded to 3 decimals', settings: SURVEYED, read: (truth, random, { lonLat }) => decimals(3)(lonLat('NAD83', traversed(truth, random)), 'NAD83') },
  { name: 'surveyed, cut to 4 decimals', settings: { ...SURVEYED, digits: 'truncated' }, read: (truth, random, { lonLat }) => cutTo(4)(lonLat('NAD83', traversed(truth, random)), 'NAD83') },
  {
    name: 'surveyed on NAD27, whole seconds, cut', settings: { ...SURVEYED, digits: 'truncated' },
    read: (truth, random, { lonLat }) => {
      const [lon, lat] = lonLat('NAD27', traversed(truth, random));
      return { lat: dms(lat, Math.floor), lon: dms(lon, Math.floor), datum: 'NAD27' };
    },
  },
  { name: 'read off a NAD27 map to 5 decimals', settings: MAP, read: (truth, _, { lonLat, onMap }) => decimals(5)(lonLat('NAD27', onMap(truth)), 'NAD27') },
  { name: 'read off a NAD27 map to 4 decimals', settings: MAP, read: (truth, _, { lonLat, onMap }) => decimals(4)(lonLat('NAD27', onMap(truth)), 'NAD27') },
  {
    name: 'read off a NAD27 map to whole seconds', settings: MAP,
    read: (truth, _, { lonLat, onMap }) => {
      const [lon, lat] = lonLat('NAD27', onMap(truth));
      return { lat: dms(lat, Math.round), lon: dms(lon, Math.round), datum: 'NAD27' };
    },
  },
  {
    name: 'a datum that nobody wrote down, 5 decimals', settings: { ...MAP, ...UNKNOWN },
    read: (truth, random, { lonLat, onMap }) => decimals(5)(lonLat(random.uniform() < 0.7 ? 'NAD27' : 'NAD83', onMap(truth)), ''),
  },
  {
    name: 'a datum that nobody wrote down, whole seconds', settings: { ...MAP, ...UNKNOWN },
    read: (truth, random, { lonLat, onMap }) => {
      const [lon, lat] = lonLat(random.uniform() < 0.7 ? 'NAD27' : 'NAD83', onMap(truth));
      return { lat: dms(lat, Math.round), lon: dms(lon, Math.round), datum: '' };
    },
  },
  {
    name: 'a datum that nobody wrote down, surveyed, 4 decimals', settings: { ...SURVEYED, ...UNKNOWN },
    read: (truth, random, { lonLat }) => decimals(4)(lonLat(random.uniform() < 0.7 ? 'NAD27' : 'NAD83', traversed(truth, random)), ''),
  },
  {
    name: 'read off sheets that are off as wholes', settings: { ...MAP, sharedSdM: SHEET_SD_M },
    read: (truth, random, { lonLat, onMap, sheet }) => {
      const n = random.integer(WELLS / PER_SHEET);
      const [x, y] = onMap(truth);
      const [dx, dy] = sheet(n);
      return { ...decimals(5)(lonLat('NAD27', [x + dx, y + dy]), 'NAD27'), sheet: String(n) };
    },
  },
];

interface Truths { readonly truths: readonly Point[]; readonly made: readonly Made[] }

function make({ read }: Case, site: Site, options: { seed: number; blunder?: (truth: Point, random: Random) => Point }): Truths {
  const random = new Random(options.seed);
  const ways: Ways = {
    lonLat: (datum, at) => onDatum(site.frame, datum, at),
    onMap: ([x, y]) => {
      const [dx, dy] = rawSlip(random);
      return [x + toStandard * dx, y + toStandard * dy];
    },
    sheet: (n) => {
      const own = random.fork(`sheet ${n}`);
      const [control, net] = [inDisc(own, Math.SQRT2 * SHEET_SD_M), inDisc(own, Math.SQRT2 * SHEET_SD_M)];
      return [control[0] + net[0], control[1] + net[1]];
    },
  };
  const [west, south] = site.parcel[0]![0]![0]!;
  const truths = Array.from({ length: WELLS }, (): Point => [west + 1000 * random.uniform(), south + 1000 * random.uniform()]);
  return { truths, made: truths.map((truth) => read(options.blunder ? options.blunder(truth, random) : truth, random, ways)) };
}

function locate(made: readonly Made[], site: Site, settings: RecordFileSettings): readonly WellRecord[] {
  const columns = new Map<string, string[]>([
    ['id', made.map((_, i) => `w${i}`)], ['lat', made.map(({ lat }) => lat)], ['lon', made.map(({ lon }) => lon)],
    ['datum', made.map(({ datum }) => datum)], ['sheet', made.map(({ sheet }) => sheet ?? '')],
  ]);
  const table: TextTable = { source: 'made.csv', names: [...columns.keys()], rows: made.length, columns };
  const { placed } = locateRecords([{ kind: 'table', name: 'made.csv', table, settings: { columns: COLUMNS, ...settings } }], site);
  expect(placed).toHaveLength(made.length);
  return placed;
}

/** Numbers of a density's place parts, from its record's place: records of one file on one parcel hardly differ in them. */
function shapeOf({ density, x, y }: WellRecord): number[] {
  const places = density.parts.filter((part): part is DensityPart & { kind: 'gaussian'; role: 'place' } => part.role === 'place' && part.kind === 'gaussian');
  return places.flatMap((part) => [part.weight, part.x - x, part.y - y, ...part.cov.map((value) => Math.sign(value) * Math.sqrt(Math.abs(value))), ...(part.rounding ?? []).flat()]);
}

interface Shares { readonly region: number; readonly ellipse: number }

/** Shares of the wells within the 95 % regions of their records, and within their ellipses. The region of the first record, moved, serves for all. */
function sharesInside(truths: readonly Point[], records: readonly WellRecord[]): Shares {
  const [first] = records as [WellRecord, ...WellRecord[]];
  const shape = shapeOf(first);
  const region = region95(first.density);
  let [inRegion, inEllipse] = [0, 0];
  truths.forEach(([tx, ty], i) => {
    const record = records[i]!;
    shapeOf(record).forEach((value, k) => { if (!(Math.abs(value - shape[k]!) < 0.05)) throw new Error(`record ${i} has another shape`); });
    const { x, y, semiMajM, semiMinM, azimDeg } = record;
    const [dx, dy, azimuth] = [tx - x, ty - y, (azimDeg * Math.PI) / 180];
    if (region.contains(first.x + dx, first.y + dy)) inRegion++;
    const along = dx * Math.sin(azimuth) + dy * Math.cos(azimuth);
    const across = dx * Math.cos(azimuth) - dy * Math.sin(azimuth);
    if ((along / semiMajM) ** 2 + (across / semiMinM) ** 2 <= 1) inEllipse++;
  });
  return { region: inRegion / truths.length, ellipse: inEllipse / truths.length };
}

describe('the 95 % region of 10,000 records holds 95 ± 1 % of their wells', () => {
  const site = siteAt(-80.2, 39.3);
  it.each(CASES)('$name', (each) => {
    const { truths, made } = make(each, site, { seed: 1 });
    const records = locate(made, site, { ...each.settings, blunderShare: 0 });
    const { region, ellipse } = sharesInside(truths, records);
    expect(region).toBeGreaterThan(0.94);
    expect(region).toBeLessThan(0.96);
    // The drawn ellipse holds what it says that it holds.
    expect(Math.abs(ellipse - records[0]!.excess!.massHeld)).toBeLessThan(0.01);
  });

  it.each(CASES.slice(5, 8))('no more and no fewer with one in twenty a blunder, counted as stated: $name', (each) => {
    const share = 0.05;
    const radius = 1609.347;
    const { truths, made } = make(each, site, {
      seed: 2, blunder: ([x, y], random) => {
        if (random.uniform() >= share) return [x, y];
        const [dx, dy] = inDisc(random, radius);
        return [x + dx, y + dy];
      },
    });
    const records = locate(made, site, { ...each.settings, blunderShare: share });
    const stated = massIn(records[0]!.density, region95(records[0]!.density).outline());
    expect(stated).toBeCloseTo(0.95 * 0.95, 2);
    expect(Math.abs(sharesInside(truths, records).region - stated)).toBeLessThan(0.01);
  });

  it('and would not, were digits, their cutting or the datum left out', () => {
    const named = (name: string): Case => CASES.find((each) => each.name === name)!;
    const share = (name: string, settings: RecordFileSettings, change: (made: Made) => Made = (made) => made): number => {
      const { truths, made } = make(named(name), site, { seed: 1 });
      return sharesInside(truths, locate(made.map(change), site, { ...settings, blunderShare: 0 })).region;
    };
    expect(share('read off a NAD27 map to whole seconds', MAP, (made) => ({ ...made, lat: `${made.lat}.00`, lon: `${made.lon}.00` }))).toBeLessThan(0.8);
    expect(share('surveyed, cut to 4 decimals', SURVEYED)).toBeLessThan(0.5);
    expect(share('a datum that nobody wrote down, 5 decimals', { ...MAP, datum: 'NAD83' })).toBeLessThan(0.75);
    expect(share('read off sheets that are off as wholes', MAP)).toBeLessThan(0.85);
  });
});

describe('a regional mean shift', () => {
  it('states its own miss: wells all over the lower 48, moved without a grid', () => {
    const random = new Random(4);
    let [inside, places] = [0, 0];
    for (let lon = -120; lon <= -76; lon += 4) {
      for (let lat = 32; lat <= 46; lat += 3.5) {
        const site = siteAt(lon, lat, { shipped: false });
        const truth = site.frame.forward(lon + 0.002 * random.uniform(), lat + 0.002 * random.uniform());
        const [lon27, lat27] = onDatum(site.frame, 'NAD27', truth);
        const records = locate([{ lat: lat27.toFixed(6), lon: lon27.toFixed(6), datum: 'NAD27' }], site, { errorM: 0.5 });
        expect(records[0]!.shift).toContain('mean');
        expect(records[0]!.group!.sharedSdM).toBeGreaterThan(3);
        expect(records[0]!.semiMajM).toBeLessThan(30);
        inside += sharesInside([truth], records).region;
        places++;
      }
    }
    expect(places).toBe(60);
    expect(inside / places).toBeGreaterThan(0.85);
  });
});
