import type { Anomalies, Anomaly } from '../../src/anomalies/types.js';
import type { Density } from '../../src/density/types.js';
import type { Grid } from '../../src/raster/types.js';
import type { WellRecord } from '../../src/records/types.js';

/** A record with a round Gaussian of `sdM` on each axis and a blunder share over a disc of a mile. */
export function record(recordId: string, x: number, y: number, { sdM = 6, blunder = 0, pCasing = 0.8, group = null as WellRecord['group'] } = {}): WellRecord {
  const density: Density = {
    parts: [
      { kind: 'gaussian', role: 'place', weight: 1 - blunder, x, y, cov: [sdM * sdM, 0, sdM * sdM] },
      { kind: 'disc', role: 'blunder', weight: blunder, x, y, radiusM: 1609 },
    ],
  };
  return {
    recordId, source: 'made.csv', row: 1, x, y, density, semiMajM: 2.4477 * sdM, semiMinM: 2.4477 * sdM, azimDeg: 0, posSdM: sdM,
    datum: 'NAD27', shift: 'none', basis: 'made', note: '', group, pCasing,
  };
}

export function anomaly(anomalyId: string, x: number, y: number, { sdM = 0.3, pCasing = 0.9, cls = undefined as Anomaly['class'] | undefined, snr = 50 } = {}): Anomaly {
  return {
    anomalyId, class: cls ?? (pCasing >= 0.5 ? 'casing' : 'compact'), pCasing, x, y, cov: [sdM * sdM, 0, sdM * sdM], semiMajM: 2.4477 * sdM, semiMinM: 2.4477 * sdM,
    azimDeg: 0, posSdM: sdM, peakNT: 500, snr, depthM: 1, depthSdM: 0.2, poleAM: 100, poleSdAM: 10, momentAM2: NaN, strikeDeg: NaN, outline: [], areaM2: 20, note: '',
  };
}

export function anomalies(...list: Anomaly[]): Anomalies {
  return { list, noise: { whiteSdNT: 1, correlatedSdNT: 2, correlationM: 10, positionSdM: 0.3, positionCorrelationS: 60 }, notes: [] };
}

/** A square of `sideM` about the origin, the same value all over, or by place. */
export function ground(value: number | ((x: number, y: number) => number), { sideM = 400, cellM = 2 } = {}): Grid {
  const n = Math.round(sideM / cellM);
  const [west, north] = [-sideM / 2, sideM / 2];
  const values = Float32Array.from({ length: n * n }, (_, i) =>
    typeof value === 'number' ? value : value(west + ((i % n) + 0.5) * cellM, north - (Math.floor(i / n) + 0.5) * cellM));
  return { width: n, height: n, west, north, cellM, values };
}
