import { UserError } from '../errors.js';
import type { Datum } from '../geodesy/types.js';
import { datumWord } from './datumWord.js';
import type { DateRule } from './recordSource.js';

/** Datum that the rules give a map; null where none applies. */
export interface DatedDatum {
  readonly datum: Datum | 'unknown' | null;
  /** What has to be said of it: a date that cannot be read, or one that a rule's day falls into. */
  readonly note: string;
}

const DAY = /^(\d{4})-(\d{2})-(\d{2})$/;
const NONE: DatedDatum = Object.freeze({ datum: null, note: '' });

/**
 * The datum of a map by its date: the first rule whose day lies after it. A date that can be read to the year or month only
 * stands for all of its days; where a rule's day falls among them nobody can tell, and the datum is `unknown`. Without a
 * readable date no rule counts. Throws UserError `key_invalid` for a rule that is none.
 */
export function datumByDate(text: string, rules: readonly DateRule[], where: string): DatedDatum {
  if (rules.length === 0) return NONE;
  const read = rules.map((rule, i) => readRule(rule, `${where}[${i}]`));
  if (text === '') return NONE;
  const span = mapDate(text);
  if (span === null) return { datum: null, note: `map date "${text}" not read, as it is neither 1962, 1962-05, 1962-05-31 nor 5/31/1962` };
  for (const { before, datum } of read) {
    if (before === null || span.last < before) return { datum, note: '' };
    if (span.first < before) return { datum: 'unknown', note: `map date "${text}" does not say whether it is before ${before}` };
  }
  return NONE;
}

function readRule(rule: DateRule, where: string): { before: string | null; datum: Datum | 'unknown' } {
  const datum = datumWord(rule.datum);
  if (datum === null) throw new UserError({ code: 'datum_unknown', where, found: `"${rule.datum}"`, wanted: 'NAD27, NAD83, NAD83(2011), WGS 84 or unknown' });
  if (rule.before !== undefined && (!DAY.test(rule.before) || mapDate(rule.before) === null)) {
    throw new UserError({ code: 'key_invalid', where: `${where}.before`, found: `"${rule.before}"`, wanted: 'a day as in "1986-01-01"' });
  }
  return { before: rule.before ?? null, datum };
}

/** First and last day, ISO 8601, that a date may be; null for what is no date. Month and day stand in the American order. */
export function mapDate(text: string): { readonly first: string; readonly last: string } | null {
  const iso = /^(\d{4})(?:-(\d{1,2})(?:-(\d{1,2})(?:T.*)?)?)?$/.exec(text);
  if (iso) return span(iso[1]!, iso[2], iso[3]);
  const american = /^(\d{1,2})[/-](?:(\d{1,2})[/-])?(\d{4})$/.exec(text);
  return american ? span(american[3]!, american[1], american[2]) : null;
}

function span(year: string, month: string | undefined, day: string | undefined): { first: string; last: string } | null {
  const m = month === undefined ? null : Number(month);
  if (m !== null && (m < 1 || m > 12)) return null;
  const days = m === null ? 31 : daysIn(Number(year), m);
  const d = day === undefined ? null : Number(day);
  if (d !== null && (d < 1 || d > days)) return null;
  const two = (value: number): string => String(value).padStart(2, '0');
  return { first: `${year}-${two(m ?? 1)}-${two(d ?? 1)}`, last: `${year}-${two(m ?? 12)}-${two(d ?? days)}` };
}

function daysIn(year: number, month: number): number {
  const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
  return month === 2 ? (leap ? 29 : 28) : [4, 6, 9, 11].includes(month) ? 30 : 31;
}
