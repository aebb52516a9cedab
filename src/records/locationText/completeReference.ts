import { UserError } from '../../errors.js';
import type { SectionReference } from '../../geodesy/sections/types.js';

const NAMES: ReadonlyArray<readonly [key: keyof SectionReference, name: string]> = [
  ['section', 'section'], ['township', 'township'], ['townshipDir', 'side of the township'], ['townshipHalf', 'half township'],
  ['range', 'range'], ['rangeDir', 'side of the range'], ['rangeHalf', 'half range'], ['meridian', 'principal meridian'], ['lot', 'lot'],
];

/**
 * Puts together what a location text and other columns of its record say of a section. Throws UserError `position_invalid`
 * where the two disagree, or where section, township or range is still missing.
 */
export function completeReference(said: Partial<SectionReference>, columns: Partial<SectionReference>, where: string): SectionReference {
  for (const [key, name] of NAMES) {
    const [one, two] = [said[key], columns[key]];
    if (one !== undefined && two !== undefined && one !== two) {
      throw new UserError({ code: 'position_invalid', where, found: `${name} ${one} in the location and ${two} in its own column`, wanted: `one ${name}` });
    }
  }
  const { section, township, townshipDir, range, rangeDir, ...rest } = { ...columns, ...said };
  if (section === undefined || township === undefined || townshipDir === undefined || range === undefined || rangeDir === undefined) {
    const missing = [['section', section], ['township', township ?? townshipDir], ['range', range ?? rangeDir]].filter(([, value]) => value === undefined).map(([name]) => name);
    throw new UserError({
      code: 'position_invalid', where, found: `a location without its ${missing.join(' and ') || 'directions'}`, wanted: 'section, township and range with their directions, as in Sec 12-T5N-R3W',
      advice: 'write them in the location or map the columns that have them',
    });
  }
  return { section, township, townshipDir, range, rangeDir, ...rest };
}
