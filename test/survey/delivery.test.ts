import { cpSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { DEMO_SEED, demoFiles } from '../../fixtures/demo/generate.js';
import { crs } from '../../src/geodesy/crs.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { openWithGdal } from '../support/gdal.js';
import { HAS_DEBIAN_GDAL, validateCogWithDebian } from '../support/debianTools.js';
import { contents, DEMO_FOLDER, ironplat, newFolder } from '../support/cli.js';
import { stacValidator } from '../support/schemas.js';

/** The demo as it is delivered, opened by programs other than our own. */
describe('the delivered demo', () => {
  let files: Map<string, Buffer>;
  let folder: string;
  let said: string;
  const json = (name: string): any => JSON.parse(files.get(name)!.toString('utf8'));

  beforeAll(async () => {
    folder = newFolder();
    cpSync(DEMO_FOLDER, folder, { recursive: true });
    const answer = await ironplat(folder, 'run', 'survey.json', '--out', 'delivery', '--formats', 'gpkg,shp');
    if (answer.status !== 0) throw new Error(answer.err);
    said = answer.out;
    files = contents(join(folder, 'delivery'));
  }, 120_000);

  it('says in plain words what was found, what was not, and where the files are', () => {
    for (const part of ['located:', 'not found:', 'unrecorded:', 'not placed: permits.csv, row', 'correct the row', 'delivery', 'report.html', 'one-call']) expect(said).toContain(part);
    expect(said).not.toMatch(/<|&[a-z#]|NaN|undefined/);
  });

  it('says what the README shows', () => {
    const readme = readFileSync(join(DEMO_FOLDER, '../../README.md'), 'utf8');
    const lines = said.trimEnd().split('\n');
    expect(lines.length).toBeGreaterThan(8);
    // The last line names the folder, which is another one here.
    for (const line of lines.slice(0, -1)) expect(readme).toContain(line);
  });

  it('is the same to the byte when the truth is gone and it runs again', async () => {
    rmSync(join(folder, 'truth'), { recursive: true });
    const answer = await ironplat(folder, 'run', 'survey.json', '--out', 'again', '--formats', 'gpkg,shp');
    expect(answer.status).toBe(0);
    const again = contents(join(folder, 'again'));
    expect([...again.keys()]).toEqual([...files.keys()]);
    for (const [name, bytes] of again) expect(bytes.equals(files.get(name)!), name).toBe(true);
  });

  it('has a manifest that is a valid STAC Item and lists every file with its hash', () => {
    const item = json('item.json');
    expect(stacValidator()(item)).toEqual([]);
    const listed = Object.values(item.assets as Record<string, { href: string }>).map(({ href }) => href.slice(2));
    expect([...listed, 'item.json', 'provenance.json'].toSorted()).toEqual([...files.keys()].toSorted());
    const roles = new Set(Object.values(item.assets as Record<string, { roles: string[] }>).flatMap(({ roles: own }) => own));
    for (const role of ['records', 'plan', 'readings', 'residual', 'detection', 'anomalies', 'findings', 'report']) expect(roles).toContain(role);
    expect(item.properties.start_datetime).toMatch(/^2026-04-14T13:05:00/);
    const provenance = json('provenance.json');
    expect(provenance.inputs.map(({ path }: { path: string }) => path)).toEqual(expect.arrayContaining(['survey.json', 'permits.csv', 'readings.csv', 'base.csv', 'parcel.shp', 'parcel.prj', 'exclusions.geojson']));
    expect(JSON.stringify(provenance)).not.toContain(folder);
    expect(JSON.stringify(item)).not.toContain(folder);
  });

  it.each(['residual', 'detection', 'covered'])('has %s.tif as a COG that GDAL places where the survey is', async (name) => {
    const bytes = files.get(`${name}.tif`)!;
    expect(checkCog(bytes)).toEqual([]);
    const { raster, messages } = await openWithGdal({ [`${name}.tif`]: bytes });
    expect(messages).toEqual([]);
    expect(raster!.stac!['proj:epsg']).toBe(2272);
    const asset = json('item.json').assets[name];
    expect(files.get(`${name}.sld`)!.toString('utf8')).toContain('<RasterSymbolizer>');
    expect(raster!.size).toEqual((asset['proj:shape'] as number[]).toReversed());
    raster!.geoTransform.forEach((value, i) => expect(value).toBeCloseTo([asset['proj:transform'][2], asset['proj:transform'][0], 0, asset['proj:transform'][5], 0, asset['proj:transform'][4]][i], 6));
  });

  it.skipIf(!HAS_DEBIAN_GDAL).each(['residual', 'detection', 'covered'])('has %s.tif that Debian\'s validator passes with the full check', (name) => {
    const run = validateCogWithDebian(files.get(`${name}.tif`)!);
    expect(run.stdout + run.stderr).not.toMatch(/error|warning/i);
    expect(run.status).toBe(0);
  });

  it.each(['records', 'records_ellipses', 'search_area', 'plan', 'anomalies', 'anomalies_outlines', 'findings'])('has the layer %s that GDAL opens alike in every format', async (name) => {
    const geojson = json(`${name}.geojson`);
    const count = geojson.features.length as number;
    expect(count).toBeGreaterThan(0);
    const role = { records_ellipses: 'records', search_area: 'plan', anomalies_outlines: 'anomalies' }[name] ?? name;
    const sets: Array<Record<string, Uint8Array>> = [
      { [`${name}.fgb`]: files.get(`${name}.fgb`)! },
      Object.fromEntries(['shp', 'shx', 'dbf', 'prj', 'cpg'].map((ending) => [`${name}.${ending}`, files.get(`${name}.${ending}`)!])),
      { [`${role}.gpkg`]: files.get(`${role}.gpkg`)! },
      { [`${name}.geojson`]: files.get(`${name}.geojson`)! },
    ];
    const frame = crs('EPSG:2272');
    const parcel = json('item.json').properties['proj:bbox'] as number[];
    for (const set of sets) {
      const first = Object.keys(set)[0]!;
      const { vector, messages } = await openWithGdal(set);
      expect(messages, first).toEqual([]);
      const layer = vector!.layers.find((one) => one.name === name)!;
      expect(layer.featureCount, first).toBe(count);
      const [field] = layer.geometryFields;
      const extent = field!.extent!;
      const wkt = field!.coordinateSystem!.wkt;
      if (first.endsWith('.geojson')) {
        expect(wkt).toContain('4326');
        for (const [lon, lat] of [[extent[0]!, extent[1]!], [extent[2]!, extent[3]!]]) {
          const [x, y] = frame.forward(lon!, lat!).map((metres) => metres / frame.metresPerUnit);
          // Anomalies and ellipses may reach beyond the parcel, by far less than this many feet.
          expect(x).toBeGreaterThan(parcel[0]! - 500);
          expect(y).toBeLessThan(parcel[3]! + 500);
        }
      } else {
        expect(wkt, first).toMatch(/Pennsylvania.South|Pennsylvania_South/);
        expect(extent[0]).toBeGreaterThan(parcel[0]! - 500);
        expect(extent[3]).toBeLessThan(parcel[3]! + 500);
      }
      const names = layer.fields.map((one) => one.name);
      for (const own of Object.keys(geojson.features[0].properties as object)) {
        expect(names, first).toContain(own);
        expect(own.length).toBeLessThanOrEqual(10);
        expect(own).toBe(own.toLowerCase());
      }
    }
  });

  it('has readings as CSV that GDAL opens, each step in a column of its own', async () => {
    const { vector } = await openWithGdal({ 'readings.csv': files.get('readings.csv')! });
    const rows = Buffer.from(await demoFiles(DEMO_SEED).then((made) => made['readings.csv'] as Uint8Array)).toString('utf8').trimEnd().split('\n').length - 1;
    expect(vector!.layers[0]!.featureCount).toBe(rows);
    expect(vector!.layers[0]!.fields.map(({ name }) => name)).toEqual(expect.arrayContaining(['line_no', 'time_utc', 'raw_nt', 'clean_nt', 'base_nt', 'head_nt', 'main_nt', 'reg_nt', 'resid_nt', 'flag']));
  });

  it('names the shift and its accuracy with every record', () => {
    for (const { properties } of json('records.geojson').features) {
      expect(properties.shift).toMatch(/NADCON conus/);
      expect(properties.basis).toMatch(/datum shift 0\.15 m/);
    }
  });
});
