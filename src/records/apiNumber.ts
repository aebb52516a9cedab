import { UserError } from '../errors.js';
import { apiStates, type ApiState } from './apiCounties.js';

/** An API well number in its parts. */
export interface ApiNumber {
  /** `3705901234`: state, county and well. It is the same for every hole and event of a well. */
  readonly well: string;
  readonly state: string;
  readonly county: string;
  /** Number of the well in its county. */
  readonly unique: string;
  /** Directional sidetrack and event sequence, two digits each; null where the number does not go so far. */
  readonly sidetrack: string | null;
  readonly event: string | null;
  /** The number as the standard writes it: `37-059-01234-00-00`. */
  readonly text: string;
  /** The state's entry in the table, null for a number that is not in it. */
  readonly known: ApiState | null;
  /** What the table does not know or cannot check; nothing of it makes the number wrong. */
  readonly remarks: readonly string[];
}

export interface ApiNumberOptions {
  /** State of a file whose numbers leave it out (`059-01234`), two digits; null refuses such a number. */
  readonly state: string | null;
}

export const API_NUMBER_DEFAULTS: ApiNumberOptions = Object.freeze({ state: null });

/** Digits of county and well alone. */
const STATELESS = 8;
/** `API`, `API No.`, `API #`, `US Well Number` before the number. */
const LABEL = /^(?:a\.?\s?p\.?\s?i\.?|us\s*well|uwi)?\s*(?:well\s*)?(?:number|num|no\b\.?|nbr|#)?\s*[:=#]?\s*/i;
const HYPHENS = /[\u2010-\u2015\u2212\uFE63\uFF0D]/g;
/** State, county, well, sidetrack, event. Each part but the last two has to be there. */
const LENGTHS = [2, 3, 5, 2, 2];
const TOTALS: ReadonlySet<number> = new Set([10, 12, 14]);
/** A spreadsheet that takes a number for a quantity drops its leading zero; so these counts are one digit short of a right one. */
const ZERO_LOST: ReadonlySet<number> = new Set([9, 11, 13]);
const WANTED = 'an API well number of 10, 12 or 14 digits, as in 37-059-01234';

/**
 * Reads an API well number: 10, 12 or 14 digits run together, or state, county, well, sidetrack and event with hyphens,
 * spaces, dots, slashes or underscores between; county and well alone where the options name the state. Where marks stand between, each part has to have its length. A state or
 * county that the table does not have is a remark, not a mistake. Throws UserError `value_invalid` for what is no such number.
 *
 * Source: API Bulletin D12A; PPDM Association, "The US Well Number Standard".
 */
export function parseApiNumber(text: string, where: string, options: Partial<ApiNumberOptions> = {}): ApiNumber {
  const { state: stateOf } = { ...API_NUMBER_DEFAULTS, ...options };
  const body = text.trim().replace(HYPHENS, '-').replace(LABEL, '');
  const refuse = (wanted: string, advice?: string): UserError =>
    new UserError({ code: 'value_invalid', where, found: text.trim() === '' ? 'no API number' : JSON.stringify(text), wanted, ...(advice ? { advice } : {}) });
  if (!/^\d[\d\s\-./_]*$/.test(body)) throw refuse(WANTED);
  const groups = body.split(/[\s\-./_]+/).filter((group) => group !== '');
  if (stateOf !== null && groups.join('').length === STATELESS) groups.unshift(stateOf);
  const digits = groups.join('');
  if (!TOTALS.has(digits.length)) {
    throw refuse(WANTED, ZERO_LOST.has(digits.length) ? `it has ${digits.length} digits: where a leading zero was lost, write it, and keep the column as text` : `it has ${digits.length} digits`);
  }
  if (groups.length > 1 && !partsFit(groups)) throw refuse(WANTED, 'the marks stand between other digits than state, county, well, sidetrack and event');
  const parts = cut(digits);
  const [state, county, unique, sidetrack = null, event = null] = parts as [string, string, string, string?, string?];
  const known = apiStates().get(state) ?? null;
  return { well: state + county + unique, state, county, unique, sidetrack, event, text: parts.join('-'), known, remarks: remarksOf(state, county, { unique, known }) };
}

/** Whether the groups join to whole parts: `37 05901234` does, `370 5901234` does not. */
function partsFit(groups: readonly string[]): boolean {
  const ends = new Set<number>();
  let end = 0;
  for (const length of LENGTHS) ends.add(end += length);
  let at = 0;
  return groups.every((group) => ends.has(at += group.length));
}

function cut(digits: string): string[] {
  const parts: string[] = [];
  let at = 0;
  for (const length of LENGTHS) {
    if (at >= digits.length) break;
    parts.push(digits.slice(at, at + length));
    at += length;
  }
  return parts;
}

function remarksOf(state: string, county: string, { unique, known }: { readonly unique: string; readonly known: ApiState | null }): string[] {
  const remarks: string[] = [];
  if (known === null) remarks.push(`state ${state} is not in the table of API state codes`);
  else if (known.counties === null) remarks.push(`county ${county} was not checked: the table has no areas of the ${known.name}`);
  else if (!known.counties.has(Number(county))) remarks.push(`county ${county} is not in the table for ${known.name} (${state})`);
  if (Number(unique) === 0) remarks.push(`well ${unique} names no well of the county`);
  return remarks;
}
