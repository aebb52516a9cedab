import { UserError } from '../../errors.js';
import { tokens, type NumberToken, type Token } from './tokens.js';
import type { LocationTextOptions } from './types.js';

/** A place in the list of tokens; the parts of the grammar move it on, or refuse the text at it. */
export class Cursor {
  readonly tokens: Token[];
  at = 0;

  constructor(readonly text: string, readonly where: string, readonly options: LocationTextOptions) {
    this.tokens = tokens(text);
  }

  /** The token so many places on; the end, past it. */
  peek(ahead = 0): Token {
    return this.tokens[this.at + ahead] ?? this.tokens[this.tokens.length - 1]!;
  }

  next(): Token {
    const token = this.peek();
    if (token.kind !== 'end') this.at++;
    return token;
  }

  /** Whether the token before the cursor is one of these kinds. */
  follows(...kinds: ReadonlyArray<Token['kind']>): boolean {
    return this.at > 0 && kinds.includes(this.tokens[this.at - 1]!.kind);
  }

  get atEnd(): boolean {
    return this.peek().kind === 'end';
  }

  /** True, and one token on, where the token is this mark. */
  takeMark(text: string): boolean {
    if (!this.isMark(text)) return false;
    this.at++;
    return true;
  }

  isMark(text: string, ahead = 0): boolean {
    const token = this.peek(ahead);
    return token.kind === 'mark' && token.text === text;
  }

  isWord(words: ReadonlySet<string>, ahead = 0): boolean {
    const token = this.peek(ahead);
    return token.kind === 'word' && words.has(token.text);
  }

  /** The word, and one token on, where it is one of these. */
  takeWord(words: ReadonlySet<string>): string | null {
    if (!this.isWord(words)) return null;
    return this.next().text;
  }

  /** Cuts the word under the cursor in two behind so many letters: `sN` is the mark of the seconds and a side. */
  splitWord(letters: number): void {
    const word = this.peek();
    if (word.kind !== 'word') throw new Error(`no word to split at ${this.at}`);
    const cut = word.start + letters;
    this.tokens.splice(this.at, 1, { ...word, text: word.text.slice(0, letters), end: cut }, { ...word, text: word.text.slice(letters), start: cut, spaced: false });
  }

  isNumber(ahead = 0): boolean {
    return this.peek(ahead).kind === 'number';
  }

  /** The text, what in it is at fault, and what was expected there. `at` is the token at fault, else the one under the cursor. */
  refuse(wanted: string, { at = this.peek(), advice }: { readonly at?: Token; readonly advice?: string } = {}): UserError {
    const quoted = JSON.stringify(this.text.length <= SHOWN ? this.text : `${this.text.slice(0, SHOWN)}…`);
    const spot = at.kind === 'end' ? 'its end' : `${JSON.stringify(this.text.slice(at.start, at.end))} (character ${at.start + 1})`;
    return new UserError({
      code: 'position_invalid', where: this.where,
      found: this.text.trim() === '' ? 'no text' : `${quoted}, at ${spot}`, wanted, ...(advice ? { advice } : {}),
    });
  }
}

/** Characters of a text that a message quotes. */
const SHOWN = 120;

/** A whole number without sign or decimals (`5`, `012`), else null. */
export function wholeNumber(token: Token): number | null {
  return token.kind === 'number' && token.form === 'plain' && /^\d{1,6}$/.test(token.text) ? Number(token.text) : null;
}

/** Value and size of the last digit, commas taken for thousands; null where a comma cannot be that. */
export function groupedNumber(token: NumberToken): { value: number; resolution: number } | null {
  if (token.form === 'comma') return null;
  return decimal(token.text.replaceAll(',', ''));
}

/** Value and size of the last digit, a comma taken for the decimal point; null where there are more of them. */
export function decimalNumber(token: NumberToken): { value: number; resolution: number; text: string } | null {
  if (token.form === 'thousands') return null;
  const text = token.text.replace(',', '.');
  const { value, resolution } = decimal(text);
  return { value, resolution, text };
}

function decimal(text: string): { value: number; resolution: number } {
  const point = text.indexOf('.');
  return { value: Number(text), resolution: point < 0 ? 1 : powerOfTen(text.length - point - 1) };
}

const POWERS = Array.from({ length: 20 }, (_, decimals) => Number(`1e-${decimals}`));

function powerOfTen(decimals: number): number {
  return POWERS[decimals] ?? Number(`1e-${decimals}`);
}
