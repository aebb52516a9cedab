import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import type { Area } from '../../src/density/types.js';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { madSd, median } from '../../src/numerics/robust.js';
import { reduceReadings } from '../../src/readings/reduceReadings.js';
import type { Site } from '../../src/site/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { testSite } from './support.js';

/** Real flight lines (Geoscience Australia, CC-BY 4.0), where the check values are at hand. */
const PATH = join(import.meta.dirname, '../../../shared/checks/airborne_lines.csv.gz');

describe.skipIf(!existsSync(PATH))('real flight lines', () => {
  it('go through as anomalies without times', () => {
    const table = parseCsv(new Uint8Array(gunzipSync(readFileSync(PATH))), 'airborne_lines.csv');
    const frame = crs('EPSG:32754');
    const parcel: Area = [[[[250_000, 7_550_000], [300_000, 7_550_000], [300_000, 7_600_000], [250_000, 7_600_000], [250_000, 7_550_000]]]];
    const lon = table.columns.get('longitude')!.map(Number);
    const lat = table.columns.get('latitude')!.map(Number);
    const [x0, y0] = frame.forward(median(lon), median(lat));
    const site: Site = {
      ...testSite(), frame, parcel: parcel.map((rings) => rings.map((ring) => ring.map(([x, y]) => [x - 275_000 + x0, y - 7_575_000 + y0]))),
      shiftFrom: (datum) => datumShift(datum, frame.datum), toWgs84: datumShift(frame.datum, 'WGS 84'),
    };
    const readings = reduceReadings({
      files: [{ table, sensorHeightM: 80, columns: { field: 'total_field_anomaly_nt', longitude: 'longitude', latitude: 'latitude', line: 'flight_line' } }],
    }, site, { kind: 'anomaly' });
    expect(readings.count).toBe(255_146);
    expect(readings.lineNames).toHaveLength(60);
    expect(readings.steps.map((step) => step.column)).toEqual(['clean_nt', 'reg_nt']);
    expect(readings.timeS.every(Number.isNaN)).toBe(true);
    // A corrected survey: hardly anything is left to flag, and the residual lies about zero with less spread than before.
    expect(readings.flag.reduce((sum, code) => sum + (code > 0 ? 1 : 0), 0)).toBeLessThan(300);
    expect(Math.abs(median(readings.residual))).toBeLessThan(2);
    expect(madSd(readings.residual)).toBeLessThan(madSd(readings.raw));
    const index = 1000;
    const [x, y] = frame.forward(lon[index]!, lat[index]!);
    expect(Math.hypot(readings.x[index]! - x, readings.y[index]! - y)).toBeLessThan(1e-6);
  });
});
