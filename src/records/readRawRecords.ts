import type { Position } from 'geojson';
import { UserError } from '../errors.js';
import { parseAngle, type Axis, type ParsedAngle } from '../geodesy/parseAngle.js';
import type { Crs } from '../geodesy/types.js';
import { nearest } from '../nearest.js';
import type { TextTable } from '../table/types.js';
import { quantity } from '../units.js';
import type { Feature } from '../vector/types.js';
import { decimalsOf, numberText } from './digits.js';
import type { Fault, RawPlace, RawRecord } from './rawRecord.js';
import { RECORD_FILE_DEFAULTS, type RecordColumns, type RecordSource } from './recordSource.js';

/** Text of the cell under a mapped key; empty where the key is not mapped. */
type Cell = (key: keyof RecordColumns) => string;

/**
 * Rows of a file with their coordinates as numbers. What is wrong with one row becomes its fault; what is wrong with the
 * file as a whole (a column that is not there, no CRS) is a UserError.
 */
export function readRawRecords(source: RecordSource): RawRecord[] {
  const columns = source.settings.columns ?? {};
  const westPositive = source.settings.westPositive ?? RECORD_FILE_DEFAULTS.westPositive;
  if (source.kind === 'table') return readTable(source.table, { columns, crs: source.settings.crs ?? null, westPositive });
  return readFeatures(source.features, { columns, name: source.name, crs: source.settings.crs ?? source.crs });
}

function readTable(table: TextTable, settings: { columns: RecordColumns; crs: Crs | null; westPositive: boolean }): RawRecord[] {
  const { columns, westPositive } = settings;
  const stored = new Map<keyof RecordColumns, readonly string[]>();
  for (const [key, name] of Object.entries(columns) as Array<[keyof RecordColumns, string | undefined]>) {
    if (name !== undefined) stored.set(key, column(table.columns, name, { key, source: table.source, names: table.names }));
  }
  const form = coordinateForm(table, settings);
  return Array.from({ length: table.rows }, (_, i) => {
    const cell: Cell = (key) => (stored.get(key)?.[i] ?? '').trim();
    return {
      ...rowOf(cell, { columns, source: table.source, row: i + 1 }),
      ...(form === 'angles' ? anglesOf(cell, columns, westPositive) : projectedOf(cell, columns, settings.crs!)),
    };
  });
}

function readFeatures(features: readonly Feature[], settings: { columns: RecordColumns; name: string; crs: Crs }): RawRecord[] {
  const { columns, name, crs } = settings;
  const names = [...new Set(features.flatMap((feature) => Object.keys(feature.values)))];
  const known = new Map(names.map((each) => [each, [] as string[]]));
  const mapped = Object.entries(columns) as Array<[keyof RecordColumns, string | undefined]>;
  const forCoordinates = mapped.find(([key, wanted]) => wanted !== undefined && COORDINATE_KEYS.has(key));
  if (forCoordinates) {
    throw new UserError({
      code: 'key_invalid', where: name, found: `columns.${forCoordinates[0]} for a file that has points of its own`,
      wanted: 'no column for coordinates', advice: 'leave the key out; the points themselves are used',
    });
  }
  // Without a feature nobody knows the file's columns.
  for (const [key, wanted] of features.length > 0 ? mapped : []) {
    if (wanted !== undefined) column(known, wanted, { key, source: name, names });
  }
  const resolution = pointResolution(features, crs);
  return features.map((feature, i) => {
    const cell: Cell = (key) => {
      const value = columns[key] === undefined ? null : feature.values[columns[key]];
      return value === null || value === undefined ? '' : String(value).trim();
    };
    return { ...rowOf(cell, { columns, source: name, row: i + 1 }), ...pointOf(feature, crs, resolution) };
  });
}

const COORDINATE_KEYS: ReadonlySet<string> = new Set(['latitude', 'longitude', 'easting', 'northing']);

function column<T>(stored: ReadonlyMap<string, T>, name: string, about: { key: string; source: string; names: readonly string[] }): T {
  const values = stored.get(name);
  if (values !== undefined) return values;
  const close = nearest(name, about.names);
  throw new UserError({
    code: 'column_missing', where: `${about.source}, columns.${about.key}`, found: `no column "${name}"`,
    wanted: `one of ${about.names.join(', ')}`, ...(close === null ? {} : { advice: `did you mean "${close}"` }),
  });
}

function coordinateForm(table: TextTable, { columns, crs }: { columns: RecordColumns; crs: Crs | null }): RawPlace['kind'] {
  const angles = columns.latitude !== undefined && columns.longitude !== undefined;
  const projected = columns.easting !== undefined && columns.northing !== undefined;
  if (angles === projected) {
    throw new UserError({
      code: 'key_missing', where: `${table.source}, columns`,
      found: angles ? 'both latitude and longitude and easting and northing' : 'neither latitude and longitude nor easting and northing',
      wanted: 'the columns of one pair', advice: `the file has ${table.names.join(', ')}`,
    });
  }
  if (angles && crs?.kind === 'projected') {
    throw new UserError({
      code: 'key_invalid', where: `${table.source}, crs`, found: `${crs.code} (${crs.name}), a projected CRS, for columns of latitude and longitude`,
      wanted: 'a datum instead of the CRS, or columns of easting and northing',
    });
  }
  if (projected && crs?.kind !== 'projected') {
    throw new UserError({
      code: 'crs_missing', where: `${table.source}, crs`, found: crs === null ? 'no CRS' : `${crs.code}, a geographic CRS`,
      wanted: 'the projected CRS that easting and northing are in, as in "crs": "EPSG:32017"',
    });
  }
  return angles ? 'angles' : 'projected';
}

type RowHead = Omit<RawRecord, 'place' | 'coordinates'>;

/** Everything but the coordinates; a length that nobody can read becomes the row's fault. */
function rowOf(cell: Cell, about: { columns: RecordColumns; source: string; row: number }): RowHead {
  const { columns } = about;
  const lengths = { errorM: null as number | null, error90M: null as number | null, error95M: null as number | null };
  let fault: Fault | null = null;
  for (const key of ['errorM', 'error90M', 'error95M'] as const) {
    const text = cell(key);
    if (text === '') continue;
    const value = length(text, columns[key]!);
    if (typeof value === 'number') lengths[key] = value;
    else fault ??= value;
  }
  return {
    recordId: cell('recordId') || `row ${about.row}`, row: about.row,
    datumText: columns.datum === undefined ? null : cell('datum'),
    ...lengths, fault, group: cell('group'), note: cell('note'),
  };
}

/** A length in a cell: metres, or with its unit (`25 ft`). */
function length(text: string, columnName: string): number | Fault {
  const fault = { column: columnName, value: text, problem: `"${text}" is no length`, advice: 'write metres, or a number with its unit such as 25 ft; 0 or more' };
  try {
    const value = quantity(numberText.test(text) ? Number(text) : text, 'm', columnName);
    return value >= 0 ? value : fault;
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
    return fault;
  }
}

function anglesOf(cell: Cell, columns: RecordColumns, westPositive: boolean): Pick<RawRecord, 'place' | 'coordinates'> {
  const [lat, lon] = [cell('latitude'), cell('longitude')];
  const coordinates = { columns: `${columns.latitude}, ${columns.longitude}`, value: `${lat}, ${lon}` };
  const missing = missingCoordinate([columns.latitude!, lat], [columns.longitude!, lon]);
  if (missing) return { coordinates, place: missing };
  const latitude = angle(lat, 'latitude', columns.latitude!);
  if ('problem' in latitude) return { coordinates, place: latitude };
  const longitude = angle(lon, 'longitude', columns.longitude!);
  if ('problem' in longitude) return { coordinates, place: longitude };
  return {
    coordinates,
    place: {
      kind: 'angles', lonDeg: westPositive && !SAYS_SIDE.test(lon) ? -longitude.deg : longitude.deg, latDeg: latitude.deg,
      lonResolutionDeg: longitude.resolutionDeg, latResolutionDeg: latitude.resolutionDeg,
    },
  };
}

/** A longitude with a sign or a letter says itself on which side of Greenwich it lies. */
const SAYS_SIDE = /[-+\u2212\u2010-\u2014\uFE63\uFF0DeEwW]/;

/** An angle that nobody can read spoils its own row only, so the complaint becomes the row's fault. */
function angle(text: string, axis: Axis, columnName: string): ParsedAngle | Fault {
  try {
    return parseAngle(text, axis, columnName);
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
    // An angle in the other one's column is an angle all the same; placing will tell what slip it is.
    const turned = otherAxis(text, axis, columnName);
    if (turned !== null) return turned;
    const { found, wanted, advice } = error.complaint;
    return { column: columnName, value: text, problem: `${found} is no ${axis}`, advice: `write ${wanted}${advice ? `; ${advice}` : ''}` };
  }
}

function otherAxis(text: string, axis: Axis, columnName: string): ParsedAngle | null {
  try {
    return parseAngle(text, axis === 'latitude' ? 'longitude' : 'latitude', columnName);
  } catch (error) {
    if (error instanceof UserError) return null;
    throw error;
  }
}

function projectedOf(cell: Cell, columns: RecordColumns, crs: Crs): Pick<RawRecord, 'place' | 'coordinates'> {
  const [east, north] = [cell('easting'), cell('northing')];
  const coordinates = { columns: `${columns.easting}, ${columns.northing}`, value: `${east}, ${north}` };
  const missing = missingCoordinate([columns.easting!, east], [columns.northing!, north]);
  if (missing) return { coordinates, place: missing };
  for (const [name, text] of [[columns.easting!, east], [columns.northing!, north]] as const) {
    if (!numberText.test(text)) {
      return { coordinates, place: { column: name, value: text, problem: `"${text}" is no number`, advice: `write the coordinate in the CRS's unit (${crs.unit}), digits and a point only` } };
    }
  }
  const unit = crs.metresPerUnit;
  return {
    coordinates,
    place: {
      kind: 'projected', eastM: Number(east) * unit, northM: Number(north) * unit,
      eastResolutionM: unit * 10 ** -decimalsOf(east), northResolutionM: unit * 10 ** -decimalsOf(north),
    },
  };
}

function missingCoordinate(...cells: Array<readonly [name: string, text: string]>): Fault | null {
  const empty = cells.filter(([, text]) => text === '').map(([name]) => name);
  if (empty.length === 0) return null;
  return { column: empty.join(', '), value: '', problem: 'the coordinates are not given', advice: 'fill them in from the permit, or place the well by hand' };
}

/** Coordinate of a point feature; other geometries become the row's fault. */
function pointPosition(feature: Feature): Position | null {
  const { geometry } = feature;
  if (geometry?.type === 'Point') return geometry.coordinates;
  return geometry?.type === 'MultiPoint' && geometry.coordinates.length === 1 ? geometry.coordinates[0]! : null;
}

/**
 * Worth of the last digit in a file of points, in the CRS's published unit. Numbers in such files keep no trailing zeros,
 * so the finest coordinate of the file speaks for all of them.
 */
function pointResolution(features: readonly Feature[], crs: Crs): number {
  let decimals = 0;
  for (const feature of features) {
    for (const value of pointPosition(feature)?.slice(0, 2) ?? []) {
      decimals = Math.max(decimals, decimalsOf(roundedText(value / crs.metresPerUnit, crs)));
    }
  }
  return 10 ** -decimals;
}

/** Shortest text of a coordinate; what metre scaling adds beyond a micrometre (or its like in degrees) is no digit of the file. */
function roundedText(value: number, crs: Crs): string {
  return String(Number(value.toFixed(crs.kind === 'geographic' ? 11 : 6)));
}

function pointOf(feature: Feature, crs: Crs, resolution: number): Pick<RawRecord, 'place' | 'coordinates'> {
  const position = pointPosition(feature);
  if (position === null || position.length < 2) {
    const what = feature.geometry?.type ?? 'no geometry';
    return { coordinates: { columns: 'geometry', value: what }, place: { column: 'geometry', value: what, problem: `${what}, not a point`, advice: 'give one point a record' } };
  }
  const [x, y] = position as [number, number];
  const coordinates = { columns: 'geometry', value: `${roundedText(x / crs.metresPerUnit, crs)}, ${roundedText(y / crs.metresPerUnit, crs)}` };
  if (crs.kind === 'geographic') {
    return { coordinates, place: { kind: 'angles', lonDeg: x, latDeg: y, lonResolutionDeg: resolution, latResolutionDeg: resolution } };
  }
  const resolutionM = resolution * crs.metresPerUnit;
  return { coordinates, place: { kind: 'projected', eastM: x, northM: y, eastResolutionM: resolutionM, northResolutionM: resolutionM } };
}
