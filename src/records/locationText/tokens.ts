/** How a number groups its digits; `either` has one comma before three digits: `1,980` feet, or `39,345` degrees. */
export type NumberForm = 'plain' | 'thousands' | 'comma' | 'either';

interface Place {
  /** First character and the one after the last, in the text. */
  readonly start: number;
  readonly end: number;
  /** White space stands before it. */
  readonly spaced: boolean;
}

export interface NumberToken extends Place {
  readonly kind: 'number';
  /** As written, without what it does not need: `1,980.50`. */
  readonly text: string;
  readonly form: NumberForm;
}

export interface FractionToken extends Place {
  readonly kind: 'fraction';
  readonly text: string;
  readonly top: number;
  readonly bottom: number;
}

/** Letters in upper case, without the dots of an abbreviation (`N.E.` is `NE`, `Sec.` is `SEC`), or one other character. */
export interface WordToken extends Place {
  readonly kind: 'word' | 'mark';
  readonly text: string;
}

export interface EndToken extends Place {
  readonly kind: 'end';
  readonly text: '';
}

export type Token = NumberToken | FractionToken | WordToken | EndToken;

/** Fractions that land records use; anything else with a slash is no fraction. */
const BOTTOMS: ReadonlySet<string> = new Set(['2', '3', '4', '8', '16']);
const FRACTION_SIGNS: Readonly<Record<string, readonly [number, number]>> = {
  '½': [1, 2], '¼': [1, 4], '¾': [3, 4], '⅓': [1, 3], '⅔': [2, 3], '⅛': [1, 8], '⅜': [3, 8], '⅝': [5, 8], '⅞': [7, 8],
};
/** One spelling for the many signs that stand for minus, degrees, minutes, seconds and the slash; each is one character. */
const SIGNS: Readonly<Record<string, string>> = {
  '\u2212': '-', '\u2010': '-', '\u2011': '-', '\u2012': '-', '\u2013': '-', '\u2014': '-', '\uFE63': '-', '\uFF0D': '-',
  '\u00BA': '°', '\u02DA': '°', '\u2218': '°',
  '\u2033': '"', '\u201C': '"', '\u201D': '"', '\u02BA': '"', '\u201F': '"',
  '\u2032': "'", '\u2018': "'", '\u2019': "'", '\u02B9': "'", '\u00B4': "'", '`': "'",
  '\u2044': '/', '\u2215': '/',
};

/** A comma groups three digits, behind at most three. */
const GROUP = 3;
const MOST_LEADING = 3;

const isDigit = (code: number): boolean => code >= 48 && code <= 57;
const isLetter = (code: number): boolean => (code >= 65 && code <= 90) || (code >= 97 && code <= 122);
const isSpace = (code: number): boolean =>
  code === 32 || (code >= 9 && code <= 13) || code === 0xA0 || (code >= 0x2000 && code <= 0x200A) || code === 0x202F || code === 0x3000;

/** Cuts a text into numbers, fractions, words and marks. It never refuses: a character that nobody knows is a mark. */
export function tokens(text: string): Token[] {
  const found: Token[] = [];
  let at = 0;
  let spaced = true;
  while (at < text.length) {
    const code = text.charCodeAt(at);
    if (isSpace(code)) {
      spaced = true;
      at++;
      continue;
    }
    const token = isDigit(code) || (code === 46 && isDigit(text.charCodeAt(at + 1))) ? numeral(text, at, spaced)
      : isLetter(code) ? word(text, at, spaced) : mark(text, at, spaced);
    found.push(token);
    at = token.end;
    spaced = false;
  }
  found.push({ kind: 'end', text: '', start: text.length, end: text.length, spaced });
  return found;
}

function digitsEnd(text: string, from: number): number {
  let at = from;
  while (isDigit(text.charCodeAt(at))) at++;
  return at;
}

function numeral(text: string, start: number, spaced: boolean): Token {
  let end = digitsEnd(text, start);
  const slash = SIGNS[text[end]!] ?? text[end];
  if (slash === '/') {
    const bottomEnd = digitsEnd(text, end + 1);
    const [top, bottom] = [text.slice(start, end), text.slice(end + 1, bottomEnd)];
    if (BOTTOMS.has(bottom) && Number(top) > 0 && Number(top) < Number(bottom)) {
      return { kind: 'fraction', text: `${top}/${bottom}`, top: Number(top), bottom: Number(bottom), start, end: bottomEnd, spaced };
    }
  }
  let form: NumberForm = 'plain';
  let groups = 0;
  // A comma with a digit on both sides belongs to the number; the groups of three tell what it is for.
  if (end > start && text.charCodeAt(end) === 44 && isDigit(text.charCodeAt(end + 1))) {
    let at = end;
    if (end - start <= MOST_LEADING) {
      while (text.charCodeAt(at) === 44 && digitsEnd(text, at + 1) - at === GROUP + 1) {
        at += GROUP + 1;
        groups++;
      }
    }
    if (groups > 0) {
      form = groups === 1 ? 'either' : 'thousands';
      end = at;
    } else {
      form = 'comma';
      end = digitsEnd(text, end + 1);
    }
  }
  if (form !== 'comma' && text.charCodeAt(end) === 46 && (end > start || isDigit(text.charCodeAt(end + 1)))) {
    end = digitsEnd(text, end + 1);
    if (form === 'either') form = 'thousands';
  }
  return { kind: 'number', text: text.slice(start, end), form, start, end, spaced };
}

function word(text: string, start: number, spaced: boolean): WordToken {
  let end = start + 1;
  while (isLetter(text.charCodeAt(end))) end++;
  let letters = text.slice(start, end);
  if (end === start + 1) {
    // Single letters with dots between them are one abbreviation.
    while (text.charCodeAt(end) === 46 && isLetter(text.charCodeAt(end + 1)) && !isLetter(text.charCodeAt(end + 2))) {
      letters += text[end + 1]!;
      end += 2;
    }
  }
  if (text.charCodeAt(end) === 46) end++;
  return { kind: 'word', text: letters.toUpperCase(), start, end, spaced };
}

function mark(text: string, start: number, spaced: boolean): Token {
  const sign = text[start]!;
  const fraction = FRACTION_SIGNS[sign];
  if (fraction) return { kind: 'fraction', text: `${fraction[0]}/${fraction[1]}`, top: fraction[0], bottom: fraction[1], start, end: start + 1, spaced };
  const plain = SIGNS[sign] ?? sign;
  // Two primes make one double prime.
  if (plain === "'" && (SIGNS[text[start + 1]!] ?? text[start + 1]) === "'") return { kind: 'mark', text: '"', start, end: start + 2, spaced };
  return { kind: 'mark', text: plain, start, end: start + 1, spaced };
}
