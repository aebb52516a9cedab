import { ByteText } from './byteText.js';
import { formatUtc } from './calendar.js';

/** A column to write: numbers with a stated number of decimals, UTC seconds since 1970 written in ISO 8601, or texts. */
export type CsvColumn =
  | { readonly name: string; readonly values: ArrayLike<number>; readonly decimals: number }
  | { readonly name: string; readonly utcS: ArrayLike<number>; readonly decimals: number }
  | { readonly name: string; readonly texts: ArrayLike<string> };

const COMMA = 44;
const LINE_FEED = 10;

/**
 * Columns of the same length as CSV bytes (RFC 4180, UTF-8, a line feed after each line). A number is rounded to its
 * decimals and has a point, no exponent and no minus before a zero; NaN is an empty cell.
 */
export function writeCsv(columns: readonly CsvColumn[]): Uint8Array {
  const rows = columns.length === 0 ? 0 : lengthOf(columns[0]!);
  for (const column of columns) {
    if (lengthOf(column) !== rows) throw new Error(`column ${column.name} has ${lengthOf(column)} rows, the first has ${rows}`);
  }
  const out = new ByteText();
  out.text(columns.map(column => quoted(column.name)).join(','));
  out.byte(LINE_FEED);
  for (let row = 0; row < rows; row++) {
    for (let c = 0; c < columns.length; c++) {
      if (c > 0) out.byte(COMMA);
      const column = columns[c]!;
      if ('values' in column) out.number(column.values[row]!, column.decimals);
      else out.text('utcS' in column ? formatUtc(column.utcS[row]!, column.decimals) : quoted(column.texts[row]!));
    }
    out.byte(LINE_FEED);
  }
  return out.toBytes();
}

function lengthOf(column: CsvColumn): number {
  return 'texts' in column ? column.texts.length : 'utcS' in column ? column.utcS.length : column.values.length;
}

function quoted(text: string): string {
  return /[",\r\n]|^\s|\s$/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
