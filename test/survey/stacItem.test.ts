import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import type { Site } from '../../src/site/types.js';
import { stacItem, type AssetTrace } from '../../src/survey/stacItem.js';
import { testSite } from '../records/testSite.js';
import { stacValidator } from '../support/schemas.js';

const validate = stacValidator();
const SHA256 = 'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855';
const FILE = { bytes: 4096, sha256: SHA256 };
const RASTER: AssetTrace = {
  ...FILE, key: 'residual', path: 'residual.tif', title: 'Residual field', mediaType: 'image/tiff; application=geotiff; profile=cloud-optimized', roles: ['residual', 'data'],
  raster: { epsg: 26917, width: 200, height: 120, west: 569_000, north: 4_350_500, cell: 2, unit: 'nT', statistics: { minimum: -40.5, maximum: 812, mean: 3.25, stddev: 21, valid_percent: 96.4 } },
};
const ASSETS: readonly AssetTrace[] = [
  RASTER,
  { ...RASTER, key: 'covered', path: 'covered.tif', roles: ['transform'], raster: { epsg: 26917, width: 1, height: 1, west: 0, north: 0, cell: 0.5, unit: '' } },
  { ...FILE, key: 'findings', path: 'findings.geojson', title: 'Findings', mediaType: 'application/geo+json', roles: ['findings'], epsg: 4326 },
  { ...FILE, key: 'findings_fgb', path: 'findings.fgb', title: 'Findings', mediaType: 'application/vnd.flatgeobuf', roles: ['findings'], epsg: 26917 },
  { ...FILE, key: 'readings', path: 'readings.csv', title: 'Readings', mediaType: 'text/csv', roles: ['readings'], epsg: 26917 },
  { ...FILE, key: 'report', path: 'report.html', title: 'Report', mediaType: 'text/html', roles: ['report'] },
  { ...FILE, bytes: 0, key: 'stage_records', path: 'stages/records.json', title: 'Positions', mediaType: 'application/json', roles: ['metadata'] },
];
const OPTIONS = { id: 'test-ground', start: '2026-04-14T13:00:00Z', end: '2026-04-15T17:30:00Z', date: '2026-04-14', steps: [{ id: 'locate', version: '1.0.0' }, { id: 'grid', version: '1.2.0' }] };

type Item = Record<string, unknown> & {
  stac_extensions: string[]; bbox: [number, number, number, number]; properties: Record<string, unknown>;
  geometry: { type: string; coordinates: unknown[] }; assets: Record<string, Record<string, unknown>>;
};
const made = (site: Site, assets: readonly AssetTrace[], options: Partial<{ start: string | null; end: string | null }> = {}): Item =>
  stacItem(site, assets, { ...OPTIONS, ...options }) as Item;

/** A ring in degrees: its signed area, positive counter-clockwise. */
function signedArea(ring: readonly (readonly number[])[]): number {
  return ring.slice(1).reduce((sum, [x, y], i) => sum + (ring[i]![0]! * y! - x! * ring[i]![1]!) / 2, 0);
}

describe('stacItem', () => {
  it('is valid by STAC 1.1.0 and every extension it declares, as it is written and read back', () => {
    expect(validate(made(testSite(), ASSETS))).toEqual([]);
    expect(validate(JSON.parse(JSON.stringify(made(testSite(), ASSETS))))).toEqual([]);
  });

  it('is valid with no raster, and then does not declare the raster extension', () => {
    const item = made(testSite(), ASSETS.filter(({ raster }) => !raster));
    expect(validate(item)).toEqual([]);
    expect(item.stac_extensions.join()).not.toContain('raster');
    expect(made(testSite(), ASSETS).stac_extensions.join()).toContain('raster/v2.0.0');
  });

  it('is valid with no asset at all', () => {
    expect(validate(made(testSite(), []))).toEqual([]);
  });

  it.each([
    ['a span', {}, { datetime: null, start_datetime: OPTIONS.start, end_datetime: OPTIONS.end }],
    ['one time', { end: OPTIONS.start }, { datetime: OPTIONS.start }],
    ['a start alone', { end: null }, { datetime: OPTIONS.start }],
    ['an end alone', { start: null }, { datetime: OPTIONS.end }],
    ['no readings', { start: null, end: null }, { datetime: '2026-04-14T00:00:00Z' }],
  ])('tells the time of %s', (_, given, wanted) => {
    const item = made(testSite(), ASSETS, given);
    expect(validate(item)).toEqual([]);
    const { datetime, start_datetime, end_datetime } = item.properties;
    expect(JSON.parse(JSON.stringify({ datetime, start_datetime, end_datetime }))).toEqual(wanted);
  });

  it('is valid for a parcel in two parts with a hole; rings run as RFC 7946 wants them, and the box holds every corner', () => {
    const site = testSite();
    const [x, y] = site.parcel[0]![0]![0]!;
    const square = (west: number, south: number, side: number): [number, number][] =>
      [[west, south], [west, south + side], [west + side, south + side], [west + side, south], [west, south]];
    const item = made({ ...site, parcel: [[square(x, y, 300), square(x + 100, y + 100, 50)], [square(x + 1000, y, 200)]] }, ASSETS);
    expect(validate(item)).toEqual([]);
    expect(item.geometry.type).toBe('MultiPolygon');
    const polygons = item.geometry.coordinates as [number, number][][][];
    expect(polygons.map((rings) => rings.map((ring) => Math.sign(signedArea(ring))))).toEqual([[1, -1], [1]]);
    const corners = polygons.flat(2);
    expect(item.bbox).toEqual([
      Math.min(...corners.map(([lon]) => lon)), Math.min(...corners.map(([, lat]) => lat)),
      Math.max(...corners.map(([lon]) => lon)), Math.max(...corners.map(([, lat]) => lat)),
    ]);
  });

  it('keeps the grid in the units of its CRS: in Pennsylvania South (EPSG:2272) the box is in US survey feet', () => {
    const frame = crs('EPSG:2272');
    const [x, y] = frame.forward(-79.5, 40.2);
    const site: Site = { ...testSite(), frame, parcel: [[[[x, y], [x + 100, y], [x + 100, y + 100], [x, y + 100], [x, y]]]] };
    const { properties, ...item } = made(site, ASSETS);
    expect(validate({ ...item, properties })).toEqual([]);
    const [west, south, east, north] = properties['proj:bbox'] as [number, number, number, number];
    // 1 m = 3937/1200 US survey feet (NIST Handbook 44, appendix C).
    expect(east - west).toBeCloseTo(100 * 3937 / 1200, 6);
    expect(north - south).toBeCloseTo(100 * 3937 / 1200, 6);
    expect(properties['proj:code']).toBe('EPSG:2272');
  });

  it('says of each asset where its coordinates lie, and of a file without coordinates that it has none', () => {
    const { assets } = made(testSite(), ASSETS);
    expect(Object.fromEntries(Object.entries(assets).map(([key, asset]) => [key, asset['proj:code']]))).toEqual({
      residual: 'EPSG:26917', covered: 'EPSG:26917', findings: 'EPSG:4326', findings_fgb: 'EPSG:26917', readings: 'EPSG:26917', report: null, stage_records: null,
    });
    expect(assets.residual).toMatchObject({ 'proj:shape': [120, 200], 'proj:transform': [2, 0, 569_000, 0, -2, 4_350_500, 0, 0, 1], 'file:size': 4096 });
    expect(assets.residual!['file:checksum']).toBe(`1220${SHA256}`);
  });
});
