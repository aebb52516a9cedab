import type { SectionReference } from '../../geodesy/sections/types.js';
import { isTwoOfTownship } from './aliquots.js';
import { startsCall } from './calls.js';
import { startsOffset } from './corners.js';
import { wholeNumber, type Cursor } from './cursor.js';
import type { Token } from './tokens.js';
import { AND, isNorthSouth, LOT, RANGE, SECTION, sideOf, TOWNSHIP } from './words.js';

type Writable<T> = { -readonly [K in keyof T]: T[K] };
export type ReferenceDraft = Writable<Partial<SectionReference>>;

/** A township has six by six sections. */
const MOST_SECTIONS = 36;
/**
 * Latitudes and longitudes of the United States, whole degrees: a pair like `39N 80W` within them may be either a place
 * or a township, and is refused where nothing else says which.
 */
const PLACES = { lat: [17, 72], lon: [64, 180] } as const;

/** Whether township, range or section begins here. */
export function startsReference(cursor: Cursor, draft: ReferenceDraft): boolean {
  return startsTownship(cursor) || startsRange(cursor) || startsSection(cursor, draft) || startsLot(cursor) || isCompact(cursor);
}

/** Reads the township, range, section or lot that begins here into the draft; a second one that differs is refused. */
export function readReference(cursor: Cursor, draft: ReferenceDraft): void {
  if (startsTownship(cursor)) return readTier(cursor, draft, 'township');
  if (startsRange(cursor)) return readTier(cursor, draft, 'range');
  if (startsSection(cursor, draft)) return readSection(cursor, draft);
  if (startsLot(cursor)) return readLot(cursor, draft);
  readCompact(cursor, draft);
}

/** A word and its number, with at most a hyphen or a number sign between. */
function numbered(cursor: Cursor, ahead: number): number | null {
  const at = ahead + (cursor.isMark('-', ahead) || cursor.isMark('#', ahead) || cursor.isMark(':', ahead) ? 1 : 0);
  return cursor.isNumber(at) ? at : null;
}

const startsTownship = (cursor: Cursor): boolean => cursor.isWord(TOWNSHIP) && numbered(cursor, 1) !== null;
const startsRange = (cursor: Cursor): boolean => cursor.isWord(RANGE) && numbered(cursor, 1) !== null;

function startsSection(cursor: Cursor, draft: ReferenceDraft): boolean {
  if (cursor.isWord(SECTION)) return true;
  if (cursor.peek().text === 'SECS' || cursor.peek().text === 'SECTIONS') return true;
  const township = (ahead: number): boolean => {
    const at = ahead + (cursor.isMark('-', ahead) || cursor.isMark(',', ahead) ? 1 : 0);
    return cursor.isWord(TOWNSHIP, at) && numbered(cursor, at + 1) !== null;
  };
  // S12 is section 12 only beside a township; elsewhere it is 12 degrees south, or nothing.
  if (cursor.peek().text === 'S' && cursor.peek().kind === 'word') {
    if (cursor.peek(1).text === '2' && !cursor.peek(1).spaced) return isTwoOfTownship(cursor, 0);
    const at = numbered(cursor, 1);
    return at !== null && wholeNumber(cursor.peek(at)) !== null && ((draft.township !== undefined && draft.section === undefined) || township(at + 1));
  }
  return wholeNumber(cursor.peek()) !== null && township(1);
}

function readSection(cursor: Cursor, draft: ReferenceDraft): void {
  const first = cursor.peek();
  if (first.kind === 'word') cursor.next();
  if (first.text === 'SECS' || first.text === 'SECTIONS') throw cursor.refuse('one section', { at: first });
  skipNumberSign(cursor);
  setSection(cursor, draft, cursor.next());
  if ((cursor.isMark('&') || cursor.isMark(',') || cursor.isWord(AND)) && wholeNumber(cursor.peek(1)) !== null && SECTION.has(first.text) && !moreBegins(cursor, draft)) throw cursor.refuse('one section', { at: first });
}

function setSection(cursor: Cursor, draft: ReferenceDraft, token: Token): void {
  const section = wholeNumber(token);
  if (section === null) throw cursor.refuse('the number of a section', { at: token });
  if (section < 1 || section > MOST_SECTIONS) throw cursor.refuse(`a section from 1 to ${MOST_SECTIONS}`, { at: token });
  if (draft.section !== undefined && draft.section !== section) throw cursor.refuse(`one section, not ${draft.section} and ${section}`, { at: token });
  draft.section = section;
}

function skipNumberSign(cursor: Cursor): void {
  if (!cursor.takeMark('-') && !cursor.takeMark('#') && !cursor.takeMark(':') && cursor.peek().text === 'NO') cursor.next();
}

/** `T5N`, `T-5-N`, `Township 5½ North`, `T. 5 N.`; the range likewise. */
function readTier(cursor: Cursor, draft: ReferenceDraft, which: 'township' | 'range'): void {
  cursor.next();
  skipNumberSign(cursor);
  setTier(cursor, draft, which);
  if (which === 'range') readClosingSection(cursor, draft);
}

/** `T5N-R3W-12`, `5N-3W-12`: the section behind its township. */
function readClosingSection(cursor: Cursor, draft: ReferenceDraft): void {
  if (draft.section !== undefined || !cursor.isMark('-') || wholeNumber(cursor.peek(1)) === null || cursor.peek(1).spaced !== cursor.peek().spaced) return;
  cursor.next();
  setSection(cursor, draft, cursor.next());
}

function setTier(cursor: Cursor, draft: ReferenceDraft, which: 'township' | 'range'): void {
  const token = cursor.next();
  const half = /^\d{1,3}\.5$/.test(token.text);
  const number = half ? Math.floor(Number(token.text)) : wholeNumber(token);
  const most = which === 'township' ? cursor.options.maxTownship : cursor.options.maxRange;
  if (number === null) throw cursor.refuse(`the number of a ${which}`, { at: token });
  if (number < 1 || number > most) throw cursor.refuse(`a ${which} from 1 to ${most}`, { at: token });
  const fraction = cursor.peek();
  const halfBehind = fraction.kind === 'fraction' && fraction.top === 1 && fraction.bottom === 2;
  if (halfBehind && !half) cursor.next();
  if (cursor.isMark('-')) cursor.next();
  // T5NR3WS12: the side and the next part's letter are one word to the eye of a tokeniser.
  if (/^(?:[NS]R|[EW]S)$/.test(cursor.peek().text) && cursor.isNumber(1)) cursor.splitWord(1);
  const word = cursor.peek();
  const side = word.kind === 'word' ? sideOf(word.text) : null;
  const dirs = which === 'township' ? 'N or S' : 'E or W';
  if (side === null || isNorthSouth(side) !== (which === 'township')) throw cursor.refuse(`${dirs} behind the ${which}`);
  cursor.next();
  const found: ReferenceDraft = isNorthSouth(side)
    ? { township: number, townshipDir: side as 'N' | 'S', ...(half || halfBehind ? { townshipHalf: true } : {}) }
    : { range: number, rangeDir: side as 'E' | 'W', ...(half || halfBehind ? { rangeHalf: true } : {}) };
  const before = draft[which];
  const dir = isNorthSouth(side) ? draft.townshipDir : draft.rangeDir;
  const wasHalf = isNorthSouth(side) ? draft.townshipHalf : draft.rangeHalf;
  if (before !== undefined && (before !== number || dir !== side || Boolean(wasHalf) !== (half || halfBehind))) throw cursor.refuse(`one ${which}`, { at: token });
  Object.assign(draft, found);
}

const startsLot = (cursor: Cursor): boolean => cursor.isWord(LOT);

function readLot(cursor: Cursor, draft: ReferenceDraft): void {
  const first = cursor.next();
  if (first.text.startsWith('GOV') && cursor.next().text !== 'LOT') throw cursor.refuse('a government lot and its number', { at: first });
  skipNumberSign(cursor);
  const token = cursor.next();
  if (first.text === 'LOTS' || wholeNumber(token) === null) throw cursor.refuse('one lot and its number', { at: first });
  const letter = cursor.peek();
  const suffix = letter.kind === 'word' && letter.text.length === 1 && !letter.spaced ? cursor.next().text : '';
  const lot = `${Number(token.text)}${suffix}`;
  if (draft.lot !== undefined && draft.lot !== lot) throw cursor.refuse('one lot', { at: first });
  if ((cursor.isMark('&') || cursor.isMark(',') || cursor.isWord(AND)) && wholeNumber(cursor.peek(1)) !== null && !moreBegins(cursor, draft)) throw cursor.refuse('one lot', { at: first });
  draft.lot = lot;
}

/** `Lot 3 and 660 FNL`, `Lot 3, 12-5N-3W`: the number behind the "and" or comma begins something else than another lot or section. */
function moreBegins(cursor: Cursor, draft: ReferenceDraft): boolean {
  cursor.at++;
  const begins = startsCall(cursor) || startsOffset(cursor) || isCompact(cursor) || startsSection(cursor, draft) || cursor.isNumber(1) || cursor.isMark('°', 1) || cursor.peek().text.includes('.');
  cursor.at--;
  return begins;
}

interface Compact {
  /** Tokens up to the township's number: 0, or 1 or 2 behind a section and perhaps a hyphen. */
  readonly township: number;
  readonly range: number;
  readonly townshipOnly: boolean;
}

/** `12-5N-3W`, `5N-3W`, `5N 3W`: where the numbers stand; null where this is nothing of the kind. */
function compactAt(cursor: Cursor): Compact | null {
  const hyphened = wholeNumber(cursor.peek()) !== null && cursor.isMark('-', 1) && cursor.isNumber(2);
  const lead = hyphened ? 2 : wholeNumber(cursor.peek()) !== null && cursor.isNumber(1) ? 1 : 0;
  for (const at of lead === 0 ? [0] : [lead, 0]) {
    const north = dirAfter(cursor, at);
    if (north === null || !north.northSouth) continue;
    let range = north.end;
    if (cursor.isMark('-', range) || cursor.isMark(',', range)) range++;
    const east = dirAfter(cursor, range);
    if (east === null || east.northSouth) continue;
    return { township: at, range, townshipOnly: at === 0 };
  }
  return null;
}

function likePlace(cursor: Cursor, { township, range }: { readonly township: number; readonly range: number }): boolean {
  const [lat, lon] = [Number(cursor.peek(township).text), Number(cursor.peek(range).text)];
  return lat >= PLACES.lat[0] && lat <= PLACES.lat[1] && lon >= PLACES.lon[0] && lon <= PLACES.lon[1];
}

/** A short whole number, perhaps with a half, and the side glued to it or behind a hyphen. */
function dirAfter(cursor: Cursor, at: number): { end: number; northSouth: boolean } | null {
  const token = cursor.peek(at);
  if (token.kind !== 'number' || !/^\d{1,3}(?:\.5)?$/.test(token.text)) return null;
  let end = at + 1;
  if (cursor.peek(end).kind === 'fraction') end++;
  if (cursor.isMark('-', end)) end++;
  const word = cursor.peek(end);
  const side = word.kind === 'word' && (!word.spaced || end > at + 1) ? sideOf(word.text) : null;
  return side === null ? null : { end: end + 1, northSouth: isNorthSouth(side) };
}

const isCompact = (cursor: Cursor): boolean => compactAt(cursor) !== null;

function readCompact(cursor: Cursor, draft: ReferenceDraft): void {
  const { township, range, townshipOnly } = compactAt(cursor)!;
  const first = cursor.peek();
  const placeLike = likePlace(cursor, { township, range });
  const behind = cursor.at + range;
  if (!townshipOnly) {
    setSection(cursor, draft, cursor.next());
    cursor.takeMark('-');
  }
  setTier(cursor, draft, 'township');
  while (cursor.at < behind) cursor.next();
  setTier(cursor, draft, 'range');
  readClosingSection(cursor, draft);
  const namesSection = cursor.tokens.some((token) => token.kind === 'word' && SECTION.has(token.text));
  // 12 39N 80W may be 12°39' N, 80° W as well.
  if (placeLike && !namesSection && (draft.section === undefined || township === 1)) {
    throw cursor.refuse('a township and range, or a latitude and longitude, not what can be read as either', { at: first, advice: 'write T and R before a township and range, decimals or degree signs for a place' });
  }
}
