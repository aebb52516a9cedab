import { baseName, type FileSource } from '../files.js';
import { crs } from '../geodesy/crs.js';
import { REDUCE_DEFAULTS as D, type ReduceOptions } from '../readings/reduceOptions.js';
import { reduceReadings } from '../readings/reduceReadings.js';
import type { BaseFile, ReadingFile } from '../readings/readingSource.js';
import { parseCsv } from '../table/parseCsv.js';
import type { TextTable } from '../table/types.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, pathSchema, quantitySchema } from './schema.js';
import type { Operation, Schema } from './types.js';

type FileParameters = Omit<ReadingFile, 'table' | 'crs'> & { readonly path: string; readonly crs?: string };
type BaseParameters = Omit<BaseFile, 'table'> & { readonly path: string };
type ReduceParameters = ReduceOptions & { readonly files: readonly FileParameters[]; readonly base?: BaseParameters };

const column = (description: string): Schema => ({ type: 'string', minLength: 1, description });

const CLOCK = {
  zone: { type: 'string', description: 'Zone of times that name none: "UTC", an offset such as "-04:00", or a name.', examples: ['UTC', '-04:00', 'America/New_York'] },
  gps_week: { type: 'integer', minimum: 1024, description: 'Full GPS week, where times are seconds of that week.' },
  clock_offset_s: quantitySchema('s', { description: 'Added to every time: what the clock was behind by.' }),
} as const satisfies Record<string, Schema>;

const FILE_SCHEMA = objectSchema({
  path: pathSchema({ title: 'File', description: 'CSV with one reading a row.' }),
  columns: objectSchema({
    field: column('Total field in nT, or the anomaly; an empty cell or 0 is a dropout.'),
    time: column('ISO 8601, or seconds of the GPS week.'),
    gps_week: column('Full GPS week of each row.'),
    longitude: column('Decimal degrees, west negative.'),
    latitude: column('Decimal degrees.'),
    easting: column('In the unit of "crs".'),
    northing: column('In the unit of "crs".'),
    line: column('Name of the line; without it lines are found by their turns.'),
    height: column('Sensor above ground, metres.'),
  }, { required: ['field'], title: 'Columns', description: 'Which column of the file holds what.' }),
  crs: { type: 'string', description: 'CRS of easting and northing.', examples: ['EPSG:2272'] },
  datum: { type: 'string', enum: ['WGS 84', 'NAD83', 'NAD83(2011)', 'NAD27'], description: 'Datum of longitude and latitude; WGS 84 where unsaid.' },
  sensor_height_m: quantitySchema('m', { minimum: 0, description: 'Sensor above ground, where no column tells it.' }),
  ...CLOCK,
}, { required: ['path', 'columns'] });

const BASE_SCHEMA = objectSchema({
  path: pathSchema({ title: 'File', description: 'CSV with one base reading a row.' }),
  columns: objectSchema({ time: column('Time.'), field: column('Total field, nT.'), gps_week: column('Full GPS week of each row.') }, { required: ['time', 'field'] }),
  ...CLOCK,
}, { required: ['path', 'columns'], title: 'Base station', description: 'Log of a base station that ran beside the survey.' });

/** Raw readings and base log to the residual. */
export const reduce: Operation = {
  id: 'reduce',
  version: '1.0.0',
  title: 'Raw readings to the residual',
  summary: 'Sets clock and position right, flags dropouts and spikes, and takes base-station variation, heading effect, main field, drift and regional field off the readings; every step keeps its column and says what it removed.',
  parameters: objectSchema({
    files: { type: 'array', items: FILE_SCHEMA, minItems: 1, title: 'Files', description: 'Files of readings.' },
    base: BASE_SCHEMA,
    kind: { type: 'string', enum: ['total_field', 'anomaly'], default: D.kind, description: '"anomaly" where main field and variation are taken off already.' },
    position_sd_m: quantitySchema('m', { minimum: 0, default: D.positionSdM, description: 'Standard deviation of a recorded position on each axis.' }),
    position_corr_s: quantitySchema('s', { minimum: 0, default: D.positionCorrS, description: 'Time over which the error of positions wanders.' }),
    position_lag_s: quantitySchema('s', { default: D.positionLagS, description: 'Time by which a recorded position is older than the reading beside it.' }),
    sensor_forward_m: quantitySchema('m', { default: D.sensorForwardM, description: 'Sensor ahead of the receiver\'s antenna, along the course.' }),
    sensor_right_m: quantitySchema('m', { default: D.sensorRightM, description: 'Sensor to the right of the antenna.' }),
    speed_m_s: { type: 'number', exclusiveMinimum: 0, description: 'Speed from which times are made where a file has none, m/s; unsaid, they stay unknown.' },
    ground_height_m: quantitySchema('m', { default: D.groundHeightM, description: 'Ground above the ellipsoid, for the main field.' }),
    despike: { type: 'boolean', default: D.despike, description: 'Flag single false readings.' },
    max_gap_s: quantitySchema('s', { exclusiveMinimum: 0, default: D.maxGapS, description: 'Base readings farther apart than this have a gap between them.' }),
    base_gaps: { type: 'string', enum: ['interpolate', 'leave_out'], default: D.baseGaps, description: 'What becomes of readings in a gap of the base log.' },
    max_fill_s: quantitySchema('s', { minimum: 0, default: D.maxFillS, description: 'A longer gap than this is never interpolated.' }),
    heading: { type: 'boolean', default: D.heading, description: 'Take the heading effect off, where lines walked in different directions tell it.' },
    drift: { type: 'string', enum: ['auto', 'always', 'never'], default: D.drift, description: 'Follow slow drift in time; "auto" where there is no base log.' },
    drift_window_s: quantitySchema('s', { exclusiveMinimum: 0, description: 'Window of the drift; unsaid, five times as long as a line takes and at least five minutes.' }),
    regional_m: quantitySchema('m', { minimum: 0, description: 'Width over which the regional field is taken, 0 for none; unsaid, 30 sensor heights and at least 100 m.' }),
  }, { required: ['files'] }),
  inputs: {},
  outputs: { readings: { title: 'Reduced readings, each step\'s column kept', form: 'readings' } },
  sources: [
    'Hampel (1974), The influence curve and its role in robust estimation, JASA 69',
    'World Magnetic Model, NOAA/BGS technical reports',
    'Cleveland (1979), Robust locally weighted regression, JASA 74',
    'Beaton & Tukey (1974), The fitting of power series, Technometrics 16 (biweight)',
  ],
  example: 'ironplat reduce --survey survey.json --out delivery',
  async run({ site, parameters, files, warn }) {
    const { files: list, base, ...options } = camelKeys<ReduceParameters>(parameters);
    const sources: ReadingFile[] = [];
    for (const { path, crs: code, ...rest } of list) {
      const table = await readTable(path, files, warn);
      sources.push(code === undefined ? { ...rest, table } : { ...rest, table, crs: crs(code, `${baseName(path)}, crs`) });
    }
    const log = base && { ...base, table: await readTable(base.path, files, warn) };
    const readings = reduceReadings({ files: sources, ...(log ? { base: log } : {}) }, site, options);
    readings.warnings.forEach(warn);
    return { readings };
  },
};

async function readTable(path: string, files: FileSource, warn: (message: string) => void): Promise<TextTable> {
  const table = parseCsv(await files.read(path), baseName(path));
  table.notes?.forEach(warn);
  return table;
}
