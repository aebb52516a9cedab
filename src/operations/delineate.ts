import { DELINEATE_DEFAULTS, delineate as findSources, type DelineateOptions } from '../anomalies/delineate.js';
import { DETECTION_GRID_DEFAULTS, detectionGrid, type DetectionGrids } from '../detection/detectionGrid.js';
import type { NoiseModel } from '../detection/types.js';
import { median } from '../numerics/robust.js';
import type { Grid } from '../raster/types.js';
import type { Readings } from '../readings/types.js';
import type { Site } from '../site/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, quantitySchema } from './schema.js';
import type { Operation } from './types.js';

interface DelineateParameters extends DelineateOptions {
  readonly falseAlarmsPerHa: number;
  /** What a source has to reach before it is looked at. */
  readonly leastDeflection: number;
  readonly detectionCellM?: number;
}

/** Unsaid, a cell of the detection grid is this share of the median sensor height, and no smaller than the default. */
const CELL_HEIGHTS = 0.5;

/** Readings and residual grid to sources, and to the chance that the stated casing would have been found, cell by cell. */
export const delineate: Operation = {
  id: 'delineate',
  version: '1.0.0',
  title: 'Residual to sources, and what would have been found',
  summary: 'Finds what stands out of the residual, fits poles, dipoles and lines to the readings themselves, says which are casings and where they are with their error; and maps the chance that the stated casing would have been detected from the lines as they were walked.',
  parameters: objectSchema({
    detect_snr: { type: 'number', exclusiveMinimum: 0, default: DELINEATE_DEFAULTS.detectSnr, description: 'A deflection this many times the local noise is looked at.' },
    outline_snr: { type: 'number', exclusiveMinimum: 0, default: DELINEATE_DEFAULTS.outlineSnr, description: 'Outlines are contours at this multiple of the local noise, at most half the peak.' },
    local_radius_m: quantitySchema('m', { exclusiveMinimum: 0, description: 'Radius in which the local noise is measured; unsaid, ten times the distance from sensor to source.' }),
    max_sources: { type: 'integer', minimum: 1, default: DELINEATE_DEFAULTS.maxSources, description: 'The search stops here and says so.' },
    jitter_m: quantitySchema('m', { minimum: 0, default: DELINEATE_DEFAULTS.jitterM, description: 'Error of a single position, per axis, that is gone at the next one.' }),
    height_sd_m: quantitySchema('m', { minimum: 0, default: DELINEATE_DEFAULTS.heightSdM, description: 'How far the true height of the sensor wanders about the stated one (one standard deviation).' }),
    height_corr_s: quantitySchema('s', { minimum: 0, default: DELINEATE_DEFAULTS.heightCorrS, description: 'Time over which the height wanders.' }),
    false_alarms_per_ha: { type: 'number', exclusiveMinimum: 0, default: DETECTION_GRID_DEFAULTS.falseAlarmsPerHa, description: 'False alarms by noise alone that are put up with on a hectare.' },
    detection_cell_m: quantitySchema('m', { exclusiveMinimum: 0, description: `Cell of the detection grid; unsaid, ${DETECTION_GRID_DEFAULTS.cellM} m, or half the sensor's height where that is more.` }),
  }),
  inputs: {
    readings: { title: 'Reduced readings', form: 'readings' },
    residual: { title: 'Residual grid', form: 'grid', unit: 'nT' },
  },
  outputs: {
    anomalies: { title: 'Sources with class, place, error and outline', form: 'anomalies' },
    detection: { title: 'Chance that the stated casing would have been detected', form: 'grid', unit: '1' },
    covered: { title: 'Ground searched (1) or not (0)', form: 'grid', unit: '1' },
  },
  sources: [
    'Blakely (1995), Potential Theory in Gravity and Magnetic Applications: poles, dipoles, total-field anomaly',
    'Marquardt (1963), least squares; Britt & Luecke (1973), errors in variables',
    'Kalman (1960), Harvey (1989), de Jong (1989): correlated noise along a walk',
    'Schwarz (1978), information criterion; Kass & Raftery (1995)',
    'Kay (1998), Fundamentals of Statistical Signal Processing II: detection chance',
  ],
  example: 'ironplat delineate --survey survey.json --out delivery',
  async run({ site, parameters, inputs, warn }) {
    const { falseAlarmsPerHa, detectionCellM, ...options } = camelKeys<DelineateParameters>(parameters);
    const readings = inputs.readings as Readings;
    const anomalies = findSources(readings, inputs.residual as Grid, site, options);
    if (anomalies.list.length >= options.maxSources) warn(`The search for sources stopped at ${options.maxSources}; raise max_sources to go on.`);
    const { chance, covered } = detection(readings, site, { noise: anomalies.noise, falseAlarmsPerHa, detectionCellM, leastDeflection: options.detectSnr });
    return { anomalies, detection: chance, covered };
  },
};

interface DetectionSettings {
  readonly noise: NoiseModel;
  readonly falseAlarmsPerHa: number;
  /** What a source has to reach before it is looked at. */
  readonly leastDeflection: number;
  readonly detectionCellM: number | undefined;
}

function detection(readings: Readings, site: Site, { noise, falseAlarmsPerHa, detectionCellM, leastDeflection }: DetectionSettings): DetectionGrids {
  const { x, y, heightM, timeS, line, residual } = readings;
  const usable = Uint8Array.from(residual, (value) => (Number.isFinite(value) ? 1 : 0));
  const heard = { x, y, heightM, timeS, line, usable };
  const cellM = detectionCellM ?? Math.max(DETECTION_GRID_DEFAULTS.cellM, CELL_HEIGHTS * median(heightM));
  return detectionGrid(heard, site.open, { target: site.target, noise, mainField: site.mainField, falseAlarmsPerHa, cellM, leastDeflection });
}
