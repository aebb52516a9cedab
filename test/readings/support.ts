import type { Area } from '../../src/density/types.js';
import { mainFieldInFrame } from '../../src/field/mainField.js';
import { convergenceDeg } from '../../src/geodesy/convergence.js';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import type { Site } from '../../src/site/types.js';
import { writeCsv, type CsvColumn } from '../../src/table/writeCsv.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import type { TextTable } from '../../src/table/types.js';

/** South-western corner of the test parcel in EPSG:2272, metres. */
export const CORNER = [442_300, 171_650] as const;
export const DECIMAL_YEAR = 2026 + 103 / 365;
/** 2026-04-14T13:05:00Z. */
export const START_S = Date.UTC(2026, 3, 14, 13, 5) / 1000;
const RECEIVER = { frame: 'ITRF2014', epoch: 2026.28 } as const;

/** A square parcel of 200 m in Pennsylvania South. */
export function testSite(): Site {
  const frame = crs('EPSG:2272');
  const [x, y] = CORNER;
  const parcel: Area = [[[[x, y], [x + 200, y], [x + 200, y + 200], [x, y + 200], [x, y]]]];
  const toWgs84 = datumShift(frame.datum, 'WGS 84', { receiver: RECEIVER });
  const { lonDeg, latDeg } = toWgs84.place(...frame.inverse(x + 100, y + 100));
  return {
    title: 'test', frame, parcel, exclusions: [], open: parcel, decimalYear: DECIMAL_YEAR, toWgs84,
    shiftFrom: (datum) => datumShift(datum, frame.datum, { receiver: RECEIVER }),
    mainField: mainFieldInFrame({ lonDeg, latDeg, heightM: 0, decimalYear: DECIMAL_YEAR, convergenceDeg: convergenceDeg(frame, x + 100, y + 100) }),
    target: { poleAM: [60, 400], depthM: [0, 2.5], basis: 'test' },
  };
}

export function table(columns: readonly CsvColumn[], source = 'readings.csv'): TextTable {
  return parseCsv(writeCsv(columns), source);
}

/** Longitudes and latitudes (WGS 84) of frame places. */
export function degrees(site: Site, x: ArrayLike<number>, y: ArrayLike<number>): { lon: Float64Array; lat: Float64Array } {
  const lon = new Float64Array(x.length);
  const lat = new Float64Array(x.length);
  for (let i = 0; i < x.length; i++) {
    const place = site.toWgs84.place(...site.frame.inverse(x[i]!, y[i]!));
    lon[i] = place.lonDeg;
    lat[i] = place.latDeg;
  }
  return { lon, lat };
}

export interface Walked {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly timeS: Float64Array;
  readonly line: Int32Array;
  /** −1 south, 1 north. */
  readonly way: Int8Array;
}

/** North–south lines over the test parcel, to and fro, a reading every `stepM` at 1.2 m/s, five seconds a turn. */
export function walked({ lines = 20, spacingM = 10, stepM = 0.6, lengthM = 200 } = {}): Walked {
  const perLine = Math.round(lengthM / stepM) + 1;
  const count = lines * perLine;
  const out = { x: new Float64Array(count), y: new Float64Array(count), timeS: new Float64Array(count), line: new Int32Array(count), way: new Int8Array(count) };
  let time = START_S;
  for (let k = 0, i = 0; k < lines; k++) {
    for (let n = 0; n < perLine; n++, i++) {
      out.x[i] = CORNER[0] + spacingM / 2 + k * spacingM;
      out.y[i] = CORNER[1] + (k % 2 === 0 ? n : perLine - 1 - n) * stepM;
      out.timeS[i] = Math.round(time * 10) / 10;
      out.line[i] = k;
      out.way[i] = k % 2 === 0 ? 1 : -1;
      time += stepM / 1.2;
    }
    time += 10;
  }
  return out;
}
