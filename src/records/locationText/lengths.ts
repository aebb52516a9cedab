import { US_SURVEY_FOOT_M } from '../../units.js';
import { groupedNumber, type Cursor } from './cursor.js';
import { isNumberWord, spelledNumber } from './spelledNumber.js';
import type { LengthUnitName } from './types.js';
import { UNITED } from './words.js';

export interface Length {
  readonly m: number;
  /** Size of the last digit or fraction written, metres. */
  readonly resolutionM: number;
}

/** Metres per unit of an old call: feet, rods, chains, links and miles of the land survey, in US survey feet. */
export const LENGTH_UNIT_M: Readonly<Record<LengthUnitName | 'in' | 'yd' | 'mi', number>> = {
  ft: US_SURVEY_FOOT_M, rod: 16.5 * US_SURVEY_FOOT_M, chain: 66 * US_SURVEY_FOOT_M, link: 0.66 * US_SURVEY_FOOT_M,
  in: US_SURVEY_FOOT_M / 12, yd: 3 * US_SURVEY_FOOT_M, mi: 5280 * US_SURVEY_FOOT_M, m: 1,
};
const UNIT_WORDS: ReadonlyMap<string, number> = new Map([
  ...['FT', 'FEET', 'FOOT', 'FTUS', 'USFT'].map((word) => [word, LENGTH_UNIT_M.ft] as const),
  ...['RD', 'RDS', 'ROD', 'RODS', 'POLE', 'POLES', 'PERCH', 'PERCHES'].map((word) => [word, LENGTH_UNIT_M.rod] as const),
  ...['CH', 'CHS', 'CHAIN', 'CHAINS'].map((word) => [word, LENGTH_UNIT_M.chain] as const),
  ...['LK', 'LKS', 'LINK', 'LINKS'].map((word) => [word, LENGTH_UNIT_M.link] as const),
  ...['INCH', 'INCHES'].map((word) => [word, LENGTH_UNIT_M.in] as const),
  ...['YD', 'YDS', 'YARD', 'YARDS'].map((word) => [word, LENGTH_UNIT_M.yd] as const),
  ...['MI', 'MILE', 'MILES'].map((word) => [word, LENGTH_UNIT_M.mi] as const),
  ...['M', 'METER', 'METERS', 'METRE', 'METRES'].map((word) => [word, 1] as const),
]);

interface Unit {
  readonly m: number;
  /** Tokens that it takes. */
  readonly count: number;
}

/** The unit that stands here; null where none does. */
function unitAt(cursor: Cursor, ahead: number): Unit | null {
  const token = cursor.peek(ahead);
  if (token.kind === 'mark') return token.text === "'" ? { m: LENGTH_UNIT_M.ft, count: 1 } : token.text === '"' ? { m: LENGTH_UNIT_M.in, count: 1 } : null;
  if (token.kind !== 'word') return null;
  const m = UNIT_WORDS.get(token.text);
  if (m !== undefined) return { m, count: 1 };
  if (!UNITED.has(token.text)) return null;
  const survey = cursor.peek(ahead + 1).text === 'SURVEY' ? 1 : 0;
  const foot = cursor.peek(ahead + 1 + survey);
  return foot.kind === 'word' && UNIT_WORDS.get(foot.text) === LENGTH_UNIT_M.ft ? { m: LENGTH_UNIT_M.ft, count: 2 + survey } : null;
}

/** Tokens up to the end of a length that begins here, and whether it names its unit; null where none begins. */
export function lengthAhead(cursor: Cursor, ahead = 0): { readonly end: number; readonly unit: boolean } | null {
  const number = numberAhead(cursor, ahead);
  if (number === null) return null;
  let at: number = number;
  let unit = false;
  for (;;) {
    const found = unitAt(cursor, at);
    if (found === null) return { end: at, unit };
    unit = true;
    at += found.count;
    const more: number | null = cursor.isNumber(at) ? numberAhead(cursor, at) : null;
    const smaller = more === null ? null : unitAt(cursor, more);
    if (smaller === null || !isSmaller(smaller, found)) return { end: at, unit };
    at = more!;
  }
}

/** Chains and links, rods and feet, feet and inches make one length; metres and survey units do not. */
function isSmaller(unit: Unit, than: Unit): boolean {
  return unit.m < than.m && unit.m !== LENGTH_UNIT_M.m && than.m !== LENGTH_UNIT_M.m;
}

function numberAhead(cursor: Cursor, ahead: number): number | null {
  let at = ahead;
  const token = cursor.peek(at);
  if (token.kind === 'number') {
    at++;
    if (cursor.isMark('-', at) && cursor.peek(at + 1).kind === 'fraction') at++;
    if (cursor.peek(at).kind === 'fraction') at++;
  } else if (token.kind === 'fraction') {
    at++;
  } else if (token.kind === 'word' && isNumberWord(token.text)) {
    while (isNumberWord(cursor.peek(at).text) || ((cursor.isMark('-', at) || cursor.peek(at).text === 'AND') && isNumberWord(cursor.peek(at + 1).text))) at++;
  } else {
    return null;
  }
  return cursor.isMark('(', at) && cursor.isNumber(at + 1) && cursor.isMark(')', at + 2) ? at + 3 : at;
}

/**
 * Reads a length: a number in digits, with a fraction, or in words (perhaps repeated in digits: `six hundred sixty (660)
 * feet`), and its unit, perhaps with a smaller one behind it (`10 chains 25 links`). `bareUnitM` is what a number without a
 * unit counts in; null refuses one.
 */
export function readLength(cursor: Cursor, bareUnitM: number | null): Length {
  const first = cursor.peek();
  let total: Length = { m: 0, resolutionM: 0 };
  let larger: Unit | null = null;
  for (;;) {
    const at = cursor.peek();
    const { value, resolution } = readNumber(cursor);
    const unit = unitAt(cursor, 0);
    const m = unit?.m ?? bareUnitM;
    if (m === null) throw cursor.refuse('a unit of length: feet, rods, chains, links, miles or metres', { advice: 'write it behind the number, or state the unit of the column' });
    if (larger !== null && value * m >= larger.m) throw cursor.refuse('a smaller part that does not fill one of the larger unit', { at });
    for (let i = 0; i < (unit?.count ?? 0); i++) cursor.next();
    total = { m: total.m + value * m, resolutionM: resolution * m };
    const more = unit !== null && cursor.isNumber() ? numberAhead(cursor, 0) : null;
    const smaller = more === null ? null : unitAt(cursor, more);
    if (unit === null || smaller === null || !isSmaller(smaller, unit)) break;
    larger = unit;
  }
  if (!(total.m <= LONGEST_M)) throw cursor.refuse('a length that a land record can mean', { at: first });
  return total;
}

/** Distances reach across a map at most, and the sides of a 15-minute map are up to 28 km long. */
const LONGEST_M = 30_000;

function readNumber(cursor: Cursor): { value: number; resolution: number } {
  const token = cursor.peek();
  if (token.kind === 'word') return inWords(cursor);
  if (token.kind === 'fraction') {
    cursor.next();
    return { value: token.top / token.bottom, resolution: 1 / token.bottom };
  }
  if (token.kind !== 'number') throw cursor.refuse('a length');
  const number = groupedNumber(token);
  if (number === null) throw cursor.refuse('a length whose comma groups three digits', { advice: 'write decimals behind a point' });
  cursor.next();
  const joined = cursor.isMark('-') ? cursor.peek(1) : cursor.peek();
  if (joined.kind !== 'fraction') return number;
  if (number.resolution !== 1) throw cursor.refuse('a fraction behind a whole number', { at: joined });
  cursor.takeMark('-');
  cursor.next();
  return { value: number.value + joined.top / joined.bottom, resolution: 1 / joined.bottom };
}

function inWords(cursor: Cursor): { value: number; resolution: number } {
  const first = cursor.peek();
  const value = spelledNumber(cursor);
  const repeated = cursor.isMark('(') ? cursor.peek(1) : null;
  if (repeated?.kind === 'number' && cursor.isMark(')', 2)) {
    if (groupedNumber(repeated)?.value !== value) throw cursor.refuse(`the same number in digits as in words, ${value}`, { at: repeated, advice: `the words begin with ${JSON.stringify(first.text)}` });
    for (let i = 0; i < 3; i++) cursor.next();
  }
  return { value, resolution: 1 };
}
