import { baseName, extension, type FileSource } from '../files.js';
import { crs } from '../geodesy/crs.js';
import { DIGIT_KINDS } from '../records/digits.js';
import { LOCATE_DEFAULTS, locateRecords, type LocateOptions } from '../records/locateRecords.js';
import { RECORD_FILE_DEFAULTS, type RecordFileSettings, type RecordSource } from '../records/recordSource.js';
import { SOURCE_CLASSES } from '../records/sourceError.js';
import { parseCsv } from '../table/parseCsv.js';
import { readVector, VECTOR_EXTENSIONS } from '../vector/readVector.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, pathSchema, quantitySchema } from './schema.js';
import type { Operation, Schema } from './types.js';

type FileParameters = Omit<RecordFileSettings, 'crs'> & { readonly path: string; readonly crs?: string };
type LocateParameters = LocateOptions & { readonly files: readonly FileParameters[] };

const column = (description: string): Schema => ({ type: 'string', minLength: 1, description });
const share = (rest: Schema): Schema => ({ type: 'number', minimum: 0, maximum: 1, ...rest });
const length = (description: string): Schema => quantitySchema('m', { minimum: 0, description });

const FILE_SCHEMA = objectSchema({
  path: pathSchema({ title: 'File', description: 'CSV, GeoJSON, Shapefile or FlatGeobuf with one record a row.' }),
  columns: objectSchema({
    record_id: column('Permit or well number; without it rows are named by their number.'),
    latitude: column('Decimal degrees, or degrees, minutes and seconds.'),
    longitude: column('Decimal degrees, or degrees, minutes and seconds; west is negative or has a W.'),
    easting: column('In the unit of "crs".'),
    northing: column('In the unit of "crs".'),
    datum: column('NAD27, NAD83, NAD83(2011) or WGS 84 for each row; a blank cell falls back to "datum".'),
    error_m: column('One standard deviation per axis for each row, in metres or with a unit.'),
    error_90_m: column('Radius that holds 90 %, for each row.'),
    error_95_m: column('Radius that holds 95 %, for each row.'),
    group: column('Map sheet, lease or surveyor: records of a group share an unknown shift.'),
    note: column('Anything that is to stay with the record.'),
  }, { title: 'Columns', description: 'Which column of the file holds what.' }),
  crs: { type: 'string', description: 'CRS of easting and northing, or of latitude and longitude; for a vector file that names none.', examples: ['EPSG:32017'] },
  datum: { type: 'string', description: 'Datum of all rows that do not state their own.', examples: ['NAD27'] },
  west_positive: { type: 'boolean', default: RECORD_FILE_DEFAULTS.westPositive, description: 'Longitudes without sign or letter count west.' },
  digits: { type: 'string', enum: DIGIT_KINDS, default: RECORD_FILE_DEFAULTS.digits, description: 'Whether the last digit of a coordinate was rounded, or what followed it cut off.' },
  source: { type: 'string', enum: SOURCE_CLASSES, default: RECORD_FILE_DEFAULTS.source, description: 'What the positions rest on; sets their error where none is stated.' },
  map_scale: { type: 'number', exclusiveMinimum: 0, description: 'For "map": 24000 stands for 1:24,000.', examples: [24000] },
  error_m: length('One standard deviation per axis of every position; in place of what "source" implies.'),
  error_90_m: length('Radius that holds 90 % of the positions; in place of what "source" implies.'),
  error_95_m: length('Radius that holds 95 % of the positions; in place of what "source" implies.'),
  shared_sd_m: quantitySchema('m', { minimum: 0, default: RECORD_FILE_DEFAULTS.sharedSdM, description: 'Standard error per axis that all records of a group have in common.' }),
  unknown_datum: objectSchema({
    NAD27: share({}), NAD83: share({}), 'NAD83(2011)': share({}), 'WGS 84': share({}),
  }, { description: 'Weights of the datums that a row without one may be in.', examples: [{ NAD27: 0.7, NAD83: 0.3 }] }),
  blunder_share: share({ default: RECORD_FILE_DEFAULTS.blunderShare, description: 'Share of positions that are blunders, spread over a disc of blunder_radius_m.' }),
  p_casing: share({ default: RECORD_FILE_DEFAULTS.pCasing, description: 'Chance, before any search, that a steel casing was set and left.' }),
}, { required: ['path'] });

/** Historic records to positions with error. */
export const locate: Operation = {
  id: 'locate',
  version: '1.0.0',
  title: 'Historic records to positions with error',
  summary: 'Reads permits and map points, moves them from their own datum to the survey\'s frame and sums the error of every position; says which rows cannot be placed and why.',
  parameters: objectSchema({
    files: { type: 'array', items: FILE_SCHEMA, minItems: 1, title: 'Files', description: 'Files of records.' },
    max_distance_m: quantitySchema('m', { exclusiveMinimum: 0, default: LOCATE_DEFAULTS.maxDistanceM, description: 'A record farther than this from the parcel is reported as a mistake in its row.' }),
    blunder_radius_m: quantitySchema('m', { exclusiveMinimum: 0, default: LOCATE_DEFAULTS.blunderRadiusM, description: 'Radius over which the blunder share of a position is spread.' }),
  }, { required: ['files'] }),
  inputs: {},
  outputs: { records: { title: 'Positions with their 95 % ellipses', form: 'records' } },
  sources: [
    'United States National Map Accuracy Standards (Bureau of the Budget, 1947)',
    'NGA TR8350.2, mean datum shifts with their errors',
    'NADCON (NOAA), NAD27 to NAD83 in the lower 48',
  ],
  example: 'ironplat locate survey.json --out out/records.geojson',
  async run({ site, parameters, files, warn }) {
    const { files: list, ...options } = camelKeys<LocateParameters>(parameters);
    const sources: RecordSource[] = [];
    for (const { path, crs: code, ...rest } of list) {
      const settings: RecordFileSettings = code === undefined ? rest : { ...rest, crs: crs(code, `${baseName(path)}, crs`) };
      sources.push(await readSource(path, settings, { files, warn }));
    }
    const records = locateRecords(sources, site, options);
    for (const { source, row, problem, advice } of records.unplaced) warn(`${source}, row ${row}: not placed, ${problem}; ${advice}.`);
    return { records };
  },
};

async function readSource(path: string, settings: RecordFileSettings, { files, warn }: { files: FileSource; warn(message: string): void }): Promise<RecordSource> {
  const name = baseName(path);
  if (!VECTOR_EXTENSIONS.includes(extension(path))) {
    const table = parseCsv(await files.read(path), name);
    table.notes?.forEach(warn);
    return { name, settings, kind: 'table', table };
  }
  const { features, crs: own, notes } = await readVector(path, files, { crs: settings.crs ?? null });
  notes.forEach(warn);
  return { name, settings, kind: 'vector', crs: own, features };
}
