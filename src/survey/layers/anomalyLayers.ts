import type { Anomalies, Anomaly } from '../../anomalies/types.js';
import type { Site } from '../../site/types.js';
import type { Field, FieldValue, Layer } from '../../vector/types.js';
import { known } from './known.js';

const FIELDS: readonly Field[] = [
  { name: 'anomaly_id', type: 'text', title: 'Identifier of the anomaly' },
  { name: 'class', type: 'text', title: 'casing, linear, compact or unresolved' },
  { name: 'p_casing', type: 'real', title: 'Chance that the source is the top of a casing', decimals: 3 },
  { name: 'peak_nt', type: 'real', title: 'Largest residual with its sign, nT', decimals: 1 },
  { name: 'snr', type: 'real', title: 'Deflection d of the fitted source', decimals: 1 },
  { name: 'depth_m', type: 'real', title: 'Depth of the source below ground, m', decimals: 2 },
  { name: 'depth_sd', type: 'real', title: 'Standard deviation of the depth, m', decimals: 2 },
  { name: 'pole_am', type: 'real', title: 'Pole strength, A m, positive where the top attracts', decimals: 1 },
  { name: 'pole_sd', type: 'real', title: 'Standard deviation of the pole strength, A m', decimals: 1 },
  { name: 'moment_am2', type: 'real', title: 'Dipole moment, A m2', decimals: 1 },
  { name: 'pos_sd_m', type: 'real', title: 'Standard deviation of the position per axis, m (rms of both)', decimals: 3 },
  { name: 'semi_maj_m', type: 'real', title: 'Half major axis of the 95 % ellipse, m', decimals: 3 },
  { name: 'semi_min_m', type: 'real', title: 'Half minor axis of the 95 % ellipse, m', decimals: 3 },
  { name: 'azim_deg', type: 'real', title: 'Azimuth of the major axis, degrees clockwise from grid north', decimals: 1 },
  { name: 'strike_deg', type: 'real', title: 'Direction of a linear source, degrees clockwise from grid north', decimals: 1 },
  { name: 'area_m2', type: 'real', title: 'Area of the outline, m2', decimals: 1 },
  { name: 'note', type: 'text', title: 'Why it has its class' },
];

/** Sources as points, and outlines as polygons. */
export function anomalyLayers({ list }: Anomalies, site: Site): Layer[] {
  return [
    {
      name: 'anomalies', title: 'Anomalies: sources', crs: site.frame, geometryType: 'Point', fields: FIELDS,
      features: list.map((anomaly) => ({ geometry: { type: 'Point', coordinates: [anomaly.x, anomaly.y] }, values: values(anomaly) })),
    },
    {
      name: 'anomalies_outlines', title: 'Anomalies: outlines', crs: site.frame, geometryType: 'MultiPolygon', fields: FIELDS,
      features: list.map((anomaly) => ({
        geometry: { type: 'MultiPolygon', coordinates: anomaly.outline.map((rings) => rings.map((ring) => ring.map(([x, y]) => [x, y]))) },
        values: values(anomaly),
      })),
    },
  ];
}

function values(anomaly: Anomaly): Record<string, FieldValue> {
  return {
    anomaly_id: anomaly.anomalyId, class: anomaly.class, p_casing: anomaly.pCasing, peak_nt: anomaly.peakNT, snr: anomaly.snr,
    depth_m: known(anomaly.depthM), depth_sd: known(anomaly.depthSdM), pole_am: known(anomaly.poleAM), pole_sd: known(anomaly.poleSdAM),
    moment_am2: known(anomaly.momentAM2), pos_sd_m: anomaly.posSdM, semi_maj_m: anomaly.semiMajM, semi_min_m: anomaly.semiMinM,
    azim_deg: anomaly.azimDeg, strike_deg: known(anomaly.strikeDeg), area_m2: anomaly.areaM2, note: anomaly.note,
  };
}
