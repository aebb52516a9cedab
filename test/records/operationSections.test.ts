import { existsSync, readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, it } from 'vitest';
import type { FileSource } from '../../src/files.js';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { locate } from '../../src/operations/locate.js';
import { readParameters } from '../../src/operations/readParameters.js';
import type { Records } from '../../src/records/types.js';
import type { Site } from '../../src/site/types.js';
import { madeSections } from './madeSections.js';
import { frame, testSite } from './testSite.js';

const made = madeSections();
const sections = JSON.stringify({
  type: 'FeatureCollection',
  features: made.features.map(({ geometry, properties: { TWNSHPNO, RANGENO, FRSTDIVNO } }) => ({
    type: 'Feature', properties: { twp: TWNSHPNO, rng: RANGENO, sec: FRSTDIVNO },
    geometry: { type: 'Polygon', coordinates: (geometry as { coordinates: number[][][] }).coordinates.map((ring) => ring.map(([x, y]) => frame.inverse(x!, y!))) },
  })),
});

async function run(given: Record<string, unknown>, texts: Readonly<Record<string, string>>, site: Site = testSite()): Promise<{ records: Records; warnings: string[] }> {
  const warnings: string[] = [];
  const files: FileSource = { has: async (path) => path in texts, read: async (path) => new TextEncoder().encode(texts[path]!) };
  const parameters = readParameters(given, locate.parameters, { where: 'survey.json, locate', resolve: (path) => path });
  const { records } = await locate.run({ site, parameters, inputs: {}, files, seed: 0, progress: () => {}, warn: (message) => warnings.push(message) });
  return { records: records as Records, warnings };
}

const LAYER = { path: 'sections.geojson', columns: { township: 'twp', range: 'rng', section: 'sec' } };
const PERMITS = {
  path: 'permits.csv', datum: 'NAD83', source: 'gps',
  columns: { record_id: 'id', latitude: 'lat', longitude: 'lon', location: 'loc', api_number: 'api', name: 'name', well_number: 'no', map_date: 'date', group: ['sheet', 'name'] },
};
const HEAD = 'id,lat,lon,loc,api,name,no,date,sheet\n';

describe('locate with a layer of sections', () => {
  it('reads the layer by its own columns, and says what was found out', async () => {
    const { records, warnings } = await run({ files: [PERMITS], sections: LAYER }, {
      'sections.geojson': sections,
      'permits.csv': `${HEAD}A,,,660 FNL 1980 FEL Sec 15 T5N R1E,37-059-01234,Corwin,1,,\nB,39.3001,80.2001,,,,,,\nC,39.3001,-80.2001,660 FNL 1980 FEL Sec 15 T5N R1E,,,,,\nD,,,661 FNL 1981 FEL Sec 15 T5N R1E,3705901234,,,,\nE,39.3001,-80.2003,,37-058-01234,,,,\n`,
    });
    expect(records.placed.map(({ recordId }) => recordId)).toEqual(['A', 'C', 'E']);
    // 5.7 m at the corners and, of the layer's move from WGS 84, 2 m and 5 m.
    expect(records.placed[0]!.basis).toMatch(/section corners [67]\.\d m/);
    expect(warnings).toEqual([
      expect.stringMatching(/^permits\.csv, row 3: coordinates 39\.3001, -80\.2001 and footage calls .* lie 6\d\d m apart, more than their errors allow\.$/),
      expect.stringMatching(/^permits\.csv, row 4: joined with A, the same API number 37-059-01234; 0 m apart\.$/),
      expect.stringMatching(/^permits\.csv, row 5: API number "37-058-01234", county 058/),
      expect.stringMatching(/^permits\.csv, row 2: not placed, .* with the sign of the longitude changed/),
    ]);
  });
  it('takes the further keys, quantities with units among them', async () => {
    const rows = `${HEAD}A,39.3001,80.2001,,,,,1962,S1\nB,39.30000,-80.20000,,,,,1999-05-01,S1\nC,,,660 FNL 1980 FEL Sec 15 T5N R1E,,,,,\n`;
    const { records, warnings } = await run({
      files: [{ ...PERMITS, datum_by_date: [{ before: '1986-01-01', datum: 'NAD27' }], class_errors: { gps: '30 ft' }, shared_sd_m: 3, repairs: ['longitude_sign'], meridian: 'Willamette', length_unit: 'ft' }],
      sections: LAYER, section_sd_m: '10 ft', call_sd_m: 1, call_sd_share: 0.001, disagree_below: 0.01,
    }, { 'sections.geojson': sections, 'permits.csv': rows });
    expect(records.placed.map(({ recordId, datum, group }) => [recordId, datum, group?.id])).toEqual([
      ['A', 'NAD27', 'permits.csv / NAD27 / S1 / '], ['B', 'NAD83', 'permits.csv / NAD83 / S1 / '], ['C', 'NAD83', undefined],
    ]);
    expect(records.placed[0]!.basis).toContain('9.1 m (as stated for its class)');
    expect(records.placed[2]!.basis).toContain('measured 1.1 m');
    expect(records.log).toHaveLength(3);
    expect(warnings).toEqual([expect.stringMatching(/^permits\.csv, row 1: repaired, the sign of the longitude changed: 39\.3001, 80\.2001 was read as 39\.3001, -80\.2001/)]);
  });
  it.each([
    [{ files: [{ ...PERMITS, repairs: ['longitude'] }] }, 'longitude_sign'],
    [{ files: [{ ...PERMITS, class_errors: { gsp: 3 } }] }, 'did you mean "gps"'],
    [{ files: [PERMITS], sections: { path: 'sections.geojson', columns: { town: 'twp' } } }, 'township'],
    [{ files: [PERMITS], disagree_below: 1 }, 'disagree_below'],
    [{ files: [{ ...PERMITS, datum_by_date: [{ before: '1986-01-01' }] }] }, 'datum'],
  ])('refuses keys that are none: %j', async (given, says) => {
    await expect(run(given, { 'sections.geojson': sections, 'permits.csv': `${HEAD}` })).rejects.toMatchObject({ message: expect.stringContaining(says) });
  });
  it('says which columns the layer lacks', async () => {
    await expect(run({ files: [PERMITS], sections: { path: 'sections.geojson' } }, { 'sections.geojson': sections, 'permits.csv': `${HEAD}A,39.3,-80.2,,,,,,\n` }))
      .rejects.toMatchObject({ code: 'column_missing', message: expect.stringContaining('FRSTDIVNO') });
  });
});

const REAL = fileURLToPath(new URL('../../../shared/checks/sections_public_land.geojson', import.meta.url));

describe.skipIf(!existsSync(REAL))('on real sections', () => {
  /** A site in a frame about the three sections: longitude and latitude of their middle are from the file. */
  function siteIn(code: string): Site {
    const own = crs(code);
    const [x, y] = own.forward(-119.3157, 42.5675);
    const ring = [[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]].map(([sx, sy]) => [x + 300 * sx!, y + 300 * sy!] as const);
    return { ...testSite(), frame: own, parcel: [[ring]], open: [[ring]], shiftFrom: (from) => datumShift(from, own.datum) };
  }
  it('a call leads to one place in State Plane and UTM alike', async () => {
    const texts = { 'sections.geojson': readFileSync(REAL, 'utf8'), 'permits.csv': 'id,loc\nA,660 FNL 1980 FEL Sec 3 T35S R29E\nB,330 FSL 990 FWL of the NE/4 Sec 4 T35S R29E WM\nC,C SW/4 NE/4 Sec 3 T35S R29E\n' };
    const given = { files: [{ path: 'permits.csv', columns: { record_id: 'id', location: 'loc' } }], sections: { path: 'sections.geojson' } };
    const places = await Promise.all(['EPSG:2270', 'EPSG:26911'].map(async (code) => {
      const { records } = await run(given, texts, siteIn(code));
      return records.placed.map(({ x, y }) => crs(code).inverse(x, y));
    }));
    expect(places[0]).toHaveLength(3);
    places[0]!.forEach(([lon, lat], i) => {
      const [otherLon, otherLat] = places[1]![i]!;
      // 0.05 ft is 1.4e-7 degrees of latitude.
      expect(Math.hypot((lon - otherLon) * Math.cos((lat * Math.PI) / 180), lat - otherLat)).toBeLessThan(1.4e-7);
    });
  });
});
