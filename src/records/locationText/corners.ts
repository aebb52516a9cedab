import type { Side } from '../../geodesy/sections/types.js';
import { isCornerWord, markerLength } from './aliquots.js';
import type { Cursor } from './cursor.js';
import { lengthAhead, LENGTH_UNIT_M, readLength } from './lengths.js';
import type { CornerName, CornerOffset } from './types.js';
import { AND, CENTRE, FROM, isNorthSouth, LAT, LON, OF, quarterOf, sideOf, THE } from './words.js';

/** Whether a distance towards a side begins here, as in `40 rods N of` or `N 40 rods and E 20 rods from`. */
export function startsOffset(cursor: Cursor): boolean {
  const length = lengthAhead(cursor);
  if (length !== null) return sideAt(cursor, length.end) !== null && (offsetGoesOn(cursor, length.end + 1) || (length.unit && isDegrees(cursor, length.end + 1)));
  if (sideAt(cursor, 0) === null) return false;
  const behind = lengthAhead(cursor, 1);
  return behind !== null && behind.unit && !cursor.isMark('°', 2) && offsetGoesOn(cursor, behind.end);
}

/** What may follow a distance and its side: the corner or parallel it starts from, or another distance. */
function offsetGoesOn(cursor: Cursor, ahead: number): boolean {
  if (cursor.isWord(OF, ahead) || cursor.isWord(FROM, ahead) || cursor.isWord(LAT, ahead) || cursor.isWord(LON, ahead)) return true;
  const gap = cursor.isWord(AND, ahead) || cursor.isMark('&', ahead) || cursor.isMark(',', ahead) ? 1 : 0;
  const length = lengthAhead(cursor, ahead + gap);
  if (length !== null) return sideAt(cursor, length.end) !== null && endsInOf(cursor, length.end + 1);
  const behind = sideAt(cursor, ahead + gap) === null ? null : lengthAhead(cursor, ahead + gap + 1);
  return behind !== null && behind.unit && endsInOf(cursor, behind.end);
}

/** `5,400' S. 39°22'30"`: the parallel without a word before it. */
const isDegrees = (cursor: Cursor, ahead: number): boolean => cursor.isNumber(ahead) && cursor.isMark('°', ahead + 1);

const endsInOf = (cursor: Cursor, ahead: number): boolean => cursor.isWord(OF, ahead) || cursor.isWord(FROM, ahead);

function sideAt(cursor: Cursor, ahead: number): Side | null {
  const token = cursor.peek(ahead);
  return token.kind === 'word' ? sideOf(token.text) : null;
}

/** Reads one or two distances, each with its side, up to and with the `of` or `from` behind them. */
export function readOffsets(cursor: Cursor): CornerOffset[] {
  const offsets: CornerOffset[] = [];
  for (;;) {
    const first = cursor.peek();
    const before = lengthAhead(cursor) === null ? sideOf(cursor.next().text) : null;
    const { bareLengthUnit } = cursor.options;
    const { m, resolutionM } = readLength(cursor, bareLengthUnit === null ? null : LENGTH_UNIT_M[bareLengthUnit]);
    const toward = before ?? sideOf(cursor.next().text)!;
    if (offsets.some((offset) => isNorthSouth(offset.toward) === isNorthSouth(toward))) throw cursor.refuse('one distance north or south and one east or west', { at: first });
    offsets.push({ distanceM: m, resolutionM, toward });
    if (cursor.takeWord(OF) !== null || cursor.takeWord(FROM) !== null) break;
    if (cursor.isWord(LAT) || cursor.isWord(LON) || isDegrees(cursor, 0)) break;
    if (!cursor.takeMark('&') && !cursor.takeMark(',')) cursor.takeWord(AND);
    if (offsets.length === 2 || (lengthAhead(cursor) === null && sideAt(cursor, 0) === null)) throw cursor.refuse('"of" or "from" and the corner that the distances start from');
  }
  cursor.takeWord(THE);
  return offsets;
}

/** Reads the name of a corner; null, and the cursor where it was, where there is none. */
export function readCorner(cursor: Cursor): CornerName | null {
  const token = cursor.peek();
  if (token.kind !== 'word') return null;
  if (CENTRE.has(token.text)) {
    cursor.next();
    return 'C';
  }
  const quarter = quarterOf(token.text);
  const side = sideOf(token.text);
  const across = side !== null && isNorthSouth(side) ? sideAt(cursor, 1) : null;
  const apart = across !== null && !isNorthSouth(across) ? quarterOf(side! + across) : null;
  const name: CornerName | null = quarter ?? apart ?? (side === null ? null : `${side}4`);
  if (name === null) return null;
  let count = apart !== null && quarter === null ? 2 : 1;
  const marker = markerLength(cursor, count, 4);
  // A side alone is no corner: only its quarter corner is.
  if (name.endsWith('4') && marker === 0) return null;
  if (name.endsWith('4')) count += marker;
  if (!isCornerWord(cursor, count)) return null;
  cursor.at += count + (cursor.isMark('/', count) ? 2 : 1);
  return name;
}

/** Whether a way towards `toward` from a corner leads into what it is a corner of, or along its lines. */
export function leadsInside(corner: CornerName, toward: Side): boolean {
  if (corner === 'C') return true;
  if (corner.endsWith('4')) return corner[0] !== toward;
  return !corner.includes(toward);
}
