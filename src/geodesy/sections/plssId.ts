/** A township of the public land survey, as a PLSSID names it. */
export interface PlssTownship {
  /** Postal letters of the state. */
  readonly state: string;
  /** Code of the principal meridian, two digits. */
  readonly meridian: string;
  readonly township: number;
  /** Quarters of a township over the whole number: 0, 1, 2 (a half township) or 3. */
  readonly townshipQuarters: number;
  readonly townshipDir: 'N' | 'S';
  readonly range: number;
  readonly rangeQuarters: number;
  readonly rangeDir: 'E' | 'W';
  /** `0`, or a letter or digit that tells townships of one name apart. */
  readonly duplicate: string;
}

/**
 * Reads a PLSSID: `OR330350S0290E0` is state OR, meridian 33 (Willamette), township 35 with fraction 0, south, range 29
 * with fraction 0, east, duplicate code 0. Null for anything else.
 * Source: FGDC Cadastral Subcommittee, PLSS CadNSDI (2012), the township identifier; fractions in quarters from memory.
 */
export function parsePlssId(text: string): PlssTownship | null {
  const match = /^([A-Z]{2})(\d{2})(\d{3})([0-3])([NS])(\d{3})([0-3])([EW])([0-9A-Z])$/.exec(text.trim().toUpperCase());
  if (!match) return null;
  const [, state, meridian, township, townshipQuarters, townshipDir, range, rangeQuarters, rangeDir, duplicate] = match as unknown as string[];
  return {
    state: state!, meridian: meridian!, township: Number(township), townshipQuarters: Number(townshipQuarters), townshipDir: townshipDir as 'N' | 'S',
    range: Number(range), rangeQuarters: Number(rangeQuarters), rangeDir: rangeDir as 'E' | 'W', duplicate: duplicate!,
  };
}
