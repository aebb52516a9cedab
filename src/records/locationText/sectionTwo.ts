import type { Cursor } from './cursor.js';
import { wholeNumber } from './cursor.js';
import type { Token } from './tokens.js';
import { RANGE, SECTION, sideOf, TOWNSHIP } from './words.js';

/**
 * Whether `S2` is section 2 and not the south half: where it stands next to a township or range, and the text names no
 * other section. Everywhere else nobody means a section by it.
 */
export function isSectionTwo(cursor: Cursor, ahead: number): boolean {
  const at = cursor.at + ahead;
  const { tokens } = cursor;
  return word(tokens[at], 'S') && tokens[at + 1]?.text === '2' && !tokens[at + 1]!.spaced && (beforeTownship(tokens, at + 2) || behindRange(tokens, at - 1)) && !namesSection(tokens);
}

const word = (token: Token | undefined, text: string): boolean => token?.kind === 'word' && token.text === text;
const mark = (token: Token | undefined, text: string): boolean => token?.kind === 'mark' && token.text === text;
const isWhole = (token: Token | undefined): boolean => token !== undefined && wholeNumber(token) !== null;
const isOneOf = (token: Token | undefined, words: ReadonlySet<string>): boolean => token?.kind === 'word' && words.has(token.text);
const isSide = (token: Token | undefined, sides: string): boolean => token?.kind === 'word' && sides.includes(sideOf(token.text) ?? '-');

function beforeTownship(tokens: readonly Token[], from: number): boolean {
  const at = mark(tokens[from], ',') || mark(tokens[from], '-') ? from + 1 : from;
  if (isOneOf(tokens[at], TOWNSHIP)) return isWhole(tokens[at + 1]) || isWhole(tokens[at + 2]) || tokens[at + 1]?.kind === 'number';
  return isCompact(tokens, at);
}

/** `R3W` before it, or the range of `5N-3W`. */
function behindRange(tokens: readonly Token[], from: number): boolean {
  const at = mark(tokens[from], ',') || mark(tokens[from], '-') ? from - 1 : from;
  if (!isSide(tokens[at], 'EW')) return false;
  for (let i = at - 1; i >= Math.max(0, at - 4); i--) {
    if (isOneOf(tokens[i], RANGE)) return true;
    if (tokens[i]?.kind === 'word') return isSide(tokens[i], 'NS') && tokens[i - 1]?.kind === 'number';
  }
  return false;
}

/** `5N-3W`, `5N 3W`. */
function isCompact(tokens: readonly Token[], at: number): boolean {
  if (!isWhole(tokens[at]) || !isSide(tokens[at + 1], 'NS')) return false;
  const range = mark(tokens[at + 2], '-') || mark(tokens[at + 2], ',') ? at + 3 : at + 2;
  return isWhole(tokens[range]) && isSide(tokens[range + 1], 'EW');
}

/** A section by its word, by S and another number than 2, or joined to its township by a hyphen. */
function namesSection(tokens: readonly Token[]): boolean {
  return tokens.some((token, i) => {
    const before = tokens[i - 1];
    if (isOneOf(token, SECTION)) return !(before?.kind === 'number' && !isSide(tokens[i - 2], 'NSEW'));
    if (word(token, 'S')) return isWhole(tokens[i + 1]) && tokens[i + 1]!.text !== '2' && !(before?.kind === 'number' && !token.spaced);
    if (!mark(token, '-')) return false;
    if (isSide(before, 'EW') && isWhole(tokens[i + 1])) return !isSide(tokens[i + 2], 'NSEW');
    return isWhole(before) && (isCompact(tokens, i + 1) || (isOneOf(tokens[i + 1], TOWNSHIP) && tokens[i - 2]?.text !== 'S'));
  });
}
