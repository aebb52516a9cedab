import { FOOT_M, US_SURVEY_FOOT_M } from '../units.js';
import { REGISTRY_ROWS } from './data/registryRows.js';
import type { Bounds, Crs, Datum } from './types.js';

export type Method = 'longlat' | 'utm' | 'tmerc' | 'lcc' | 'omerc' | 'aea' | 'webmerc';

/** One line of the registry: what EPSG says of a system, before any projection is built. */
export interface RegistryRow {
  readonly epsg: number;
  readonly name: string;
  readonly datum: Datum;
  readonly unit: Crs['unit'];
  readonly metresPerUnit: number;
  readonly areaOfUse: Bounds;
  readonly method: Method;
  /** PROJ's names; degrees, metres and ratios. A word without value (`south`, `no_uoff`) stands as 1. */
  readonly parameters: Readonly<Record<string, number>>;
}

const UNITS: Readonly<Record<string, [Crs['unit'], number]>> = {
  m: ['metre', 1],
  u: ['US survey foot', US_SURVEY_FOOT_M],
  f: ['foot', FOOT_M],
};

/** The registry's text is split once, on first use. */
let parsed: ReadonlyMap<number, RegistryRow> | null = null;

/** All rows by EPSG code, in the order datum, code. */
export function registryRows(): ReadonlyMap<number, RegistryRow> {
  parsed ??= parseRows(REGISTRY_ROWS);
  return parsed;
}

function parseRows(text: string): ReadonlyMap<number, RegistryRow> {
  const rows = new Map<number, RegistryRow>();
  let datum: Datum = 'WGS 84';
  for (const line of text.trim().split('\n')) {
    const cells = line.split('|');
    if (cells[0]!.startsWith('@')) {
      datum = cells[0]!.slice(1) as Datum;
      const epsg = Number(cells[1]);
      rows.set(epsg, { epsg, name: datum, datum, unit: 'degree', metresPerUnit: 1, areaOfUse: bounds(cells[2]!), method: 'longlat', parameters: {} });
      continue;
    }
    const [code, name, mark, area, projection] = cells as [string, string, string, string, string];
    const [method, ...words] = projection.split(' ');
    const [unit, metresPerUnit] = UNITS[mark]!;
    rows.set(Number(code), {
      epsg: Number(code), name: `${datum} / ${name}`, datum, unit, metresPerUnit, areaOfUse: bounds(area),
      method: method as Method, parameters: Object.fromEntries(words.map(parameter)),
    });
  }
  return rows;
}

function parameter(word: string): [string, number] {
  const [name, value] = word.split('=');
  return [name!, value === undefined ? 1 : Number(value)];
}

function bounds(text: string): Bounds {
  const [west, south, east, north] = text.split(',').map(Number) as [number, number, number, number];
  return { west, south, east, north };
}
