import type { Cursor } from './cursor.js';
import { wholeNumber } from './cursor.js';
import { SECTION, sideOf, TOWNSHIP } from './words.js';

/**
 * Whether `S2` under the cursor is section 2 and not the south half: beside a township, where no other section is named.
 * Without a township nobody means a section by it.
 */
export function isSectionTwo(cursor: Cursor, ahead: number): boolean {
  const [letter, figure] = [cursor.peek(ahead), cursor.peek(ahead + 1)];
  if (letter.text !== 'S' || letter.kind !== 'word' || figure.kind !== 'number' || figure.text !== '2' || figure.spaced) return false;
  let township = false;
  for (let i = 0; i < cursor.tokens.length; i++) {
    const token = cursor.tokens[i]!;
    const next = cursor.tokens[i + 1] ?? token;
    if (token.kind === 'word') {
      // Behind a number "sec" is seconds, and S glued to one is its side.
      const behind = cursor.tokens[i - 1]?.kind === 'number';
      const seconds = behind && cursor.tokens[i - 2]?.text !== 'S';
      if (SECTION.has(token.text) && !seconds) return false;
      const number = wholeNumber(next);
      if (token.text === 'S' && number !== null && number !== 2 && !(behind && !token.spaced)) return false;
      if (TOWNSHIP.has(token.text) && (number !== null || next.kind === 'mark')) township = true;
      // R3W-12: the section behind its township.
      if (isSide(cursor, i) && next.kind === 'mark' && next.text === '-' && wholeNumber(cursor.tokens[i + 2] ?? token) !== null) return false;
    } else if (token.kind === 'number' && isSide(cursor, i + 1)) {
      const before = cursor.tokens[i - 1];
      // 12-5N-3W: the section before its township.
      if (before?.kind === 'mark' && before.text === '-' && cursor.tokens[i - 2]?.kind === 'number') return false;
      township = true;
    }
  }
  return township;
}

function isSide(cursor: Cursor, index: number): boolean {
  const token = cursor.tokens[index];
  return token !== undefined && token.kind === 'word' && sideOf(token.text) !== null && token.text.length === 1;
}
