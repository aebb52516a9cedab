import type { Position } from 'geojson';
import { UserError } from '../errors.js';
import type { Crs } from '../geodesy/types.js';
import type { InputFeature } from '../vector/types.js';
import { decimalsOf } from './digits.js';
import type { RawRecord } from './rawRecord.js';
import { cellColumns, groupColumns, groupText, mappedColumn, recordHead, type Cell } from './recordHead.js';
import type { RecordColumns } from './recordSource.js';

const COORDINATE_KEYS: ReadonlySet<string> = new Set(['latitude', 'longitude', 'easting', 'northing']);

/** Points of a vector file with their columns; a feature that is no point becomes its row's fault. */
export function* featureRecords(features: readonly InputFeature[], settings: { columns: RecordColumns; name: string; crs: Crs }): Generator<RawRecord> {
  const { columns, name, crs } = settings;
  const names = [...propertyNames(features)];
  const known = new Map(names.map((each) => [each, [] as string[]]));
  const mapped: Array<[string, string]> = [...cellColumns(columns), ...groupColumns(columns).map((each): [string, string] => ['group', each])];
  const forCoordinates = mapped.find(([key]) => COORDINATE_KEYS.has(key));
  if (forCoordinates) {
    throw new UserError({
      code: 'key_invalid', where: name, found: `columns.${forCoordinates[0]} for a file that has points of its own`,
      wanted: 'no column for coordinates', advice: 'leave the key out; the points themselves are used',
    });
  }
  // Without a feature nobody knows the file's columns.
  for (const [key, wanted] of features.length > 0 ? mapped : []) {
    mappedColumn(known, wanted, { key, source: name, names });
  }
  const resolution = pointResolution(features, crs);
  for (const [i, feature] of features.entries()) {
    const textOf = (column: string): string => {
      const value = feature.properties[column];
      return value === null || value === undefined ? '' : String(value).trim();
    };
    const cell: Cell = (key) => (columns[key] === undefined ? '' : textOf(columns[key]));
    yield { ...recordHead(cell, { columns, row: i + 1 }), group: groupText(groupColumns(columns).map(textOf)), ...pointOf(feature, crs, resolution) };
  }
}

function propertyNames(features: readonly InputFeature[]): Set<string> {
  const names = new Set<string>();
  for (const { properties } of features) for (const name in properties) names.add(name);
  return names;
}

/** Coordinate of a point feature; other geometries become the row's fault. */
function pointPosition(feature: InputFeature): Position | null {
  const { geometry } = feature;
  if (geometry?.type === 'Point') return geometry.coordinates;
  return geometry?.type === 'MultiPoint' && geometry.coordinates.length === 1 ? geometry.coordinates[0]! : null;
}

/**
 * Worth of the last digit in a file of points, in the CRS's published unit. Numbers in such files keep no trailing zeros,
 * so the finest coordinate of the file speaks for all of them.
 */
function pointResolution(features: readonly InputFeature[], crs: Crs): number {
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

function pointOf(feature: InputFeature, crs: Crs, resolution: number): Pick<RawRecord, 'place' | 'coordinates'> {
  const position = pointPosition(feature);
  if (position === null || position.length < 2) {
    const what = feature.geometry?.type ?? 'no geometry';
    return { coordinates: { columns: 'geometry', value: what }, place: { column: 'geometry', value: what, problem: `${what}, not a point`, advice: 'give one point a record', ...(feature.geometry === null ? { absent: true as const } : {}) } };
  }
  const [x, y] = position as [number, number];
  const coordinates = { columns: 'geometry', value: `${roundedText(x / crs.metresPerUnit, crs)}, ${roundedText(y / crs.metresPerUnit, crs)}` };
  if (crs.kind === 'geographic') {
    return { coordinates, place: { kind: 'angles', lonDeg: x, latDeg: y, lonResolutionDeg: resolution, latResolutionDeg: resolution } };
  }
  const resolutionM = resolution * crs.metresPerUnit;
  return { coordinates, place: { kind: 'projected', eastM: x, northM: y, eastResolutionM: resolutionM, northResolutionM: resolutionM } };
}
