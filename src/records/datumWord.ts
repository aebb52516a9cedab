import type { Datum } from '../geodesy/types.js';

/** Spellings of a datum, lower case, without spaces, hyphens, dots, slashes and underscores. */
const WORDS: Readonly<Record<string, Datum>> = {
  nad27: 'NAD27', nad1927: 'NAD27', '27': 'NAD27', '1927': 'NAD27', northamericandatum1927: 'NAD27', northamericandatumof1927: 'NAD27',
  nad83: 'NAD83', nad1983: 'NAD83', '83': 'NAD83', '1983': 'NAD83', 'nad83(1986)': 'NAD83', northamericandatum1983: 'NAD83', northamericandatumof1983: 'NAD83',
  'nad83(2011)': 'NAD83(2011)', nad832011: 'NAD83(2011)', 'nad1983(2011)': 'NAD83(2011)', nad19832011: 'NAD83(2011)',
  wgs84: 'WGS 84', wgs1984: 'WGS 84', worldgeodeticsystem1984: 'WGS 84',
};

/** Words that say that nobody knows; a blank cell says the same. */
const UNKNOWN = new Set(['', 'unknown', 'unk', 'u', '?', 'na', 'none', 'null', 'notstated', 'notrecorded', 'notgiven']);

/**
 * The datum that a cell or a key names; `unknown` where it is blank or says so; null where it is a word that nobody
 * knows, which the caller has to refuse.
 */
export function datumWord(text: string): Datum | 'unknown' | null {
  const word = text.toLowerCase().replace(/[\s\-./_]+/g, '');
  if (UNKNOWN.has(word)) return 'unknown';
  return Object.hasOwn(WORDS, word) ? WORDS[word]! : null;
}
