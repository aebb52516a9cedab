import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import type { FileSource } from '../../src/files.js';
import { locate } from '../../src/operations/locate.js';
import { readParameters } from '../../src/operations/readParameters.js';
import type { Records } from '../../src/records/types.js';
import { testSite } from './testSite.js';

const texts: Readonly<Record<string, string>> = {
  '/survey/permits.csv': 'no,lat,lon,datum\nA-1,"39°18\'00""","80°12\'00"" W",NAD27\nA-2,39.3010,80.2010,NAD27\n\nA-3,39.3000,-80.2000,\n',
  '/survey/wells.geojson': JSON.stringify({
    type: 'FeatureCollection',
    features: [{ type: 'Feature', properties: { api: 'W-9', r90: 12 }, geometry: { type: 'Point', coordinates: [-80.20012, 39.30034] } }],
  }),
};
const files: FileSource = {
  has: async (path) => path in texts,
  read: async (path) => new TextEncoder().encode(texts[path]!),
};

async function run(given: Record<string, unknown>): Promise<{ records: Records; warnings: string[] }> {
  const warnings: string[] = [];
  const parameters = readParameters(given, locate.parameters, { where: 'survey.json, locate', resolve: (path) => `/survey/${path}` });
  const { records } = await locate.run({
    site: testSite(), parameters, inputs: {}, files, seed: 0, progress: () => {}, warn: (message) => warnings.push(message),
  });
  return { records: records as Records, warnings };
}

describe('locate', () => {
  const permits = { path: 'permits.csv', columns: { record_id: 'no', latitude: 'lat', longitude: 'lon', datum: 'datum' }, source: 'map', map_scale: 24_000, unknown_datum: { NAD27: 0.7, NAD83: 0.3 } };
  const wells = { path: 'wells.geojson', columns: { record_id: 'api', error_90_m: 'r90' }, source: 'gps' };

  it('reads tables and vector files as the survey file says', async () => {
    const { records, warnings } = await run({ files: [permits, wells] });
    expect(records.placed.map(({ recordId, datum, source }) => [recordId, datum, source])).toEqual([
      ['A-1', 'NAD27', 'permits.csv'], ['A-3', 'unknown', 'permits.csv'], ['W-9', 'WGS 84', 'wells.geojson'],
    ]);
    expect(records.placed[2]!.basis).toMatch(/^hand-held GPS, stated 12\.0 m \(90 % radius\), 5\.6 m per axis; /);
    expect(records.placed[0]!.density.parts.map(({ weight }) => weight)).toEqual([0.95, 0.05]);
    expect(warnings).toEqual([
      expect.stringContaining('blank line'),
      expect.stringMatching(/^permits\.csv, row 2: not placed, lies 11,\d{3} km from the parcel, more than the 10 km that max_distance_m allows; with the sign of the longitude changed it would lie 141 m from the parcel's centre; correct the row\.$/),
    ]);
  });
  it('takes quantities with units', async () => {
    const { records } = await run({ files: [{ ...wells, columns: { record_id: 'api' }, error_m: '40 ft' }], max_distance_m: '5 km' });
    expect(records.placed[0]!.basis).toContain('stated 12.2 m (1 σ per axis)');
  });
  it('refuses a misspelt key, an unknown CRS and weights that are none', async () => {
    await expect(run({ files: [{ ...permits, map_scal: 1 }] })).rejects.toMatchObject({ code: 'key_invalid', message: expect.stringContaining('did you mean "map_scale"') });
    await expect(run({ files: [{ ...permits, crs: 'EPSG:99999' }] })).rejects.toMatchObject({ code: 'crs_unknown', message: expect.stringContaining('permits.csv, crs') });
    await expect(run({ files: [{ ...permits, unknown_datum: { NAD72: 1 } }] })).rejects.toBeInstanceOf(UserError);
  });
});
