import type { UserError } from '../../errors.js';
import type { Cursor } from './cursor.js';

const UNITS = ['ZERO', 'ONE', 'TWO', 'THREE', 'FOUR', 'FIVE', 'SIX', 'SEVEN', 'EIGHT', 'NINE', 'TEN', 'ELEVEN', 'TWELVE', 'THIRTEEN', 'FOURTEEN', 'FIFTEEN', 'SIXTEEN', 'SEVENTEEN', 'EIGHTEEN', 'NINETEEN'];
const TENS = ['TWENTY', 'THIRTY', 'FORTY', 'FIFTY', 'SIXTY', 'SEVENTY', 'EIGHTY', 'NINETY'];
const VALUES: ReadonlyMap<string, number> = new Map([
  ...UNITS.map((word, value) => [word, value] as const), ...TENS.map((word, i) => [word, 20 + 10 * i] as const),
  ['FOURTY', 40], ['HUNDRED', 100], ['THOUSAND', 1000],
]);

export function isNumberWord(text: string): boolean {
  return VALUES.has(text);
}

/**
 * A whole number in words: `six hundred and sixty`, `nineteen hundred eighty`, `twenty-five`. The cursor stands on its
 * first word and is left behind its last. Refused where the words do not make one number (`six sixty`).
 */
export function spelledNumber(cursor: Cursor): number {
  let thousands = 0;
  let value = 0;
  /** What the next word has to be smaller than: a ten leaves room for one unit, a hundred for anything below it. */
  let room = Number.POSITIVE_INFINITY;
  let scaled = false;
  for (let first = true; ; first = false) {
    const token = cursor.peek();
    const word = token.kind === 'word' ? VALUES.get(token.text) : undefined;
    if (word === undefined) {
      const joins = !first && (cursor.isMark('-') || (token.kind === 'word' && token.text === 'AND' && room >= 100));
      const after = cursor.peek(1);
      if (joins && after.kind === 'word' && VALUES.has(after.text) && VALUES.get(after.text)! < 100) {
        cursor.next();
        continue;
      }
      return thousands + value;
    }
    const wrong = (): UserError => cursor.refuse('words that make one number, as in six hundred sixty', { at: token, advice: 'write it in digits' });
    if (word === 1000) {
      if (thousands > 0 || value === 0) throw wrong();
      [thousands, value, room, scaled] = [value * 1000, 0, 1000, false];
    } else if (word === 100) {
      if (scaled || value === 0 || value > 99) throw wrong();
      [value, room, scaled] = [value * 100, 100, true];
    } else {
      if (word >= room || (word === 0 && !first)) throw wrong();
      value += word;
      room = word >= 20 ? 10 : 1;
    }
    cursor.next();
  }
}
