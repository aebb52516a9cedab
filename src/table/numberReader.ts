import { UserError } from '../errors.js';
import { decodeText } from './decodeText.js';
import { numberFromText } from './numberColumn.js';
import { delimiterOf } from './parseCsv.js';

const LINE_FEED = 10;
const RETURN = 13;
const SPACE = 32;
const QUOTE = 34;
const PLUS = 43;
const MINUS = 45;
const POINT = 46;
const ZERO = 48;
/** Up to here digits make an exact integer, and powers of ten are exact too: then one division is rounded once, as Number() does. */
const EXACT_INTEGER = 2 ** 53;
const EXACT_POWER = 22;
const POWERS = Float64Array.from({ length: EXACT_POWER + 1 }, (_, n) => Number(`1e${n}`));
const FIRST_ROWS = 1 << 16;
/** Room beyond what the rows so far let expect. */
const SPARE_SHARE = 1.02;

export interface NumberColumns {
  readonly rows: number;
  /** In the order in which the names were given. */
  readonly columns: readonly Float64Array[];
}

/**
 * Columns of numbers of a CSV file as its bytes come, without a string for each cell: for files of millions of readings.
 * The values are those of `parseCsv` and `numberColumn`, and so are the complaints. UTF-8 without line breaks inside
 * cells; columns that are not asked for may hold anything.
 */
export class NumberReader {
  readonly #names: readonly string[];
  readonly #source: string;
  readonly #allowEmpty: boolean;
  readonly #bytes: number;
  /** Bytes of whole lines before those at hand. */
  #seen = 0;
  #columns: Float64Array[];
  /** Which of the columns a cell of a row goes to, −1 for none; empty before the header. */
  #targets: Int32Array = new Int32Array(0);
  #delimiter = 0;
  #rows = 0;
  /** Bytes of a line that is not complete. */
  #rest: Uint8Array = new Uint8Array(0);

  /** `bytes`: size of the whole text, where it is known; then columns need not grow step by step. */
  constructor(names: readonly string[], { source, allowEmpty = false, bytes = 0 }: { source: string; allowEmpty?: boolean; bytes?: number }) {
    this.#names = names;
    this.#source = source;
    this.#allowEmpty = allowEmpty;
    this.#bytes = bytes;
    this.#columns = names.map(() => new Float64Array(FIRST_ROWS));
  }

  /** The next bytes of the file; they may be used again afterwards. */
  push(bytes: Uint8Array): void {
    let piece = bytes;
    if (this.#rest.length > 0) {
      piece = new Uint8Array(this.#rest.length + bytes.length);
      piece.set(this.#rest);
      piece.set(bytes, this.#rest.length);
    }
    // A line may end in a carriage return alone; with a line feed after it both are one end, which blank lines make harmless.
    const end = Math.max(piece.lastIndexOf(LINE_FEED), piece.lastIndexOf(RETURN)) + 1;
    this.#rest = piece.slice(end);
    if (end > 0) this.#lines(piece.subarray(0, end));
  }

  /** All rows; the file has ended. */
  end(): NumberColumns {
    if (this.#rest.length > 0) {
      const last = new Uint8Array(this.#rest.length + 1);
      last.set(this.#rest);
      last[this.#rest.length] = LINE_FEED;
      this.#rest = new Uint8Array(0);
      this.#lines(last);
    }
    if (this.#targets.length === 0) throw this.#empty('no text', 'a header row and rows of values');
    if (this.#rows === 0) throw this.#empty('a header and no rows', 'at least one row of values');
    return { rows: this.#rows, columns: this.#columns.map((column) => column.subarray(0, this.#rows)) };
  }

  #empty(found: string, wanted: string): UserError {
    return new UserError({ code: 'file_empty', where: this.#source, found, wanted });
  }

  /** Whole lines, the last with its end. */
  #lines(bytes: Uint8Array): void {
    let at = this.#targets.length === 0 ? this.#header(bytes) : 0;
    while (at < bytes.length) {
      const blank = blankUntil(bytes, at);
      if (blank > at) at = blank;
      else at = this.#row(bytes, at);
    }
    this.#seen += bytes.length;
  }

  #grow(seen: number): void {
    const rows = this.#rows;
    const room = Math.max(rows + (rows >> 1), Math.ceil((SPARE_SHARE * rows * this.#bytes) / seen));
    this.#columns = this.#columns.map((column) => larger(column, room));
  }

  #header(bytes: Uint8Array): number {
    let from = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
    for (let next = blankUntil(bytes, from); next > from; next = blankUntil(bytes, from)) from = next;
    if (from >= bytes.length) return from;
    let end = from;
    while (bytes[end] !== LINE_FEED && bytes[end] !== RETURN) end++;
    const { text } = decodeText(bytes.subarray(from, end), this.#source);
    const delimiter = delimiterOf(text);
    this.#delimiter = delimiter.charCodeAt(0);
    const header = splitQuoted(text, delimiter).map((name) => name.trim());
    for (const name of this.#names) {
      const times = header.filter((other) => other === name).length;
      if (times === 1) continue;
      throw new UserError({
        code: times === 0 ? 'column_missing' : 'file_unreadable', where: `${this.#source}, header`,
        found: times === 0 ? `the columns ${header.join(', ')}` : `the column name ${name} twice`, wanted: times === 0 ? `a column ${name}` : 'every name once',
      });
    }
    this.#targets = Int32Array.from(header, (name) => this.#names.indexOf(name));
    return end;
  }

  #row(bytes: Uint8Array, from: number): number {
    const targets = this.#targets;
    const delimiter = this.#delimiter;
    const row = this.#rows;
    if (row === this.#columns[0]?.length) this.#grow(this.#seen + from);
    let at = from;
    for (let c = 0; ; c++) {
      if (c === targets.length) throw this.#ragged(bytes, from);
      const target = targets[c]!;
      let end = at;
      if (target < 0) {
        end = cellEnd(bytes, at, delimiter);
      } else {
        // Blanks, sign, digits, point, digits; whatever else there is goes the long way.
        let code = bytes[end]!;
        while (code === SPACE) code = bytes[++end]!;
        const negative = code === MINUS;
        if (negative || code === PLUS) code = bytes[++end]!;
        let digits = 0;
        let decimals = 0;
        const first = end;
        while (code >= ZERO && code < ZERO + 10) {
          digits = digits * 10 + (code - ZERO);
          code = bytes[++end]!;
        }
        let count = end - first;
        if (code === POINT) {
          const point = end;
          code = bytes[++end]!;
          while (code >= ZERO && code < ZERO + 10) {
            digits = digits * 10 + (code - ZERO);
            code = bytes[++end]!;
          }
          decimals = end - point - 1;
          count += decimals;
        }
        const closed = code === delimiter || code === LINE_FEED || code === RETURN;
        if (closed && count > 0 && digits < EXACT_INTEGER && decimals <= EXACT_POWER) {
          const value = digits / POWERS[decimals]!;
          this.#columns[target]![row] = negative ? -value : value;
        } else {
          end = cellEnd(bytes, at, delimiter);
          this.#columns[target]![row] = this.#slowly(bytes.subarray(at, end), target);
        }
      }
      if (bytes[end] !== delimiter) {
        if (c + 1 < targets.length) throw this.#ragged(bytes, from);
        this.#rows++;
        return end;
      }
      at = end + 1;
    }
  }

  #slowly(cell: Uint8Array, target: number): number {
    const where = `${this.#source}, row ${this.#rows + 1}, column ${this.#names[target]}`;
    return numberFromText(unquoted(decodeText(cell, this.#source).text), { where, allowEmpty: this.#allowEmpty });
  }

  #ragged(bytes: Uint8Array, from: number): UserError {
    let cells = 0;
    for (let at = from; ; at++) {
      cells++;
      at = cellEnd(bytes, at, this.#delimiter);
      if (bytes[at] !== this.#delimiter) break;
    }
    return new UserError({
      code: 'file_unreadable', where: `${this.#source}, row ${this.#rows + 1}`, found: `${cells} ${cells === 1 ? 'cell' : 'cells'}`,
      wanted: `${this.#targets.length}, as in the header`, advice: 'a cell that holds a separator has to be quoted',
    });
  }
}

/** Columns of numbers of a whole file. */
export function readNumberColumns(bytes: Uint8Array, names: readonly string[], options: { source: string; allowEmpty?: boolean }): NumberColumns {
  const reader = new NumberReader(names, { ...options, bytes: bytes.length });
  reader.push(bytes);
  return reader.end();
}

function larger(column: Float64Array, rows: number): Float64Array {
  const more = new Float64Array(rows);
  more.set(column);
  return more;
}

/** Past line ends and a line of blanks alone; `at` where a line with something begins. */
function blankUntil(bytes: Uint8Array, at: number): number {
  let end = at;
  while (bytes[end] === SPACE || bytes[end] === 9) end++;
  return bytes[end] === LINE_FEED || bytes[end] === RETURN ? end + 1 : end >= bytes.length ? end : at;
}

/** The delimiter or line end after a cell; quoted ones are passed over. */
function cellEnd(bytes: Uint8Array, from: number, delimiter: number): number {
  let quoted = false;
  let end = from;
  for (; end < bytes.length; end++) {
    const code = bytes[end]!;
    if (code === LINE_FEED || code === RETURN) return end;
    if (code === QUOTE) quoted = !quoted;
    else if (code === delimiter && !quoted) return end;
  }
  return end;
}

function splitQuoted(line: string, delimiter: string): string[] {
  const cells: string[] = [];
  let quoted = false;
  let from = 0;
  for (let at = 0; at <= line.length; at++) {
    if (line[at] === '"') quoted = !quoted;
    else if (at === line.length || (line[at] === delimiter && !quoted)) {
      cells.push(unquoted(line.slice(from, at)));
      from = at + 1;
    }
  }
  return cells;
}

function unquoted(cell: string): string {
  return cell.length > 1 && cell.startsWith('"') && cell.endsWith('"') ? cell.slice(1, -1).replaceAll('""', '"') : cell;
}
