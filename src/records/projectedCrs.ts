import { UserError } from '../errors.js';
import { crs, crsCodes } from '../geodesy/crs.js';
import type { Crs, Datum } from '../geodesy/types.js';
import { FOOT_M, US_SURVEY_FOOT_M } from '../units.js';
import type { ProjectedStatement, ProjectedSystem, ProjectedUnit } from './locationText/types.js';

/** A system of the registry and metres in one unit of the coordinates as written. */
export interface ProjectedReading {
  readonly crs: Crs;
  readonly metresPerUnit: number;
}

const UNIT_M: Readonly<Record<Exclude<ProjectedUnit, 'foot'>, number>> = { metre: 1, 'US survey foot': US_SURVEY_FOOT_M, 'international foot': FOOT_M };

/**
 * The system that a text's coordinates are in on a datum: the text's own, else the file's. A "foot" is the foot that the
 * zone's system is published in (NAD27: the US survey foot). Throws UserError `crs_missing` where neither text nor file
 * names a system, `crs_unknown` where the datum has no such zone, `value_invalid` where nobody can tell the unit.
 */
export function projectedReading({ system, unit }: Pick<ProjectedStatement, 'system' | 'unit'>, datum: Datum, { fileCrs, where }: { readonly fileCrs: Crs | null; readonly where: string }): ProjectedReading {
  if (system === null) {
    if (fileCrs?.kind !== 'projected') {
      throw new UserError({ code: 'crs_missing', where, found: 'an easting and a northing without a zone', wanted: 'the zone in the text, or the file\'s "crs"' });
    }
    return { crs: fileCrs, metresPerUnit: unit === null ? fileCrs.metresPerUnit : unit === 'foot' ? footOf([fileCrs], where) : UNIT_M[unit] };
  }
  const variants = variantsOf(system, datum);
  if (variants.length === 0) throw new UserError({ code: 'crs_unknown', where, found: `${nameOf(system)} on ${datum}`, wanted: 'a zone that this datum has' });
  const [first] = variants as [Crs];
  if (unit !== null) return { crs: first, metresPerUnit: unit === 'foot' ? footOf(variants, where) : UNIT_M[unit] };
  const units = new Set(variants.map((each) => each.metresPerUnit));
  if (units.size > 1) throw new UserError({ code: 'value_invalid', where, found: `coordinates of ${nameOf(system)} on ${datum} without a unit`, wanted: 'm or ft behind them' });
  return { crs: first, metresPerUnit: first.metresPerUnit };
}

/** The foot that the systems of a zone are published in; with none in feet, nobody knows which foot is meant. */
function footOf(variants: readonly Crs[], where: string): number {
  const feet = new Set(variants.filter((each) => each.unit !== 'metre').map((each) => each.metresPerUnit));
  if (feet.size === 1) return [...feet][0]!;
  if (variants.every((each) => each.name.includes('UTM'))) return US_SURVEY_FOOT_M;
  throw new UserError({ code: 'value_invalid', where, found: 'coordinates in feet, of a zone that is published in no one foot', wanted: 'US survey feet or international feet' });
}

const nameOf = (system: ProjectedSystem): string => (system.kind === 'UTM' ? `UTM zone ${system.zone}N` : system.name);

let byName: Map<string, Crs[]> | null = null;

/** Systems of a zone on a datum: one a unit. The registry is laid out by name on first use. */
function variantsOf(system: ProjectedSystem, datum: Datum): readonly Crs[] {
  if (byName === null) {
    byName = new Map();
    for (const code of crsCodes()) {
      const each = crs(code);
      if (each.kind !== 'projected') continue;
      const name = each.name.replace(/ \((?:ftUS|ft)\)$/, '').replace(/^.* \/ /, `${each.datum} / `).toLowerCase();
      byName.set(name, [...(byName.get(name) ?? []), each]);
    }
  }
  return byName.get(`${datum} / ${nameOf(system)}`.toLowerCase()) ?? [];
}
