import { UserError } from '../../errors.js';
import { crs, crsCodes } from '../../geodesy/crs.js';
import type { Crs, Datum } from '../../geodesy/types.js';
import type { ProjectedStatement, ProjectedUnit } from './types.js';

let byName: ReadonlyMap<string, Crs> | null = null;

/** How the registry's names end for a unit; the State Plane systems of NAD27 are all in US survey feet and do not say so. */
const ENDINGS: Readonly<Record<Exclude<ProjectedUnit, 'foot'>, string>> = { metre: '', 'US survey foot': ' (ftUS)', 'international foot': ' (ft)' };
const ROMAN: Readonly<Record<string, string>> = { 1: 'I', 2: 'II', 3: 'III', 4: 'IV', 5: 'V', 6: 'VI', 7: 'VII' };

/**
 * The registry's system that a projected statement is in. The datum is the statement's own, else `datum`. On NAD83 a bare
 * "foot" is the one that the state's systems are in; where they are in both, or where no unit is named, nothing is guessed.
 * Throws UserError `crs_unknown` where the statement names no system, or none that the registry has.
 */
export function projectedCrs(statement: ProjectedStatement, datum: Datum, where: string): Crs {
  const { system, unit } = statement;
  const on = statement.datum ?? datum;
  if (system === null) throw unknown(where, 'projected coordinates without their system', 'a UTM or State Plane zone beside them, or the CRS of the column');
  const name = system.kind === 'UTM' ? `UTM zone ${system.zone}N` : system.name;
  if (on === 'NAD27' && system.kind === 'State Plane') {
    if (unit === 'metre' || unit === 'international foot') throw unknown(where, `State Plane coordinates on NAD27 in the unit ${unit}`, 'US survey feet, the unit of every zone on NAD27');
    return named(`NAD27 / ${name.replace(/^(California zone )(\d)$/, (_, zone: string, number: string) => zone + ROMAN[number]!)}`, where);
  }
  if (unit === null) throw unknown(where, `${name} on ${on} without a unit`, 'metres, US survey feet or international feet beside the coordinates');
  if (unit !== 'foot') return named(`${on} / ${name}${ENDINGS[unit]}`, where);
  const feet = [`${on} / ${name}${ENDINGS['US survey foot']}`, `${on} / ${name}${ENDINGS['international foot']}`].filter((each) => systems().has(each));
  if (feet.length > 1) throw unknown(where, `${name} on ${on} in feet`, 'US survey feet or international feet, since the zone is in use in both');
  return named(feet[0] ?? `${on} / ${name}${ENDINGS['US survey foot']}`, where);
}

function systems(): ReadonlyMap<string, Crs> {
  byName ??= new Map(crsCodes().map((code) => [crs(code).name, crs(code)]));
  return byName;
}

function named(name: string, where: string): Crs {
  const found = systems().get(name);
  if (found === undefined) throw unknown(where, `coordinates in ${JSON.stringify(name)}`, 'a system that the registry has', 'state the CRS of the column by its EPSG code');
  return found;
}

function unknown(where: string, found: string, wanted: string, advice?: string): UserError {
  return new UserError({ code: 'crs_unknown', where, found, wanted, ...(advice ? { advice } : {}) });
}
