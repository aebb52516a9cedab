import { UserError } from '../errors.js';
import { buildProjection, type Projection } from './projection.js';
import { registryRows, type RegistryRow } from './registryRows.js';
import type { Crs } from './types.js';

/** Systems already asked for, by code; a row always gives the same object. */
const built = new Map<number, Crs>();

/**
 * A coordinate reference system by its EPSG code: 2272, "2272", "EPSG:2272" in any case, or the OGC URN or URL of it.
 * The projection is built when it is first used. Throws UserError `crs_unknown` for anything else.
 */
export function crs(code: string | number, where = 'crs'): Crs {
  const epsg = epsgOf(code);
  const row = epsg === null ? undefined : registryRows().get(epsg);
  if (row === undefined) throw unknownCrs(code, where);
  let found = built.get(row.epsg);
  if (found === undefined) {
    found = fromRow(row);
    built.set(row.epsg, found);
  }
  return found;
}

/** All systems of the registry, by code. */
export function crsCodes(): number[] {
  return [...registryRows().keys()];
}

function fromRow(row: RegistryRow): Crs {
  let projection: Projection | null = null;
  const project = (): Projection => (projection ??= buildProjection(row));
  return {
    code: `EPSG:${row.epsg}`, epsg: row.epsg, name: row.name, datum: row.datum,
    kind: row.method === 'longlat' ? 'geographic' : 'projected',
    unit: row.unit, metresPerUnit: row.metresPerUnit, areaOfUse: row.areaOfUse,
    forward: (lonDeg, latDeg) => project().forward(lonDeg, latDeg),
    inverse: (eastM, northM) => project().inverse(eastM, northM),
  };
}

const CODE = /^\s*(?:epsg:{1,2}|urn:ogc:def:crs:epsg:[\d.]*:|https?:\/\/www\.opengis\.net\/def\/crs\/epsg\/[\d.]+\/)?(\d{4,6})\s*$/i;

function epsgOf(code: string | number): number | null {
  if (typeof code === 'number') return Number.isInteger(code) ? code : null;
  const match = CODE.exec(code);
  return match ? Number(match[1]) : null;
}

/** How many near misses a message names: more is noise. */
const SUGGESTIONS = 5;

function unknownCrs(code: string | number, where: string): UserError {
  const near = typeof code === 'string' ? namedLike(code) : [];
  return new UserError({
    code: 'crs_unknown', where, found: JSON.stringify(code),
    wanted: 'the EPSG code of a US State Plane or UTM zone on NAD27, NAD83, NAD83(2011) or WGS 84, or of one of these datums, as in "EPSG:2272"',
    ...(near.length > 0 ? { advice: `by that name there is ${near.join(', ')}` } : {}),
  });
}

/** Systems whose name holds every word of the text. */
function namedLike(text: string): string[] {
  const words = text.toLowerCase().split(/[^a-z0-9().]+/).filter((word) => word.length > 0);
  if (!words.some((word) => /[a-z]{3}/.test(word))) return [];
  const hits = [...registryRows().values()].filter((row) => {
    const name = row.name.toLowerCase().split(/[^a-z0-9().]+/);
    return words.every((word) => name.some((part) => part.startsWith(word)));
  });
  return hits.slice(0, SUGGESTIONS).map((row) => `EPSG:${row.epsg} (${row.name})`);
}
