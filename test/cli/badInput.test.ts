import { existsSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { demoFolder, edit, editSurvey, ironplat } from '../support/cli.js';

/** Each answer is one sentence that names the file, the row or key, what was found and what is wanted; nothing is written. */
interface Case {
  readonly what: string;
  readonly spoil: (folder: string) => void;
  readonly status: 1 | 2;
  readonly says: readonly (string | RegExp)[];
}

const swapColumns = (text: string, a: string, b: string): string => {
  const [head, ...rows] = text.trimEnd().split('\n');
  const names = head!.split(',');
  const [i, j] = [names.indexOf(a), names.indexOf(b)];
  return `${[head, ...rows.map((row) => {
    const cells = row.split(',');
    [cells[i], cells[j]] = [cells[j]!, cells[i]!];
    return cells.join(',');
  })].join('\n')}\n`;
};
const mapColumn = (text: string, name: string, change: (cell: string) => string): string => {
  const [head, ...rows] = text.trimEnd().split('\n');
  const at = head!.split(',').indexOf(name);
  return `${[head, ...rows.map((row) => row.split(',').map((cell, i) => (i === at ? change(cell) : cell)).join(','))].join('\n')}\n`;
};
const geojson = (ring: number[][]): string => JSON.stringify({ type: 'FeatureCollection', features: [{ type: 'Feature', properties: {}, geometry: { type: 'Polygon', coordinates: [ring] } }] });

const CASES: readonly Case[] = [
  { what: 'a missing file', spoil: (folder) => rmSync(join(folder, 'readings.csv')), status: 1, says: ['readings.csv', 'no such file'] },
  { what: 'a wrong column', spoil: (folder) => editSurvey(folder, (survey) => { survey.reduce.files[0].columns.field = 'tesla'; }), status: 1, says: ['readings.csv', 'tesla', 'utc, lon, lat, nt'] },
  { what: 'times without a zone', spoil: (folder) => edit(folder, 'readings.csv', (text) => mapColumn(text, 'utc', (cell) => cell.replace('Z', ''))), status: 1, says: ['readings.csv, row 1', 'zone'] },
  { what: 'an unknown CRS', spoil: (folder) => editSurvey(folder, (survey) => { survey.crs = 'EPSG:99999'; }), status: 2, says: ['survey.json, crs', '99999'] },
  { what: 'a geographic CRS as frame', spoil: (folder) => editSurvey(folder, (survey) => { survey.crs = 'EPSG:4269'; }), status: 2, says: ['survey.json, crs', 'geographic', 'projected'] },
  { what: 'an unknown datum', spoil: (folder) => edit(folder, 'permits.csv', (text) => text.replace(',NAD27,', ',NAD72,')), status: 1, says: ['permits.csv, row 1', 'NAD72', 'NAD27'] },
  { what: 'no datum and no weights', spoil: (folder) => editSurvey(folder, (survey) => { delete survey.locate.files[0].unknown_datum; }), status: 1, says: [/permits\.csv, row \d/, 'datum', 'unknown_datum'] },
  {
    what: 'a parcel that crosses itself', status: 1, says: ['parcel.geojson, feature 1', 'crosses itself'],
    spoil: (folder) => {
      writeFileSync(join(folder, 'parcel.geojson'), geojson([[-79.62, 40.864], [-79.618, 40.866], [-79.618, 40.864], [-79.62, 40.866], [-79.62, 40.864]]));
      editSurvey(folder, (survey) => { survey.parcel = 'parcel.geojson'; });
    },
  },
  { what: 'a Shapefile without .prj', spoil: (folder) => rmSync(join(folder, 'parcel.prj')), status: 1, says: ['parcel.shp', '.prj', 'parcel_crs'] },
  { what: 'latitude and longitude swapped', spoil: (folder) => edit(folder, 'readings.csv', (text) => swapColumns(text, 'lon', 'lat')), status: 1, says: ['readings.csv', 'row 1', /swap|latitude/] },
  { what: 'readings far outside the main field', spoil: (folder) => edit(folder, 'readings.csv', (text) => mapColumn(text, 'nt', (cell) => (cell === '' ? '' : String(Number(cell) / 10)))), status: 1, says: ['readings.csv', 'nT', /51\s?\d{3}|51,\d{3}/] },
  { what: 'a base log of another day', spoil: (folder) => edit(folder, 'base.csv', (text) => text.replaceAll('2026-04-14', '2026-04-15')), status: 1, says: ['base.csv', '2026-04-14', '2026-04-15'] },
  { what: 'an empty file of readings', spoil: (folder) => writeFileSync(join(folder, 'readings.csv'), ''), status: 1, says: ['readings.csv', 'no text'] },
  { what: 'a head without rows', spoil: (folder) => writeFileSync(join(folder, 'permits.csv'), 'permit_no,lat,lon,datum\n'), status: 1, says: ['permits.csv'] },
  { what: 'an empty survey file', spoil: (folder) => writeFileSync(join(folder, 'survey.json'), ''), status: 1, says: ['survey.json', 'empty'] },
  { what: 'a survey file that is no JSON', spoil: (folder) => writeFileSync(join(folder, 'survey.json'), '{ "crs": EPSG }'), status: 1, says: ['survey.json', 'JSON'] },
  { what: 'a misspelt key', spoil: (folder) => editSurvey(folder, (survey) => { survey.grid = { cel_m: 1 }; }), status: 2, says: ['survey.json, grid', '"cel_m"', 'did you mean "cell_m"?'] },
  { what: 'a length without a unit', spoil: (folder) => editSurvey(folder, (survey) => { survey.grid = { cell_m: '25' }; }), status: 2, says: ['survey.json, grid, cell_m', '"25"', 'ft'] },
  { what: 'a date that the main field does not know', spoil: (folder) => editSurvey(folder, (survey) => { survey.date = '1931-05-01'; }), status: 1, says: ['1931', 'World Magnetic Model'] },
  { what: 'a row with too many cells', spoil: (folder) => edit(folder, 'base.csv', (text) => text.replace('\n', '\nx,1,2\n')), status: 1, says: ['base.csv', 'row 1'] },
  { what: 'a number that is none', spoil: (folder) => edit(folder, 'base.csv', (text) => text.replace(/,(\d+\.\d+)\n/, ',5l654.8\n')), status: 1, says: ['base.csv, row 1', '5l654.8', 'number'] },
];

describe('bad input', () => {
  it.each(CASES)('$what is answered in one sentence, and nothing is written', async ({ spoil, status, says }) => {
    const folder = demoFolder({ lines: (line) => line <= 3 });
    spoil(folder);
    const answer = await ironplat(folder, 'run', 'survey.json', '--out', 'delivery');
    const lines = answer.err.trimEnd().split('\n').filter((line) => !line.startsWith('warning: '));
    expect(lines, answer.err).toHaveLength(1);
    expect(lines[0]).toMatch(/^ironplat: .+: found .+, wanted .+\.$/);
    for (const part of says) {
      if (typeof part === 'string') expect(lines[0]).toContain(part);
      else expect(lines[0]).toMatch(part);
    }
    expect(answer).toMatchObject({ status, out: '' });
    expect(existsSync(join(folder, 'delivery'))).toBe(false);
  });

  it.each([
    [['fly'], /unknown command/],
    [['run', 'survey.json'], /--out/],
    [['run', 'survey.json', '--out', 'x', '--speed', '3'], /--speed/],
    [['run', 'nowhere.json', '--out', 'x'], /nowhere\.json/],
    [['run', 'survey.json', '--out', 'x', '--formats', 'dwg'], /gpkg, shp/],
    [['describe', 'gird'], /did you mean "grid"/],
    [['--operations'], /module/],
    [[], /Usage/],
  ])('a command line %j that is misused ends with an answer', async (argv, says) => {
    const answer = await ironplat(demoFolder({ lines: () => false }), ...argv);
    expect(answer.status).toBe(argv[1] === 'nowhere.json' ? 1 : 2);
    expect(answer.err).toMatch(says);
  });
});
