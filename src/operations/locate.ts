import { baseName, extension, type FileSource } from '../files.js';
import { crs } from '../geodesy/crs.js';
import { DIGIT_KINDS } from '../records/digits.js';
import { sectionLayer } from '../geodesy/sections/sectionLayer.js';
import { SECTION_ATTRIBUTES, type SectionAttributes } from '../geodesy/sections/sectionRows.js';
import { LOCATE_DEFAULTS, locateRecords, type LocateOptions } from '../records/locateRecords.js';
import { LOCATION_TEXT_DEFAULTS } from '../records/locationText/types.js';
import { RECORD_FILE_DEFAULTS, type RecordFileSettings, type RecordSource } from '../records/recordSource.js';
import { REPAIR_KINDS } from '../records/repairKinds.js';
import { sectionFeatures } from '../records/sectionFeatures.js';
import { SOURCE_CLASSES } from '../records/sourceError.js';
import type { Records } from '../records/types.js';
import type { Site } from '../site/types.js';
import { parseCsv } from '../table/parseCsv.js';
import { readVector, VECTOR_EXTENSIONS } from '../vector/readVector.js';
import { camelKeys } from './camelKeys.js';
import { objectSchema, pathSchema, quantitySchema } from './schema.js';
import type { Operation, Schema } from './types.js';

type FileParameters = Omit<RecordFileSettings, 'crs'> & { readonly path: string; readonly crs?: string };
interface SectionParameters {
  readonly path: string;
  readonly crs?: string;
  readonly columns?: Partial<SectionAttributes>;
}
type LocateParameters = Omit<LocateOptions, 'sections'> & { readonly files: readonly FileParameters[]; readonly sections?: SectionParameters };

/** Columns of a section layer: the name in the code, and what it holds. */
const SECTION_COLUMNS: Readonly<Record<string, readonly [keyof SectionAttributes, string]>> = {
  plss_id: ['plssId', 'Township, range and meridian in one word.'],
  township: ['township', 'Number of the township, with N or S or beside township_dir.'],
  township_dir: ['townshipDir', 'N or S.'],
  range: ['range', 'Number of the range, with E or W or beside range_dir.'],
  range_dir: ['rangeDir', 'E or W.'],
  meridian: ['meridian', 'Principal meridian by its name or code.'],
  section: ['section', 'Number of the section.'],
  section_type: ['sectionType', 'Kind of first division: SN for sections.'],
  lot: ['lot', 'Number of the lot.'],
  lot_type: ['lotType', 'Kind of second division: L for lots.'],
};

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
    location: column('A location in words: coordinates, a section with its footage calls, corner ties or part, distances from a map\'s corner, or several of these.'),
    section: column('Number of the section; with "township" and "range", and "calls", "aliquot" or "lot" where the file has them, it makes up one location.'),
    township: column('As in 5N or T5N; a bare number needs "township_dir".'),
    township_dir: column('N or S.'),
    range: column('As in 3W or R3W; a bare number needs "range_dir".'),
    range_dir: column('E or W.'),
    meridian: column('Principal meridian by its name or code.'),
    calls: column('Footage calls or corner ties, as in 660 FNL 1980 FEL.'),
    aliquot: column('Part of the section, as in NE/4 SW/4.'),
    lot: column('Number of the government lot.'),
    map_date: column('Date of the map, as in 1962, 1962-05-31 or 5/31/1962, for "datum_by_date".'),
    source: column('Source class of each row; a blank cell falls back to "source".'),
    api_number: column('API well number of 10, 12 or 14 digits. Rows with the same number are one well.'),
    name: column('Name of the well, farm or lease. Rows whose places agree and that have the same well number with the same name or operator are one well.'),
    operator: column('Operator.'),
    well_number: column('Number of the well on its lease.'),
    error_m: column('One standard deviation per axis for each row, in metres or with a unit.'),
    error_90_m: column('Radius that holds 90 %, for each row.'),
    error_95_m: column('Radius that holds 95 %, for each row.'),
    group: { description: 'Map sheet, lease, operator or surveyor, one column or a list of them: records that agree in all share an unknown shift of shared_sd_m.', examples: ['sheet', ['sheet', 'operator']] },
    note: column('Anything that is to stay with the record.'),
  }, { title: 'Columns', description: 'Which column of the file holds what.' }),
  crs: { type: 'string', description: 'CRS of easting and northing, or of latitude and longitude; for a vector file that names none.', examples: ['EPSG:32017'] },
  datum: { type: 'string', description: 'Datum of all rows that do not state their own.', examples: ['NAD27'] },
  west_positive: { type: 'boolean', default: RECORD_FILE_DEFAULTS.westPositive, description: 'Longitudes without sign or letter count west.' },
  digits: { type: 'string', enum: DIGIT_KINDS, default: RECORD_FILE_DEFAULTS.digits, description: 'Whether the last digit of a coordinate was rounded, or what followed it cut off.' },
  source: { type: 'string', enum: SOURCE_CLASSES, default: RECORD_FILE_DEFAULTS.source, description: 'What the positions rest on; sets their error where none is stated.' },
  map_scale: { type: 'number', exclusiveMinimum: 0, description: 'For "map": 24000 stands for 1:24,000.', examples: [24000] },
  class_errors: objectSchema(Object.fromEntries(SOURCE_CLASSES.map((each) => [each, quantitySchema('m', { minimum: 0 })])), {
    description: 'Standard error per axis of a source class, in place of what it implies; an error stated for the row or the file goes before it.', examples: [{ gps: 3, footage: '40 ft' }],
  }),
  error_m: length('One standard deviation per axis of every position; in place of what "source" implies.'),
  error_90_m: length('Radius that holds 90 % of the positions; in place of what "source" implies.'),
  error_95_m: length('Radius that holds 95 % of the positions; in place of what "source" implies.'),
  shared_sd_m: quantitySchema('m', { minimum: 0, default: RECORD_FILE_DEFAULTS.sharedSdM, description: 'Standard error per axis that all records of a group have in common.' }),
  unknown_datum: objectSchema({
    NAD27: share({}), NAD83: share({}), 'NAD83(2011)': share({}), 'WGS 84': share({}),
  }, { description: 'Weights of the datums that a row without one may be in.', examples: [{ NAD27: 0.7, NAD83: 0.3 }] }),
  datum_by_date: {
    type: 'array', description: 'Datum by the date of the map: the first rule whose day lies after it, or that names none. A datum in the row goes before.',
    items: objectSchema({ before: { type: 'string', description: 'A day.' }, datum: { type: 'string', description: 'A datum, or unknown.' } }, { required: ['datum'] }),
    examples: [[{ before: '1986-01-01', datum: 'NAD27' }, { datum: 'NAD83' }]],
  },
  meridian: { type: 'string', minLength: 1, description: 'Principal meridian of all sections that do not name theirs, by its name or code.', examples: ['Willamette'] },
  api_state: { type: 'string', pattern: '^\\d{2}$', description: 'State of API numbers that begin with the county, two digits.', examples: ['37'] },
  pair_order: { type: 'string', enum: ['unsaid', 'latitude first', 'longitude first'], default: LOCATION_TEXT_DEFAULTS.pairOrder, description: 'Which of the two angles of a location comes first where nothing else tells.' },
  length_unit: { type: 'string', enum: ['ft', 'rod', 'chain', 'link', 'm'], description: 'Unit of a location\'s lengths that have none; without it such a length is refused (660 FNL says feet itself).' },
  repairs: {
    type: 'array', items: { type: 'string', enum: REPAIR_KINDS }, default: [],
    description: 'Slips of the pen that may be mended where the evidence is plain; the others are proposed only. Every one is listed.', examples: [['longitude_sign', 'utm_zone']],
  },
  blunder_share: share({ default: RECORD_FILE_DEFAULTS.blunderShare, description: 'Share of positions that are blunders, spread over the section where the row names one, else over a disc of blunder_radius_m.' }),
  p_casing: share({ default: RECORD_FILE_DEFAULTS.pCasing, description: 'Chance, before any search, that a steel casing was set and left.' }),
}, { required: ['path'] });

/** Historic records to positions with error. */
export const locate: Operation = {
  id: 'locate',
  version: '1.0.0',
  title: 'Historic records to positions with error',
  summary: 'Reads permits and map points, as coordinates, footage calls, parts of sections or distances from a map\'s corner, moves them from their own datum to the survey\'s frame and sums the error of every position; joins rows that tell of one well, and says what disagrees, what was repaired and which rows cannot be placed.',
  parameters: objectSchema({
    files: { type: 'array', items: FILE_SCHEMA, minItems: 1, title: 'Files', description: 'Files of records.' },
    max_distance_m: quantitySchema('m', { exclusiveMinimum: 0, default: LOCATE_DEFAULTS.maxDistanceM, description: 'A record farther than this from the parcel is reported as a mistake in its row.' }),
    sections: objectSchema({
      path: pathSchema({ title: 'Layer of sections', description: 'Polygons of sections, and of government lots where there are any: Shapefile, GeoJSON or FlatGeobuf.' }),
      crs: { type: 'string', description: 'CRS of a layer that names none.', examples: ['EPSG:4269'] },
      columns: objectSchema(Object.fromEntries(Object.entries(SECTION_COLUMNS).map(([key, [attribute, description]]) => [key, { ...column(description), default: SECTION_ATTRIBUTES[attribute] }])), {
        title: 'Columns', description: 'Which column of the layer holds what, where it is not the public land survey\'s own.',
      }),
    }, { required: ['path'], title: 'Sections', description: 'The sections that records name. Without them calls, parts and sections place nothing.' }),
    section_sd_m: quantitySchema('m', { minimum: 0, default: LOCATE_DEFAULTS.sectionSdM, description: 'Standard error per axis of a corner of the section layer; as read off a map at 1:24,000.' }),
    call_sd_m: quantitySchema('m', { minimum: 0, default: LOCATE_DEFAULTS.callSdM, description: 'Standard error of measuring a footage call on the ground.' }),
    call_sd_share: share({ default: LOCATE_DEFAULTS.callSdShare, description: 'Standard error of measuring a call as a share of its length; added to the former in squares.' }),
    disagree_below: { type: 'number', exclusiveMinimum: 0, exclusiveMaximum: 1, default: LOCATE_DEFAULTS.disagreeBelow, description: 'Statements of one well disagree where right ones lie as far apart with less than this chance.' },
    blunder_radius_m: quantitySchema('m', { exclusiveMinimum: 0, default: LOCATE_DEFAULTS.blunderRadiusM, description: 'Radius over which the blunder share of a position is spread where no section is known.' }),
  }, { required: ['files'] }),
  inputs: {},
  outputs: { records: { title: 'Positions with their 95 % ellipses', form: 'records' } },
  sources: [
    'United States National Map Accuracy Standards (Bureau of the Budget, 1947)',
    'NGA TR8350.2, mean datum shifts with their errors',
    'NADCON (NOAA), NAD27 to NAD83 in the lower 48',
    'Bureau of Land Management, Manual of Surveying Instructions (2009), parts of sections',
    'API Bulletin D12A (1979), the API well number',
    'Mahalanobis (1936), distance of two places in units of their errors',
  ],
  example: 'ironplat locate --survey survey.json --out delivery',
  async run({ site, parameters, files, warn }) {
    const { files: list, sections: layer, ...given } = camelKeys<LocateParameters>(parameters);
    const sources: RecordSource[] = [];
    for (const { path, crs: code, ...rest } of list) {
      const settings: RecordFileSettings = code === undefined ? rest : { ...rest, crs: crs(code, `${baseName(path)}, crs`) };
      sources.push(await readSource(path, settings, { files, warn }));
    }
    const options: LocateOptions = layer ? { ...given, ...(await readSections(layer, { site, files, warn, sectionSdM: given.sectionSdM ?? LOCATE_DEFAULTS.sectionSdM })) } : given;
    const records = locateRecords(sources, site, options);
    tellOf(records, warn);
    for (const { source, row, problem, advice } of records.unplaced) warn(`${source}, row ${row}: not placed, ${problem}; ${advice}.`);
    return { records };
  },
};

/** The layer of sections in the survey's frame, and the error of its corners with that of their move. */
async function readSections({ path, crs: code, columns }: SectionParameters, { site, files, warn, sectionSdM }: {
  site: Site; files: FileSource; warn(message: string): void; sectionSdM: number;
}): Promise<Required<Pick<LocateOptions, 'sections' | 'sectionSdM'>>> {
  const input = await readVector(path, files, { crs: code === undefined ? null : crs(code, `${baseName(path)}, crs`), crsKey: 'crs' });
  input.notes.forEach(warn);
  const { features, shiftSdM } = sectionFeatures(input, site);
  const sections = sectionLayer(features, { attributes: columns ?? {} });
  sections.notes.forEach(warn);
  return { sections, sectionSdM: Math.hypot(sectionSdM, shiftSdM) };
}

/** What the user has to know of the records besides their places. */
function tellOf({ unplaced, repairs = [], disagreements = [], joined = [], apiRemarks = [] }: Records, warn: (message: string) => void): void {
  const told = new Set(unplaced.map(({ source, row }) => `${source} ${row}`));
  for (const { source, row, applied, what, before, after, evidence } of repairs) {
    // A row without a place is told of with its likeliest repair.
    if (told.has(`${source} ${row}`)) continue;
    warn(`${source}, row ${row}: ${applied ? 'repaired' : 'repair proposed'}, ${what}: ${before} ${applied ? 'was read' : 'might be read'} as ${after} (${evidence}).`);
  }
  for (const { source, row, kept, other, distanceM } of disagreements) warn(`${source}, row ${row}: ${kept} and ${other} lie ${distanceM.toFixed(0)} m apart, more than their errors allow.`);
  for (const { source, row, into, why, distanceM } of joined) warn(`${source}, row ${row}: joined with ${into}, ${why}; ${distanceM.toFixed(0)} m apart.`);
  for (const { source, row, value, remark } of apiRemarks) warn(`${source}, row ${row}: API number "${value}", ${remark}.`);
}

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
