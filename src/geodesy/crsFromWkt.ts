import { UserError } from '../errors.js';
import { canonicalOf, sameProjection } from './canonical.js';
import { crs } from './crs.js';
import { ELLIPSOIDS } from './ellipsoid.js';
import { registryRows, type RegistryRow } from './registryRows.js';
import type { Crs } from './types.js';
import { readWktCrs, type WktCrs } from './wktCrs.js';
import { parseWkt, plainName } from './wktTree.js';

/**
 * Identifies a .prj or other well-known text (WKT 1 in ESRI's or OGC's dialect, WKT 2) as a system of the registry: by
 * its EPSG code where it carries one and its contents do not contradict it, else by datum, unit, method and parameters.
 * Throws UserError `crs_unknown` with what it read where neither leads to a system; nothing is ever guessed.
 */
export function crsFromWkt(wkt: string, where: string): Crs {
  const tree = parseWkt(wkt);
  const read = tree && readWktCrs(tree);
  if (!read) throw unknown(where, tree ? `a coordinate system of kind ${tree.keyword}` : `${JSON.stringify(wkt.slice(0, 40))}, which is no well-known text`);
  const problem = problemOf(read);
  if (problem !== null) throw unknown(where, problem);
  const named = read.epsg === null ? undefined : registryRows().get(read.epsg);
  if (named !== undefined) {
    const conflict = conflictOf(read, named);
    if (conflict !== null) throw unknown(where, `EPSG:${named.epsg} ${named.name} by its code, but ${conflict}`);
    return crs(named.epsg);
  }
  const same = [...registryRows().values()].filter((row) => conflictOf(read, row) === null);
  // Rows that pass are the same coordinates under several codes (New York East and New Jersey): the name decides, then the lower code.
  const row = same.toSorted((a, b) => sharedWords(b.name, read.name) - sharedWords(a.name, read.name) || a.epsg - b.epsg)[0];
  if (row === undefined) throw unknown(where, describe(read));
  return crs(row.epsg);
}

/** Clarke 1866 in files differs in the last printed digit; other ellipsoids of its size differ by 10 m and 1e-3 at least. */
const AXIS_TOLERANCE_M = 0.2;
const FLATTENING_TOLERANCE = 1e-5;
/** Between the two feet lie 6e-7 m. */
const UNIT_TOLERANCE_M = 5e-8;

function problemOf(read: WktCrs): string | null {
  if (read.datum === null) return `${describe(read)}; its datum is not NAD27, NAD83, NAD83(2011) or WGS 84`;
  const { a, inverseFlattening, name } = ELLIPSOIDS[read.datum];
  if (!(Math.abs(read.ellipsoidA - a) <= AXIS_TOLERANCE_M && Math.abs(read.inverseFlattening - inverseFlattening) <= FLATTENING_TOLERANCE)) {
    return `datum ${read.datumName} on an ellipsoid of ${read.ellipsoidA} m and 1/${read.inverseFlattening}, which is not ${name}`;
  }
  return read.primeMeridianDeg === 0 ? null : `longitudes from a prime meridian at ${read.primeMeridianDeg} degrees`;
}

/** What of the text does not fit a row; null where all fits. */
function conflictOf(read: WktCrs, row: RegistryRow): string | null {
  if (read.datum !== row.datum) return `on datum ${read.datumName}`;
  const projection = canonicalOf(row);
  if (!read.projected) return projection === null ? null : 'geographic';
  if (projection === null) return 'projected';
  if (!(Math.abs(read.metresPerUnit - row.metresPerUnit) <= UNIT_TOLERANCE_M)) return `in units of ${read.metresPerUnit} m`;
  return read.projection !== null && sameProjection(read.projection, projection) ? null : 'with other projection parameters';
}

function describe({ name, datumName, projected, methodName, unitName }: WktCrs): string {
  return `${JSON.stringify(name)} (${projected ? `${methodName}, ${unitName}, ` : ''}datum ${datumName})`;
}

function unknown(where: string, found: string): UserError {
  return new UserError({
    code: 'crs_unknown', where, found,
    wanted: 'a State Plane, UTM or geographic system on NAD27, NAD83, NAD83(2011) or WGS 84', advice: 'where you know its EPSG code, state it in the survey file',
  });
}

/** Part of a row's words that the other name holds, whatever stands between them. */
function sharedWords(rowName: string, other: string): number {
  const words = rowName.split(/[^A-Za-z0-9]+/).filter((word) => word !== '');
  const held = plainName(other);
  return words.filter((word) => held.includes(plainName(word))).length / words.length;
}
