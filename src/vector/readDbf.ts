import { UserError } from '../errors.js';
import { decodeWindows1252 } from '../table/decodeWindows1252.js';
import type { PropertyValue } from './types.js';

export interface DbfTable {
  /** A row's values by column; null for a row that is marked as deleted. */
  readonly rows: ReadonlyArray<Readonly<Record<string, PropertyValue>> | null>;
  readonly notes: readonly string[];
}

interface Column {
  readonly name: string;
  readonly kind: string;
  /** From the start of a row. */
  readonly offset: number;
  readonly width: number;
}

/** What .cpg files hold, letters and digits only, and the name that the decoder knows it by. */
const ENCODINGS: Readonly<Record<string, string>> = {
  utf8: 'utf-8', '65001': 'utf-8', '1252': 'windows-1252', cp1252: 'windows-1252', ansi1252: 'windows-1252', windows1252: 'windows-1252',
  '88591': 'windows-1252', iso88591: 'windows-1252', latin1: 'windows-1252', '1250': 'windows-1250', cp1250: 'windows-1250', '1251': 'windows-1251', cp1251: 'windows-1251',
};
/** Language driver of the head (byte 29), as dBASE and ESRI's programs write it: ANSI, Central European, Cyrillic. */
const DRIVERS: Readonly<Record<number, string>> = { 0x03: 'windows-1252', 0x57: 'windows-1252', 0xc8: 'windows-1250', 0xc9: 'windows-1251' };
const HEADER_BYTES = 32;
const FIELD_BYTES = 32;
const END_OF_FIELDS = 0x0d;
const DELETED = 0x2a;

/**
 * Reads a dBASE table. Texts without the blanks at their ends, dates as `YYYY-MM-DD`; a blank, a field of asterisks and a
 * date of zeros are null, as are memos, which lie in another file. Texts are in the encoding of the .cpg, else that of the table's head,
 * else Windows-1252, with a note where that matters.
 * Source: dBASE III and IV file structure; ESRI Shapefile Technical Description, 1998, for its place beside a .shp.
 */
export function readDbf(bytes: Uint8Array, encodingLabel: string | null, source: string): DbfTable {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const count = bytes.length >= HEADER_BYTES ? view.getUint32(4, true) : 0;
  const headBytes = bytes.length >= HEADER_BYTES ? view.getUint16(8, true) : HEADER_BYTES;
  const rowBytes = bytes.length >= HEADER_BYTES ? view.getUint16(10, true) : 0;
  if (headBytes <= HEADER_BYTES || rowBytes < 1 || bytes.length < headBytes + count * rowBytes) {
    throw new UserError({ code: 'file_unreadable', where: source, found: `${bytes.length} bytes`, wanted: `a whole dBASE table${rowBytes > 0 ? ` (${headBytes + count * rowBytes} bytes)` : ''}`, advice: 'copy the file again' });
  }
  const said = encodingLabel === null ? DRIVERS[bytes[29]!] : encodingOf(encodingLabel, source);
  const decoder = said === undefined || said === 'windows-1252' ? null : new TextDecoder(said);
  const decode = (from: number, to: number): string => (decoder ? decoder.decode(bytes.subarray(from, to)) : decodeWindows1252(bytes.subarray(from, to)));
  const columns = columnsOf(bytes, headBytes, decode);
  const rows = Array.from({ length: count }, (_, row) => {
    const start = headBytes + row * rowBytes;
    if (bytes[start] === DELETED) return null;
    return Object.fromEntries(columns.map(({ name, kind, offset, width }) => [name, valueOf(kind, decode(start + offset, start + offset + width))]));
  });
  const guessed = said === undefined && bytes.subarray(headBytes).some(byte => byte > 127);
  return { rows, notes: guessed ? [`${source} does not say its encoding: its texts were read as Windows-1252. Check names with accents.`] : [] };
}

function columnsOf(bytes: Uint8Array, headBytes: number, decode: (from: number, to: number) => string): Column[] {
  const columns: Column[] = [];
  let offset = 1;
  for (let at = HEADER_BYTES; at + FIELD_BYTES <= headBytes && bytes[at] !== END_OF_FIELDS; at += FIELD_BYTES) {
    const end = bytes.subarray(at, at + 11).indexOf(0);
    const width = bytes[at + 16]!;
    columns.push({ name: decode(at, at + (end < 0 ? 11 : end)).trim(), kind: String.fromCharCode(bytes[at + 11]!), offset, width });
    offset += width;
  }
  return columns;
}

function valueOf(kind: string, cell: string): PropertyValue {
  const text = cell.replaceAll('\0', ' ').trim();
  switch (kind) {
    case 'N':
    case 'F': return text === '' || Number.isNaN(Number(text)) ? null : Number(text);
    case 'L': return /^[YyTt]$/.test(text) ? true : /^[NnFf]$/.test(text) ? false : null;
    case 'D': return /^\d{8}$/.test(text) && !/^0+$/.test(text) ? `${text.slice(0, 4)}-${text.slice(4, 6)}-${text.slice(6)}` : null;
    case 'C': return text === '' ? null : text;
    default: return null;
  }
}

function encodingOf(label: string, source: string): string {
  const encoding = ENCODINGS[label.toLowerCase().replace(/[^a-z0-9]/g, '')];
  if (encoding) return encoding;
  throw new UserError({
    code: 'file_unreadable', where: `${source.slice(0, -4)}.cpg`, found: `the encoding ${JSON.stringify(label)}`, wanted: 'UTF-8, 1252, 1250, 1251 or ISO-8859-1',
    advice: 'save the Shapefile with UTF-8',
  });
}
