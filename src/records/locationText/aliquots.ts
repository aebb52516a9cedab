import type { AliquotStep, Side } from '../../geodesy/sections/types.js';
import type { Cursor } from './cursor.js';
import { isSectionTwo } from './sectionTwo.js';
import { AND, HALF, isNorthSouth, LOT, OF, QUARTER, quarterOf, sideOf, THE } from './words.js';

interface Unit {
  /** In the order written, smallest first. */
  readonly steps: readonly AliquotStep[];
  /** Tokens that it takes. */
  readonly count: number;
}

/** A quarter of a quarter of a quarter of a quarter is 2.5 acres; nobody names a smaller part. */
const MOST_STEPS = 4;

/** Whether a part of a section may begin here. */
export function startsAliquot(cursor: Cursor, ahead = 0): boolean {
  return aliquotAt(cursor, ahead) !== null;
}

/**
 * Reads a part of a section as it is written, smallest part first: `NE/4 SW/4`, `S½ of the NW¼`, `NESW`, `NE 1/4 of SW
 * 1/4`, `N2 SE`. Returns the steps from the whole inwards. A comma or an "and" between parts is refused: the first can
 * mean a list as well as a part of a part, the second two parts.
 */
export function readAliquot(cursor: Cursor): AliquotStep[] {
  const first = cursor.peek();
  const written: AliquotStep[] = [];
  for (;;) {
    const unit = aliquotAt(cursor, 0)!;
    written.push(...unit.steps);
    if (written.length > MOST_STEPS) throw cursor.refuse(`a part of at most ${MOST_STEPS} steps`, { at: first });
    cursor.at += unit.count;
    const gap = connector(cursor);
    // NENE-NWNE: two parts rather than a part of a part.
    if (gap === 1 && unit.steps.length > 1 && aliquotAt(cursor, gap)!.steps.length > 1) throw cursor.refuse('one part of a section');
    if (gap === null) {
      if (cursor.isWord(OF) && cursor.isWord(LOT, cursor.isWord(THE, 1) ? 2 : 1)) throw cursor.refuse('a part of a section: what part of a lot is, its plat alone tells', { at: first });
      return written.toReversed();
    }
    cursor.at += gap;
  }
}

/** Tokens between one part and the part that it belongs to: `of the`, a hyphen, a slash, or none; null where none follows. */
function connector(cursor: Cursor): number | null {
  let gap = 0;
  const list = cursor.isMark(',') || cursor.isMark(';') || cursor.isMark('&') || cursor.isWord(AND);
  if (list) {
    if (startsAliquot(cursor, 1) && sideOf(cursor.peek(1).text) === null) {
      throw cursor.refuse('one part of a section', { advice: 'write "of" between a part and the part that it belongs to, as in NE/4 of SW/4' });
    }
    return null;
  }
  if (cursor.isMark('-') || cursor.isMark('/')) gap = 1;
  else if (cursor.isWord(OF)) gap = cursor.isWord(THE, 1) ? 2 : 1;
  return startsAliquot(cursor, gap) ? gap : null;
}

function aliquotAt(cursor: Cursor, ahead: number): Unit | null {
  const token = cursor.peek(ahead);
  if (token.kind !== 'word') return null;
  const quarter = quarterOf(token.text);
  if (quarter !== null) {
    const count = 1 + markerLength(cursor, ahead + 1, 4);
    return isCornerWord(cursor, ahead + count) ? null : { steps: [quarter], count };
  }
  const run = quarterRun(token.text);
  if (run !== null) return { steps: run, count: 1 + markerLength(cursor, ahead + 1, 4) };
  const side = sideOf(token.text);
  return side === null ? null : halfAt(cursor, ahead, side) ?? spelledApart(cursor, ahead, side);
}

/** `COR`, `CORNER` and `/c` make a corner of what would be a quarter. */
export function isCornerWord(cursor: Cursor, ahead: number): boolean {
  const word = cursor.isMark('/', ahead) ? cursor.peek(ahead + 1) : cursor.peek(ahead);
  if (word.kind !== 'word') return false;
  return word.text.startsWith('COR') || word.text.startsWith('CRN') || (cursor.isMark('/', ahead) && word.text === 'C');
}

/** `NESW`: quarters written together. */
function quarterRun(word: string): AliquotStep[] | null {
  if (word.length % 2 === 1 || word.length > 2 * MOST_STEPS) return null;
  const steps: AliquotStep[] = [];
  for (let i = 0; i < word.length; i += 2) {
    const quarter = word.slice(i, i + 2);
    if (quarter !== 'NE' && quarter !== 'NW' && quarter !== 'SE' && quarter !== 'SW') return null;
    steps.push(quarter);
  }
  return steps;
}

export function isQuarterRun(word: string): boolean {
  return quarterRun(word) !== null;
}

function halfAt(cursor: Cursor, ahead: number, side: Side): Unit | null {
  const count = markerLength(cursor, ahead + 1, 2);
  return count === 0 || isTwoOfTownship(cursor, ahead) ? null : { steps: [`${side}2`], count: 1 + count };
}

/** Whether `S2` is section 2; before another part it is a half whatever else the text says. */
export function isTwoOfTownship(cursor: Cursor, ahead: number): boolean {
  if (cursor.peek(ahead).text !== 'S' || cursor.peek(ahead + 1).text !== '2') return false;
  const gap = cursor.isWord(OF, ahead + 2) ? (cursor.isWord(THE, ahead + 3) ? 4 : 3) : cursor.isMark('-', ahead + 2) ? 3 : 2;
  return !startsAliquot(cursor, ahead + gap) && isSectionTwo(cursor, ahead);
}

/** `north east quarter`, where only "quarter" makes it one part and not two sides. */
function spelledApart(cursor: Cursor, ahead: number, side: Side): Unit | null {
  const token = cursor.peek(ahead + 1);
  const across = token.kind === 'word' ? sideOf(token.text) : null;
  if (across === null || !isNorthSouth(side) || isNorthSouth(across)) return null;
  const count = markerLength(cursor, ahead + 2, 4);
  if (count === 0 || isCornerWord(cursor, ahead + 2 + count)) return null;
  return { steps: [quarterOf(side + across)!], count: 2 + count };
}

/** Tokens that say quarter (4) or half (2): `/4`, `¼`, `1/4`, `quarter`, or the bare figure without a space; 0 where none does. */
export function markerLength(cursor: Cursor, ahead: number, bottom: 2 | 4): number {
  const token = cursor.peek(ahead);
  if (token.kind === 'fraction') return token.top === 1 && token.bottom === bottom ? 1 : 0;
  if (token.kind === 'word') return (bottom === 4 ? QUARTER : HALF).has(token.text) ? 1 : 0;
  if (cursor.isMark('/', ahead) || cursor.isMark('-', ahead)) {
    const next = cursor.peek(ahead + 1);
    if (cursor.isMark('-', ahead)) return next.kind === 'word' && (bottom === 4 ? QUARTER : HALF).has(next.text) ? 2 : 0;
    return next.kind === 'number' && next.text === String(bottom) ? 2 : 0;
  }
  return token.kind === 'number' && token.text === String(bottom) && !token.spaced && !cursor.isMark('°', ahead + 1) ? 1 : 0;
}
