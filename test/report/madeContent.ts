import type { Anomaly } from '../../src/anomalies/types.js';
import type { Area } from '../../src/density/types.js';
import type { Finding } from '../../src/findings/types.js';
import { convergenceDeg } from '../../src/geodesy/convergence.js';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { Random } from '../../src/numerics/random.js';
import type { Grid } from '../../src/raster/types.js';
import type { Readings } from '../../src/readings/types.js';
import type { WellRecord } from '../../src/records/types.js';
import type { ReportContent } from '../../src/report/types.js';
import type { Site } from '../../src/site/types.js';

/** An invented tract in State Plane feet, with one of everything that a report can tell of. Not physics: only things to show. */
const WEST = 431_000;
const SOUTH = 101_200;
const FRAME = crs('EPSG:2272');

const ring = (corners: ReadonlyArray<readonly [number, number]>): Array<[number, number]> => [...corners, corners[0]!].map(([x, y]) => [WEST + x, SOUTH + y]);
const parcel: Area = [[ring([[10, 20], [390, 0], [420, 150], [395, 330], [210, 345], [195, 270], [20, 290]])]];
const exclusions: Area = [[ring([[60, 180], [105, 185], [100, 235], [58, 230]])], [ring([[300, 60], [340, 55], [345, 90], [305, 95]])]];

const CONVERGENCE = convergenceDeg(FRAME, WEST + 200, SOUTH + 150);
const MAIN_FIELD = { totalNT: 52_310, inclinationDeg: 66.4, declinationDeg: -9.3, convergenceDeg: CONVERGENCE, unit: [-0.05, 0.4, -0.92] as const };

export const site: Site = {
  title: 'Tansy Hollow tract, Marlow County', frame: FRAME, parcel, exclusions, open: parcel, decimalYear: 2026 + 103 / 365, mainField: MAIN_FIELD,
  target: { poleAM: [60, 400], depthM: [0, 2.5], basis: 'as stated in the survey file' },
  shiftFrom: (datum) => datumShift(datum, FRAME.datum), toWgs84: datumShift(FRAME.datum, 'WGS 84'),
};

const SOURCES = [
  { x: 96, y: 95, peak: 2400, width: 3.2 }, { x: 231, y: 139, peak: 900, width: 4 }, { x: 330, y: 250, peak: -650, width: 3.4 },
  { x: 258, y: 262, peak: 310, width: 4.5 }, { x: 272, y: 247, peak: 260, width: 4.5 }, { x: 160, y: 55, peak: 1500, width: 3 },
  { x: 352, y: 170, peak: 90, width: 2.4 },
];

export const residual: Grid = residualGrid();

function residualGrid(): Grid {
  const [width, height, cellM] = [430, 360, 1];
  const values = new Float32Array(width * height).fill(NaN);
  const random = new Random(11);
  for (let row = 0; row < height; row += 1) {
    for (let column = 0; column < width; column += 1) {
      const [x, y] = [column + 0.5, height - row - 0.5];
      if (x < 6 || x > 415 || y < 2 || y > 340 - (x < 200 ? 55 : 0) || (x > 298 && x < 347 && y > 53 && y < 97)) continue;
      let value = 4 * Math.sin(x / 60) + 3 * Math.cos(y / 45) + random.normal() * 1.1;
      for (const source of SOURCES) value += source.peak / (1 + ((x - source.x) ** 2 + (y - source.y) ** 2) / source.width ** 2) ** 1.5;
      const off = (x - 20) * 0.35 - (y - 210) * 0.93;
      value += (260 * Math.sin(x / 14)) / (1 + (off / 4) ** 2) ** 1.2;
      values[row * width + column] = value;
    }
  }
  return { width, height, west: WEST, north: SOUTH + height, cellM, values };
}

export const detection: Grid = detectionGrid();

function detectionGrid(): Grid {
  const [width, height, cellM] = [215, 180, 2];
  const values = new Float32Array(width * height).fill(NaN);
  for (let row = 0; row < height; row += 1) {
    for (let column = 0; column < width; column += 1) {
      const [x, y] = [column * 2 + 1, (height - row) * 2 - 1];
      if (Number.isNaN(residual.values[Math.floor(360 - y) * 430 + Math.floor(x)]!)) continue;
      values[row * width + column] = y > 300 ? 0 : Math.max(0, 0.97 - 0.25 * Math.abs(((x / 8) % 1) - 0.5) - 0.4 * Math.exp(-(((x - 150) / 30) ** 2)));
    }
  }
  return { width, height, west: WEST, north: SOUTH + height * cellM, cellM, values };
}

export const readings: Readings = madeReadings();

function madeReadings(): Readings {
  const [x, y, line]: [number[], number[], number[]] = [[], [], []];
  const random = new Random(5);
  let wander = 0;
  const lines = 50;
  for (let index = 0; index < lines; index += 1) {
    for (let step = 0; step <= 140; step += 1) {
      wander = 0.98 * wander + 0.1 * random.normal();
      const north = 8 + 2 * (index % 2 === 0 ? step : 140 - step);
      x.push(WEST + 12 + index * 8 + wander);
      y.push(SOUTH + north);
      line.push(index);
    }
  }
  const count = x.length;
  const flag = new Uint8Array(count);
  flag[17] = 2;
  flag.fill(3, 4000, 4100);
  const raw = Float64Array.from({ length: count }, () => 52_300);
  return {
    count, x: Float64Array.from(x), y: Float64Array.from(y), heightM: new Float64Array(count).fill(1.8), timeS: Float64Array.from({ length: count }, (_, i) => 1_776_170_000 + i * 0.8),
    line: Int32Array.from(line), lineNames: Array.from({ length: lines }, (_, i) => `L${i + 1}`), raw, flag, residual: raw,
    steps: [
      { column: 'spike_nt', title: 'Dropouts and spikes', values: raw, summary: '1 spike of 312 nT was flagged, by a Hampel filter of 9 readings' },
      { column: 'base_nt', title: 'Base-station variation', values: raw, summary: 'took off a variation of 23.4 nT from peak to peak; a gap of 81 s in the log leaves out 100 readings' },
      { column: 'main_nt', title: 'Main field', values: raw, summary: 'took off 52,310.2 nT at the middle of the parcel (World Magnetic Model 2025)' },
    ],
    positionSdM: 0.3, positionCorrelationS: 60, warnings: ['base.csv: no reading from 15:41:09 to 15:42:30'],
  };
}

function record(recordId: string, x: number, y: number, more: Partial<WellRecord> = {}): WellRecord {
  return {
    recordId, source: 'permits.csv', row: Number(recordId.slice(-1)), x: WEST + x, y: SOUTH + y, semiMajM: 15, semiMinM: 14, azimDeg: 42, posSdM: 6,
    density: { parts: [{ kind: 'gaussian', weight: 0.95, x: WEST + x, y: SOUTH + y, cov: [36, 0, 36], role: 'place' }, { kind: 'disc', weight: 0.05, x: WEST + x, y: SOUTH + y, radiusM: 1609.344, role: 'blunder' }] },
    datum: 'NAD27', shift: 'NADCON conus', basis: 'map at 1:24,000, National Map Accuracy Standards', note: '', group: { id: 'permits.csv NAD27', sharedSdM: 0.15 }, pCasing: 0.9, ...more,
  };
}

function anomaly(anomalyId: string, kind: Anomaly['class'], source: number, more: Partial<Anomaly> = {}): Anomaly {
  const { x, y, peak, width } = SOURCES[source]!;
  const circle = ring(Array.from({ length: 24 }, (_, i): [number, number] => [x + 3 * width * Math.cos((i * Math.PI) / 12), y + 3 * width * Math.sin((i * Math.PI) / 12)]));
  return {
    anomalyId, class: kind, pCasing: kind === 'casing' ? 0.97 : 0.08, x: WEST + x, y: SOUTH + y, cov: [0.09, 0, 0.04], semiMajM: 0.73, semiMinM: 0.49, azimDeg: 90, posSdM: 0.25,
    peakNT: peak, snr: Math.abs(peak) / 5, depthM: 0.8, depthSdM: 0.2, poleAM: kind === 'casing' ? peak / 10 : NaN, poleSdAM: kind === 'casing' ? 9 : NaN,
    momentAM2: kind === 'compact' ? 14.2 : NaN, strikeDeg: NaN, outline: [[circle]], areaM2: Math.PI * 9 * width ** 2, note: 'a pole fits better than a dipole by 31 in BIC', ...more,
  };
}

function finding(word: Finding['finding'], recordId: string, anomalyId: string, more: Partial<Finding>): Finding {
  return { recordId, anomalyId, finding: word, pMatch: NaN, distM: NaN, azimDeg: NaN, pCovered: 0.97, pDetect: 0.93, pRemains: 0.12, digOrder: 0, x: NaN, y: NaN, note: '', ...more };
}

export const content: ReportContent = {
  site, residual, detection, readings,
  records: {
    placed: [
      record('37-0411', 104, 90), record('37-0412', 223, 148, { azimDeg: 100, semiMajM: 22 }), record('37-0413', 333, 259), record('37-0414', 264, 240),
      record('37-0415', 365, 110), record('37-0416', 250, 325), record('37-0417', 62, 262, { datum: 'unknown', shift: 'mixture of NAD27 (0.7) and NAD83 (0.3)', semiMajM: 40, semiMinM: 16, azimDeg: 95, note: 'datum not stated' }),
    ],
    unplaced: [{ recordId: '37-0418', source: 'permits.csv', row: 8, column: 'lon', value: '79 52 11.0 E', problem: 'the place lies 11,300 km from the parcel; with a minus sign it would lie inside', advice: 'correct the sign of the longitude' }],
  },
  anomalies: {
    list: [
      anomaly('A1', 'casing', 0), anomaly('A2', 'casing', 1), anomaly('A3', 'casing', 2), anomaly('A4', 'casing', 3), anomaly('A5', 'casing', 4), anomaly('A6', 'casing', 5),
      anomaly('A7', 'compact', 6, { note: 'a dipole fits better than a pole' }),
      anomaly('A8', 'linear', 1, { x: WEST + 300, y: SOUTH + 315, strikeDeg: 69.4, outline: [], areaM2: 820, note: 'it runs on over 280 m', depthM: NaN, depthSdM: NaN }),
      anomaly('A9', 'unresolved', 6, { x: WEST + 130, y: SOUTH + 245, outline: [], note: 'neither a pole nor a dipole fits' }),
    ],
    noise: { whiteSdNT: 1.1, correlatedSdNT: 3.4, correlationM: 14, positionSdM: 0.3, positionCorrelationS: 60 }, notes: [],
  },
  findings: {
    list: [
      finding('located', '37-0411', 'A1', { pMatch: 0.987, distM: 9.4, azimDeg: 302, x: WEST + 96, y: SOUTH + 95, digOrder: 1, pRemains: 0.999 }),
      finding('located', '37-0412', 'A2', { pMatch: 0.964, distM: 12.0, azimDeg: 138, x: WEST + 231, y: SOUTH + 139, digOrder: 2, pRemains: 0.99 }),
      finding('located', '37-0413', 'A3', { pMatch: 0.957, distM: 9.5, azimDeg: 198, x: WEST + 330, y: SOUTH + 250, digOrder: 3, pRemains: 0.99, note: 'the top repels: its remanence points up' }),
      finding('ambiguous', '37-0414', 'A5', { pMatch: 0.62, distM: 10.6, azimDeg: 49, x: WEST + 264, y: SOUTH + 240, pRemains: 0.98 }),
      finding('not_found', '37-0415', '', { pCovered: 0.9523, pDetect: 0.8871, pRemains: 0.1234, x: WEST + 365, y: SOUTH + 110 }),
      finding('not_searched', '37-0416', '', { pCovered: 0.021, pDetect: 0.0004, pRemains: 0.8911, x: WEST + 250, y: SOUTH + 325 }),
      finding('not_found', '37-0417', '', { pCovered: 0.81, pDetect: 0.77, pRemains: 0.31, x: WEST + 62, y: SOUTH + 262 }),
      finding('not_searched', '37-0418', '', { pCovered: NaN, pDetect: NaN, pRemains: NaN, note: 'no place' }),
      finding('unrecorded', '', 'A6', { pMatch: 0.941, x: WEST + 160, y: SOUTH + 55, digOrder: 4, pCovered: NaN, pDetect: NaN, pRemains: NaN }),
    ],
    pairs: [{ recordId: '37-0414', anomalyId: 'A5', p: 0.62 }, { recordId: '37-0414', anomalyId: 'A4', p: 0.33 }, { recordId: '37-0414', anomalyId: 'A2', p: 0.01 }],
    notes: [],
  },
  plan: {
    searchArea: parcel, spacingM: 8, lineAzimDeg: 0, notes: ['the north-east corner is left to a later day'],
    lines: Array.from({ length: 50 }, (_, i) => ({ lineNo: i + 1, kind: i > 46 ? 'tie' as const : 'survey' as const, visit: i + 1, sortie: 1 + Math.floor(i / 25), x0: WEST, y0: SOUTH, x1: WEST, y1: SOUTH + 280, lengthM: 280, azimDeg: i % 2 ? 180 : 0 })),
    chances: [{ recordId: '37-0411', pCovered: 0.95, pDetect: 0.94 }, { recordId: '37-0416', pCovered: 0.93, pDetect: 0.91 }],
  },
  warnings: ['locate: permits.csv, row 8: not placed', 'reduce: a gap of 81 s in the base log'],
  files: [{ name: 'findings.geojson, findings.fgb', format: 'GeoJSON and FlatGeobuf', title: 'One row per record' }],
  sources: ['Kay (1998), Fundamentals of Statistical Signal Processing, Detection Theory', 'Blakely (1995), Potential Theory in Gravity and Magnetic Applications'],
  provenance: { version: '0.1.0', seed: 1, operations: [{ id: 'locate', version: '1.0.0' }, { id: 'plan', version: '1.0.0' }] },
};
