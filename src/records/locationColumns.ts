import type { RawText } from './rawRecord.js';
import type { Cell } from './recordHead.js';
import type { RecordColumns } from './recordSource.js';

const KEYS = ['location', 'calls', 'aliquot', 'lot', 'section', 'township', 'townshipDir', 'range', 'rangeDir'] as const;

/** Whether the file says in words where its wells are. */
export function hasLocationColumns(columns: RecordColumns): boolean {
  return columns.location !== undefined || columns.section !== undefined;
}

/**
 * The columns of a row that say where in words, put together as one location: calls, part and lot before the section, as
 * they are written. A bare number gets the word that its column implies (`12` under `section` becomes `Sec 12`). Null
 * where nothing of it is filled in.
 */
export function locationText(cell: Cell, columns: RecordColumns): RawText | null {
  const filled = KEYS.filter((key) => columns[key] !== undefined && cell(key) !== '');
  if (filled.length === 0) return null;
  const numbered = (key: 'section' | 'township' | 'range' | 'lot', word: string): string => {
    const text = cell(key);
    return /^[#\d]/.test(text) ? `${word}${text}` : text;
  };
  const words = [
    cell('location'), cell('calls'), cell('aliquot'), numbered('lot', 'Lot '), numbered('section', 'Sec '),
    numbered('township', 'T') + cell('townshipDir'), numbered('range', 'R') + cell('rangeDir'),
  ];
  return {
    columns: filled.map((key) => columns[key]!).join(', '),
    value: words.filter((text) => text !== '').join(filled.includes('location') && filled.length > 1 ? '; ' : ' '),
  };
}
