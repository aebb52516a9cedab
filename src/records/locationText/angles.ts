import { angleFromParts, packedParts } from '../../geodesy/angleParts.js';
import type { Axis } from '../../geodesy/parseAngle.js';
import type { Side } from '../../geodesy/sections/types.js';
import { callAhead } from './calls.js';
import { decimalNumber, type Cursor } from './cursor.js';
import type { NumberToken, Token, WordToken } from './tokens.js';
import { isNorthSouth, LAT, LON, sideOf } from './words.js';

/** One angle as written, and what it says of itself. */
export interface AngleText {
  /** Without sign. */
  readonly deg: number;
  readonly resolutionDeg: number;
  /** Which axis its label or letter names; null where it has neither. */
  readonly axis: Axis | null;
  readonly letter: Side | null;
  readonly sign: '-' | '+' | null;
  /** A whole number and a letter, nothing else: it may be a township or a range as well. */
  readonly bare: boolean;
  readonly first: Token;
}

const WORD_MARKS: ReadonlyArray<ReadonlySet<string>> = [
  new Set(['D', 'DEG', 'DEGS', 'DEGREE', 'DEGREES']), new Set(['M', 'MIN', 'MINS', 'MINUTE', 'MINUTES']), new Set(['SEC', 'SECS', 'SECOND', 'SECONDS']),
];
const MARKS = ['°', "'", '"'];
const PART_NAMES = ['degrees', 'minutes', 'seconds'] as const;
/** An angle has at most three parts, so two of them in a row have six. */
const MOST_NUMBERS = 6;
/** A double shows 17 digits at most; what is longer is no reading. */
const LONGEST_NUMBER = 20;
/** No angle is larger; a bare number that is has its digits run together. */
const LARGEST_DEG = 180;

/** Whether an angle may begin here. */
export function startsAngle(cursor: Cursor, ahead = 0): boolean {
  const token = cursor.peek(ahead);
  if (token.kind === 'number') return true;
  if (token.kind === 'mark') return (token.text === '-' || token.text === '+') && cursor.isNumber(ahead + 1);
  if (token.kind !== 'word') return false;
  if (LAT.has(token.text) || LON.has(token.text)) return true;
  return sideOf(token.text) !== null && (cursor.isNumber(ahead + 1) || (isSign(cursor, ahead + 1) && cursor.isNumber(ahead + 2)));
}

const isSign = (cursor: Cursor, ahead: number): boolean => cursor.isMark('-', ahead) || cursor.isMark('+', ahead);

/**
 * Reads one angle: label, letter, sign, up to three numbers with marks, hyphens, colons or spaces between, letter. Numbers
 * that only spaces keep apart are shared out evenly between this angle and the next where there are four or six of them.
 * `expected` is the axis that the words around it call for.
 */
export function readAngle(cursor: Cursor, expected: Axis | null): AngleText {
  const first = cursor.peek();
  let axis = expected;
  let labelled = expected !== null;
  const label = cursor.takeWord(LAT) ? 'latitude' : cursor.takeWord(LON) ? 'longitude' : null;
  if (label !== null) {
    if (axis !== null && axis !== label) throw cursor.refuse(`a ${axis}`, { at: first });
    axis = label;
    labelled = true;
    if (!cursor.takeMark(':')) cursor.takeMark('=');
  }
  let letter = takeLetter(cursor);
  const signed = cursor.peek();
  const sign = cursor.takeMark('-') ? '-' : cursor.takeMark('+') ? '+' : null;
  const { parts, at, marked } = readParts(cursor);
  letter = closingLetter(cursor, letter);
  if (letter !== null && sign === '-') throw cursor.refuse('a sign or a hemisphere letter, not both', { at: signed });
  if (letter !== null) {
    const named: Axis = isNorthSouth(letter) ? 'latitude' : 'longitude';
    if (axis !== null && axis !== named) throw cursor.refuse(`a ${axis}, with ${axis === 'latitude' ? 'N or S' : 'E or W'}`, { at: first });
    axis = named;
    labelled = true;
  }
  const runTogether = parts.length === 1 && !marked && Number(parts[0]) > LARGEST_DEG;
  const packed = runTogether ? packedParts(parts[0]!, axis) : null;
  if (runTogether && (packed === null || !labelled)) {
    throw cursor.refuse(
      packed === null ? `${axis === null ? 'an angle' : `a ${axis}`} of at most ${axis === 'latitude' ? 90 : LARGEST_DEG} degrees, or digits that run together as DDMMSS or DDDMMSS` : 'a letter or a label beside digits that run together',
      { at: at[0]!, advice: packed === null ? 'write degrees, minutes and seconds apart' : 'write N and W, or Lat and Long: such digits could be coordinates of a projection too' },
    );
  }
  const angle = angleFromParts(packed ?? parts, axis);
  if ('wanted' in angle) throw cursor.refuse(angle.wanted, { at: at[packed ? 0 : angle.part]! });
  return { deg: angle.deg, resolutionDeg: angle.resolutionDeg, axis, letter, sign, bare: parts.length === 1 && !marked && label === null && letter !== null && /^\d{1,3}$/.test(parts[0]!), first };
}

/** A letter before a number. */
function takeLetter(cursor: Cursor): Side | null {
  const token = cursor.peek();
  const side = token.kind === 'word' ? sideOf(token.text) : null;
  if (side === null || !(cursor.isNumber(1) || (isSign(cursor, 1) && cursor.isNumber(2)))) return null;
  cursor.next();
  return side;
}

/** A letter behind the angle, unless it is the next angle's own. */
function closingLetter(cursor: Cursor, before: Side | null): Side | null {
  const token = cursor.peek();
  const side = token.kind === 'word' ? sideOf(token.text) : null;
  if (side === null) return before;
  const after = cursor.peek(1);
  const leads = after.kind === 'number' || isSign(cursor, 1);
  if (leads && (before !== null || (token.spaced && !after.spaced))) return before;
  if (before !== null) throw cursor.refuse('one hemisphere letter');
  cursor.next();
  return side;
}

interface Parts {
  readonly parts: string[];
  readonly at: Token[];
  readonly marked: boolean;
}

function readParts(cursor: Cursor): Parts {
  const parts: string[] = [];
  const at: Token[] = [];
  let marked = false;
  let wordMarks = false;
  /** How many parts a run of numbers with only spaces between gives this angle. */
  let share = 0;
  for (;;) {
    const token = cursor.peek();
    if (token.kind !== 'number') throw cursor.refuse(parts.length === 0 ? 'a number of degrees' : PART_NAMES[parts.length]!);
    const text = partText(cursor, token);
    if (share === 0) share = spacedShare(cursor);
    parts.push(text);
    at.push(token);
    cursor.next();
    const mark = takeAngleMark(cursor, parts.length, wordMarks);
    if (mark !== null) {
      marked = true;
      wordMarks ||= mark === 'word';
    }
    if (parts.length === 3 || text.includes('.') || !takeSeparator(cursor, { marked, spaced: share > parts.length })) return { parts, at, marked };
  }
}

function partText(cursor: Cursor, token: NumberToken): string {
  const number = decimalNumber(token);
  if (number === null) throw cursor.refuse('a number with at most one comma or point for its decimals');
  if (number.text.length > LONGEST_NUMBER) throw cursor.refuse(`a number of at most ${LONGEST_NUMBER} characters`);
  return number.text;
}

/** Of numbers that only spaces keep apart, how many belong to the angle that begins here: all, or half of four or six. */
function spacedShare(cursor: Cursor): number {
  if (Number(cursor.peek().text) > LARGEST_DEG) return 1;
  let count = 1;
  const goesOn = (at: number): boolean => cursor.isNumber(at) && cursor.peek(at).spaced && !callAhead(cursor, at);
  while (goesOn(count) && !decimals(cursor.peek(count - 1))) count++;
  if (count === 1) return 1;
  let run = count;
  while (goesOn(run)) run++;
  if (run <= 3) return count;
  if (run > MOST_NUMBERS || run % 2 === 1) throw cursor.refuse('as many numbers for the latitude as for the longitude', { advice: 'write a comma, a letter or marks between them' });
  return Math.min(run / 2, count);
}

const decimals = (token: Token): boolean => token.kind === 'number' && (token.text.includes('.') || token.form !== 'plain');

/** The mark behind a part; refused where it is another part's. */
function takeAngleMark(cursor: Cursor, count: number, wordMarks: boolean): 'sign' | 'word' | null {
  const token = cursor.peek();
  if (token.kind === 'mark') {
    const which = MARKS.indexOf(token.text);
    if (which < 0) return null;
    if (which !== count - 1) throw cursor.refuse(`the mark of ${PART_NAMES[count - 1]!}`);
    cursor.next();
    return 'sign';
  }
  if (token.kind !== 'word') return null;
  splitSide(cursor, token, count === 3 && wordMarks);
  return takeWordMark(cursor, cursor.peek() as WordToken, { count, wordMarks });
}

/** `30sN`, `22minN`: a side glued to the mark before it. */
function splitSide(cursor: Cursor, token: WordToken, seconds: boolean): void {
  const mark = token.text.slice(0, -1);
  if (sideOf(token.text.at(-1)!) === null || WORD_MARKS.some((words) => words.has(token.text))) return;
  if (WORD_MARKS.some((words) => words.has(mark)) || (seconds && mark === 'S')) cursor.splitWord(mark.length);
}

function takeWordMark(cursor: Cursor, token: WordToken, { count, wordMarks }: { readonly count: number; readonly wordMarks: boolean }): 'word' | null {
  if (WORD_MARKS[count - 1]!.has(token.text)) {
    cursor.next();
    return 'word';
  }
  // S closes the seconds only where letters mark the minutes; elsewhere it is south.
  if (count !== 3 || token.text !== 'S') return null;
  const unclear = { advice: 'write S for south or " for seconds, so that it reads in one way only' };
  if (wordMarks) {
    if (token.spaced) throw cursor.refuse('S for south or s for seconds, not one that can be read as either', unclear);
    cursor.next();
    return 'word';
  }
  if (cursor.text[token.start] === 's') throw cursor.refuse('S for south or s for seconds, not one that can be read as either', unclear);
  return null;
}

/** True, and on the next part, where another part of the same angle follows. */
function takeSeparator(cursor: Cursor, { marked, spaced }: { readonly marked: boolean; readonly spaced: boolean }): boolean {
  const token = cursor.peek();
  if (token.kind === 'number') {
    const degrees = cursor.isMark('°', 1) || cursor.isWord(WORD_MARKS[0]!, 1);
    return marked ? !degrees : spaced;
  }
  if (token.kind !== 'mark' || (token.text !== '-' && token.text !== ':') || !cursor.isNumber(1)) return false;
  // A hyphen with a space before it and none behind is the next angle's sign.
  if (token.text === '-' && token.spaced && !cursor.peek(1).spaced) return false;
  cursor.next();
  return true;
}
