import type { Side } from '../../geodesy/sections/types.js';
import type { Cursor } from './cursor.js';
import { lengthAhead, LENGTH_UNIT_M, readLength, type Length } from './lengths.js';
import { AND, FROM, LINE, OF, sideOf, THE } from './words.js';

export interface CallText extends Length {
  readonly from: Side;
}

/** The side of `FNL`, `FSL`, `FEL`, `FWL`. */
function fromLine(word: string): Side | null {
  return word.length === 3 && word[0] === 'F' && word[2] === 'L' ? sideOf(word[1]!) : null;
}

/** The side of `NL`, `SL`, `EL`, `WL`. */
function lineOf(word: string): Side | null {
  return word.length === 2 && word[1] === 'L' ? sideOf(word[0]!) : null;
}

/** Tokens and side of `N line`, `NL`, `N/L`, or of a bare side; `line` tells whether it says line. */
function sideAhead(cursor: Cursor, ahead: number): { side: Side; end: number; line: boolean } | null {
  const token = cursor.peek(ahead);
  if (token.kind !== 'word') return null;
  const joined = lineOf(token.text);
  if (joined !== null) return { side: joined, end: ahead + 1, line: true };
  const side = sideOf(token.text);
  if (side === null) return null;
  const slash = cursor.isMark('/', ahead + 1) ? 1 : 0;
  return cursor.isWord(LINE, ahead + 1 + slash) ? { side, end: ahead + 2 + slash, line: true } : { side, end: ahead + 1, line: false };
}

type Opening = { readonly way: 'joined' | 'f' | 'from' | 'line' | 'off'; readonly at: number };

/** How the line of a call is named behind its length, and where; null where no call follows. */
function openingAhead(cursor: Cursor, ahead: number): Opening | null {
  const token = cursor.peek(ahead);
  if (token.kind !== 'word') return null;
  if (fromLine(token.text) !== null) return { way: 'joined', at: ahead };
  if (token.text === 'F') {
    const at = ahead + (cursor.isMark('/', ahead + 1) ? 2 : 1);
    return sideAhead(cursor, at) ? { way: 'f', at } : null;
  }
  if (FROM.has(token.text)) {
    const at = ahead + (cursor.isWord(THE, ahead + 1) ? 2 : 1);
    return sideAhead(cursor, at) ? { way: 'from', at } : null;
  }
  const side = sideAhead(cursor, ahead);
  if (side === null) return null;
  if (side.line) return { way: 'line', at: ahead };
  // 660' S of the N line.
  if (!cursor.isWord(OF, side.end) && !cursor.isWord(FROM, side.end)) return null;
  const at = side.end + (cursor.isWord(THE, side.end + 1) ? 2 : 1);
  return sideAhead(cursor, at)?.line ? { way: 'off', at } : null;
}

const OPPOSITE: Readonly<Record<Side, Side>> = { N: 'S', S: 'N', E: 'W', W: 'E' };

/** Whether a length and the line of its call begin so many tokens on. */
export function callAhead(cursor: Cursor, ahead: number): boolean {
  const length = lengthAhead(cursor, ahead);
  return length !== null && openingAhead(cursor, length.end) !== null;
}

/** Whether a footage call begins here, with its length or, as in `FNL 660`, with its line. */
export function startsCall(cursor: Cursor): boolean {
  const length = lengthAhead(cursor);
  if (length !== null) return openingAhead(cursor, length.end) !== null;
  const opening = openingAhead(cursor, 0);
  if (opening === null || opening.way === 'line' || opening.way === 'off') return false;
  return lengthAhead(cursor, lineEnd(cursor, opening)) !== null;
}

/** `FNL: 660`, `FNL=660`, `FNL-660`. */
const isGap = (cursor: Cursor, ahead: number): boolean => cursor.isMark(':', ahead) || cursor.isMark('=', ahead) || cursor.isMark('-', ahead);

function lineEnd(cursor: Cursor, opening: Opening): number {
  const side = opening.way === 'joined' ? null : sideAhead(cursor, opening.at)!;
  const end = side === null ? opening.at + 1 : side.line ? side.end : side.end + (cursor.isWord(LINE, side.end) ? 1 : 0);
  return isGap(cursor, end) ? end + 1 : end;
}

/**
 * Reads one call, or two of one length (`660' from N & E lines`). A length without a unit counts in feet where `F` says so
 * (`660 FNL`), else in the option's unit.
 */
export function readCall(cursor: Cursor): CallText[] {
  const behind = lengthAhead(cursor);
  if (behind === null) {
    const opening = openingAhead(cursor, 0)!;
    const [side] = readSides(cursor, opening, false);
    if (isGap(cursor, 0)) cursor.next();
    return [{ ...readLength(cursor, bareUnit(cursor, opening)), from: side! }];
  }
  const opening = openingAhead(cursor, behind.end)!;
  const length = readLength(cursor, bareUnit(cursor, opening));
  const toward = opening.way === 'off' ? sideOf(cursor.peek().text) : null;
  const line = sideAhead(cursor, opening.at - behind.end);
  if (toward !== null && line !== null && toward !== OPPOSITE[line.side]) throw cursor.refuse('a way from the line into the section, as in 660 ft S of the north line');
  return readSides(cursor, { ...opening, at: opening.at - behind.end }, true).map((from) => ({ ...length, from }));
}

function bareUnit(cursor: Cursor, { way }: Opening): number | null {
  if (way === 'joined' || way === 'f') return LENGTH_UNIT_M.ft;
  const { bareLengthUnit } = cursor.options;
  return bareLengthUnit === null ? null : LENGTH_UNIT_M[bareLengthUnit];
}

function readSides(cursor: Cursor, opening: Opening, several: boolean): Side[] {
  cursor.at += opening.at;
  if (opening.way === 'joined') return joinedSides(cursor, several);
  const first = sideAhead(cursor, 0)!;
  cursor.at += first.end;
  const sides = [first.side];
  const joint = cursor.isMark('&') || cursor.isWord(AND);
  if (several && joint) {
    const at = cursor.isWord(THE, 1) ? 2 : 1;
    const second = sideAhead(cursor, at);
    if (second !== null && second.line) {
      sides.push(second.side);
      cursor.at += second.end;
    }
  }
  cursor.takeWord(LINE);
  return sides;
}

/** `FNL`, or `FNL & FEL` of one length. */
function joinedSides(cursor: Cursor, several: boolean): Side[] {
  const sides = [fromLine(cursor.next().text)!];
  const second = several && (cursor.isMark('&') || cursor.isWord(AND)) ? fromLine(cursor.peek(1).text) : null;
  // FNL & FEL 1980 begins a call of its own.
  if (second === null || lengthAhead(cursor, 2) !== null) return sides;
  cursor.at += 2;
  return [...sides, second];
}
