import { meridianCode, meridianName } from '../../geodesy/sections/principalMeridians.js';
import type { Cursor } from './cursor.js';

/** Abbreviations of principal meridians in use on permits (common practice), by code. */
const ABBREVIATIONS: Readonly<Record<string, string>> = {
  WM: '33', MDM: '21', MDBM: '21', SBM: '27', SBBM: '27', NMPM: '23', IM: '17', SLM: '26', SLBM: '26', SLPM: '26', GSRM: '14', GSRBM: '14',
  USM: '30', USBM: '30', UPM: '30', CM: '11', BHM: '07', WRM: '34', MPM: '20', PMM: '20',
};
const ORDINALS: ReadonlySet<string> = new Set(['FIRST', 'SECOND', 'THIRD', 'FOURTH', 'FIFTH', 'SIXTH']);
const ENDINGS: ReadonlySet<string> = new Set(['PM', 'PMER', 'MERIDIAN', 'MER', 'PRINCIPAL', 'PRIN', 'BM']);
/** Words that a meridian's name begins with: most words of a location are none, and need not be looked up. */
const FIRST_WORDS: ReadonlySet<string> = new Set((
  'FIRST SECOND THIRD FOURTH FIFTH SIXTH BLACK BOISE CHICKASAW CHOCTAW CIMARRON COPPER FAIRBANKS GILA HUMBOLDT HUNTSVILLE INDIAN LOUISIANA MICHIGAN '
  + 'MONTANA PRINCIPAL MOUNT MT NAVAJO NEW ST SAINT SALT SAN SEWARD TALLAHASSEE UINTAH UINTA UTE WASHINGTON WILLAMETTE WIND KATEEL UMIAT'
).split(' '));
/** The longest name has four words: "gila and salt river". */
const MOST_WORDS = 4;

/**
 * Reads a principal meridian: an abbreviation (`WM`), a name (`Willamette`, `Mt. Diablo Meridian`), or an ordinal with
 * `PM` or `Meridian` behind it (`6th P.M.`). Returns its usual name; null, and the cursor where it was, where none stands here.
 */
export function readMeridian(cursor: Cursor): string | null {
  const from = cursor.at;
  const code = codeHere(cursor);
  const known = code === null ? null : meridianName(code);
  if (known === null) {
    cursor.at = from;
    return null;
  }
  return known;
}

function codeHere(cursor: Cursor): string | null {
  const token = cursor.peek();
  if (token.kind === 'number') return ordinal(cursor);
  if (token.kind !== 'word') return null;
  if (Object.hasOwn(ABBREVIATIONS, token.text)) {
    cursor.next();
    return ABBREVIATIONS[token.text]!;
  }
  if (token.text === 'MDB' && cursor.isMark('&', 1)) return joined(cursor, 'M', '21');
  if (token.text === 'SB' && cursor.isMark('&', 1)) return joined(cursor, 'M', '27');
  if (!FIRST_WORDS.has(token.text)) return null;
  for (let count = MOST_WORDS; count >= 1; count--) {
    const words = wordsAhead(cursor, count);
    if (words === null || ENDINGS.has(words.at(-1)!)) continue;
    const code = meridianCode(words.join(' '));
    if (code === null) continue;
    cursor.at += count;
    const ended = takeEnding(cursor);
    return ended || !needsEnding(words) ? code : null;
  }
  return null;
}

/** States and numbers are meridians only where the text says so. */
function needsEnding(words: readonly string[]): boolean {
  return ORDINALS.has(words[0]!) || ['WASHINGTON', 'MONTANA', 'LOUISIANA', 'MICHIGAN', 'NEW', 'INDIAN', 'PRINCIPAL'].includes(words[0]!);
}

function joined(cursor: Cursor, last: string, code: string): string | null {
  if (cursor.peek(2).text !== last) return null;
  cursor.at += 3;
  return code;
}

/** `6th PM`, where the ordinal's letters are glued to its figure. */
function ordinal(cursor: Cursor): string | null {
  const [figure, letters] = [cursor.peek(), cursor.peek(1)];
  if (!/^[1-6]$/.test(figure.text) || letters.spaced || !['ST', 'ND', 'RD', 'TH'].includes(letters.text)) return null;
  cursor.at += 2;
  return takeEnding(cursor) ? figure.text.padStart(2, '0') : null;
}

function takeEnding(cursor: Cursor): boolean {
  let taken = false;
  while (cursor.takeWord(ENDINGS) !== null) taken = true;
  return taken;
}

function wordsAhead(cursor: Cursor, count: number): string[] | null {
  const words: string[] = [];
  for (let i = 0; i < count; i++) {
    const token = cursor.peek(i);
    if (token.kind === 'word') words.push(token.text);
    else if (token.kind === 'mark' && token.text === '&' && i > 0) words.push('&');
    else return null;
  }
  return words;
}
