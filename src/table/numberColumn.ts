import { UserError } from '../errors.js';
import { column } from './column.js';
import type { TextTable } from './types.js';

export interface NumberColumnOptions {
  /** An empty cell (or the word NaN) becomes NaN instead of an error. */
  readonly allowEmpty: boolean;
}
export const NUMBER_COLUMN_DEFAULTS: NumberColumnOptions = Object.freeze({ allowEmpty: false });

/** Plain decimals only: `Number` alone would also take hexadecimal, `Infinity` and an empty text. */
const NUMBER = /^\s*[-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?\s*$/;
const EMPTY = /^\s*(?:nan)?\s*$/i;

/**
 * A column of numbers, one a row. Empty cells are NaN where `allowEmpty`; anything else that is no plain decimal number
 * is a UserError `value_invalid` with file, row, column and value.
 */
export function numberColumn(table: TextTable, name: string, options: Partial<NumberColumnOptions> = {}): Float64Array {
  const { allowEmpty } = { ...NUMBER_COLUMN_DEFAULTS, ...options };
  const texts = column(table, name);
  const values = new Float64Array(texts.length);
  for (let i = 0; i < texts.length; i++) {
    const text = texts[i]!;
    values[i] = NUMBER.test(text) ? Number(text) : numberFromText(text, { where: `${table.source}, row ${i + 1}, column ${name}`, allowEmpty });
  }
  return values;
}

/** One cell by the same rules. */
export function numberFromText(text: string, { where, allowEmpty }: NumberColumnOptions & { where: string }): number {
  if (NUMBER.test(text)) return Number(text);
  if (allowEmpty && EMPTY.test(text)) return NaN;
  throw invalid(text, where);
}

function invalid(text: string, where: string): UserError {
  if (EMPTY.test(text)) return new UserError({ code: 'value_invalid', where, found: 'an empty cell', wanted: 'a number' });
  const comma = /^\s*[-+]?\d+,\d+\s*$/.test(text);
  return new UserError({
    code: 'value_invalid', where, found: JSON.stringify(text), wanted: 'a number',
    ...(comma ? { advice: 'write decimals with a point' } : {}),
  });
}
