import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import type { Anomalies } from '../../src/anomalies/types.js';
import { BUILT_IN_OPERATIONS } from '../../src/operations/index.js';
import { checkCog } from '../../src/raster/checkCog.js';
import type { Grid } from '../../src/raster/types.js';
import type { Readings } from '../../src/readings/types.js';
import { deliverRun } from '../../src/survey/deliverRun.js';
import { readSurvey } from '../../src/survey/readSurvey.js';
import { runSurvey } from '../../src/survey/runSurvey.js';
import { openWithGdal } from '../support/gdal.js';
import { memoryHost } from '../support/memoryHost.js';

/**
 * Real readings: 60 flight lines about 200 m apart, some 80 m above ground, Queensland 1990, main field already removed
 * and no base log. Source: Geoscience Australia, CC-BY 4.0.
 */
const FILE = join(import.meta.dirname, '../../../shared/checks/airborne_lines.csv.gz');

describe.skipIf(!existsSync(FILE))('real flight lines', () => {
  it('go through readings, grid, COG and anomalies with nothing but a survey file of their own', async () => {
    const csv = gunzipSync(readFileSync(FILE)).toString('utf8');
    const rows = csv.trimEnd().split('\n').slice(1).map((row) => row.split(',').map(Number));
    const least = (k: number): number => rows.reduce((low, row) => Math.min(low, row[k]!), Infinity);
    const most = (k: number): number => rows.reduce((high, row) => Math.max(high, row[k]!), -Infinity);
    const [west, south, east, north] = [least(1), least(2), most(1), most(2)];
    const ring = [[west, south], [east, south], [east, north], [west, north], [west, south]];
    const host = memoryHost({
      'lines.csv': csv,
      'block.geojson': JSON.stringify({ type: 'Feature', properties: {}, geometry: { type: 'Polygon', coordinates: [ring] } }),
    });
    const survey = readSurvey(JSON.stringify({
      title: 'Flight lines', crs: 'EPSG:32754', parcel: 'block.geojson',
      // The model's first year: nearest to the flight; the direction of the field moved by about a degree since.
      date: '2015-01-01', plan: false,
      reduce: {
        files: [{ path: 'lines.csv', sensor_height_m: 80, columns: { line: 'flight_line', longitude: 'longitude', latitude: 'latitude', field: 'total_field_anomaly_nt' } }],
        kind: 'anomaly', speed_m_s: 60, position_sd_m: 5,
      },
    }), 'survey.json', { operations: BUILT_IN_OPERATIONS, resolve: (path) => path });
    const result = await runSurvey(survey, { operations: BUILT_IN_OPERATIONS.filter(({ id }) => id !== 'report'), host });
    expect(result.skipped.map(({ id }) => id)).toEqual(expect.arrayContaining(['locate', 'plan', 'transform']));

    const readings = result.values.get('readings') as Readings;
    expect(readings.count).toBe(rows.length);
    expect(readings.lineNames).toHaveLength(60);
    expect(readings.residual.filter(Number.isFinite).length / rows.length).toBeGreaterThan(0.98);

    const residual = result.values.get('residual') as Grid;
    expect(residual.cellM).toBeGreaterThan(20);
    expect(residual.cellM).toBeLessThan(110);
    const inner = residual.values.filter(Number.isFinite);
    const range = Array.from(readings.residual).filter(Number.isFinite);
    expect(inner.length).toBeGreaterThan(1000);
    expect(Math.max(...inner.subarray(0, 50_000))).toBeLessThan(1.5 * range.reduce((a, b) => Math.max(a, b), 0));

    // Rock is what there is: nothing here has the strength and depth of a casing.
    const { list } = result.values.get('anomalies') as Anomalies;
    expect(list.length).toBeGreaterThan(10);
    expect(list.filter((anomaly) => anomaly.class === 'casing')).toEqual([]);

    const { files } = await deliverRun(result, { host, inputs: [], formats: [], relative: (path) => path, manifest: true });
    const bytes = files.get('residual.tif') as Uint8Array;
    expect(checkCog(bytes)).toEqual([]);
    const { raster } = await openWithGdal({ 'residual.tif': bytes });
    expect(raster!.stac!['proj:epsg']).toBe(32754);
    expect(raster!.size).toEqual([residual.width, residual.height]);
  }, 180_000);
});
