import Papa from 'papaparse';
import { UserError } from '../errors.js';
import { decodeText } from './decodeText.js';
import type { TextTable } from './types.js';

const DELIMITERS = [',', ';', '\t'] as const;

/**
 * Reads separated text with a header row (RFC 4180; comma, semicolon or tab, whichever the header uses). Cells stay as
 * they stand, header names are trimmed. Blank lines are left out and said in `notes`; rows count without them.
 * A row with more or fewer cells than the header, an open quote, a name given twice or an empty file is a UserError.
 */
export function parseCsv(bytes: Uint8Array | string, source: string): TextTable {
  const decoded = typeof bytes === 'string' ? { text: bytes, notes: [] } : decodeText(bytes, source);
  const text = withLineFeeds(decoded.text.charCodeAt(0) === 0xfeff ? decoded.text.slice(1) : decoded.text);
  if (text.trim() === '') {
    throw new UserError({ code: 'file_empty', where: source, found: 'no text', wanted: 'a header row and rows of values' });
  }
  const { data, errors } = Papa.parse<string[]>(text, { delimiter: delimiterOf(text), newline: '\n', header: false });
  const all = data.filter(cells => !isBlank(cells));
  const quote = errors.find(error => error.type === 'Quotes');
  if (quote) {
    const row = data.slice(0, (quote.row ?? 0) + 1).filter(cells => !isBlank(cells)).length - 1;
    throw new UserError({
      code: 'file_unreadable', where: row > 0 ? `${source}, row ${row}` : `${source}, header`, found: 'a quotation mark that is not closed or stands inside a cell',
      wanted: 'cells quoted as "…", with a quotation mark inside them doubled',
    });
  }
  const notes = [...decoded.notes];
  const blank = data.length - all.length - (isBlank(data[data.length - 1]!) ? 1 : 0);
  if (blank > 0) notes.push(`${source}: ${blank} blank ${blank === 1 ? 'line was' : 'lines were'} left out; rows are counted without them.`);
  return toColumns(all, source, notes);
}

function toColumns(all: readonly string[][], source: string, notes: readonly string[]): TextTable {
  const header = all[0]!.map(name => name.trim());
  const rows = all.length - 1;
  if (rows === 0) {
    throw new UserError({ code: 'file_empty', where: source, found: 'a header and no rows', wanted: 'at least one row of values' });
  }
  const columns = header.map((): string[] => []);
  for (let row = 1; row <= rows; row++) {
    const cells = all[row]!;
    if (cells.length !== header.length) throw ragged(cells.length, { source, row, wanted: header.length });
    for (let c = 0; c < cells.length; c++) columns[c]!.push(cells[c]!);
  }
  const byName = new Map<string, readonly string[]>();
  for (const [c, name] of header.entries()) {
    if (name === '') {
      // A separator at the end of every line makes a last column without name or values: nothing is lost without it.
      if (columns[c]!.every(cell => cell.trim() === '')) continue;
      throw new UserError({ code: 'file_unreadable', where: `${source}, header, column ${c + 1}`, found: 'no name over a column with values', wanted: 'a name for every column' });
    }
    if (byName.has(name)) {
      throw new UserError({ code: 'file_unreadable', where: `${source}, header`, found: `the column name ${name} twice`, wanted: 'every name once', advice: 'rename one of them' });
    }
    byName.set(name, columns[c]!);
  }
  return { source, names: [...byName.keys()], rows, columns: byName, ...(notes.length > 0 ? { notes } : {}) };
}

function ragged(cells: number, { source, row, wanted }: { source: string; row: number; wanted: number }): UserError {
  return new UserError({
    code: 'file_unreadable', where: `${source}, row ${row}`, found: `${cells} ${cells === 1 ? 'cell' : 'cells'}`, wanted: `${wanted}, as in the header`,
    advice: 'a cell that holds a separator has to be quoted',
  });
}

function isBlank(cells: readonly string[]): boolean {
  return cells.length === 1 && cells[0]!.trim() === '';
}

/** The separator that divides the header into most names; a comma where there is none. */
export function delimiterOf(text: string): string {
  const start = text.search(/\S/);
  const end = text.slice(start).indexOf('\n');
  const header = text.slice(start, end < 0 ? text.length : start + end).replace(/"(?:[^"]|"")*"/g, '');
  let best: string = ',';
  let most = 0;
  for (const delimiter of DELIMITERS) {
    const count = header.split(delimiter).length - 1;
    if (count > most) [best, most] = [delimiter, count];
  }
  return best;
}

/** Every kind of line end as a line feed, since loggers and hand edits mix them in one file. */
function withLineFeeds(text: string): string {
  return text.includes('\r') ? text.replace(/\r\n?/g, '\n') : text;
}
