import { UserError } from './errors.js';

/** US survey foot, exact by definition (NIST Handbook 44, appendix C). */
export const US_SURVEY_FOOT_M = 1200 / 3937;
/** International foot, exact by definition (1959). */
export const FOOT_M = 0.3048;

/**
 * Metres per unit. A bare "ft" in a quantity is the international foot; old land surveys are in US survey feet,
 * and there the unit is written "ftUS". Rods and chains are land-survey units, so they count in US survey feet.
 */
const METRES_PER_UNIT: Readonly<Record<string, number>> = {
  m: 1, km: 1000, cm: 0.01, mm: 0.001,
  ft: FOOT_M, ftUS: US_SURVEY_FOOT_M, in: 0.0254, yd: 0.9144, mi: 1609.344,
  rod: 16.5 * US_SURVEY_FOOT_M, rods: 16.5 * US_SURVEY_FOOT_M,
  chain: 66 * US_SURVEY_FOOT_M, chains: 66 * US_SURVEY_FOOT_M,
};
const SECONDS_PER_UNIT: Readonly<Record<string, number>> = { s: 1, ms: 0.001, min: 60, h: 3600 };
const SCALES: Readonly<Record<QuantityUnit, Readonly<Record<string, number>>>> = {
  m: METRES_PER_UNIT,
  s: SECONDS_PER_UNIT,
  nT: { nT: 1, uT: 1000, 'µT': 1000 },
  deg: { deg: 1, '°': 1 },
  'A.m': { 'A.m': 1, 'A·m': 1 },
};

/** The unit in which a parameter is kept; its key ends in `_m`, `_s`, `_nt`, `_deg` or `_am`. */
export type QuantityUnit = 'm' | 's' | 'nT' | 'deg' | 'A.m';

export function unitsOf(unit: QuantityUnit): string[] {
  return Object.keys(SCALES[unit]);
}

/**
 * Reads a quantity: a number stands in `unit`; a string must name its unit ("25 ft", "7 in", "1.5 km", "3 rods").
 * A string without a unit is refused, since nobody can tell what it means.
 */
export function quantity(value: unknown, unit: QuantityUnit, where: string): number {
  if (typeof value === 'number' && Number.isFinite(value)) return value;
  const match = typeof value === 'string' ? /^\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(\S+)\s*$/.exec(value) : null;
  const scale = match ? SCALES[unit][match[2]!] : undefined;
  if (!match || scale === undefined) {
    throw new UserError({
      code: 'quantity_invalid', where, found: JSON.stringify(value) ?? 'nothing',
      wanted: `a number in ${unit}, or a string with one of the units ${unitsOf(unit).join(', ')}`,
    });
  }
  return Number(match[1]) * scale;
}
