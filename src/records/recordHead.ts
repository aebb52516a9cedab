import { UserError } from '../errors.js';
import { nearest } from '../nearest.js';
import { quantity } from '../units.js';
import { numberText } from './digits.js';
import { locationText } from './locationColumns.js';
import type { Fault, RawRecord } from './rawRecord.js';
import type { RecordColumns } from './recordSource.js';

/** Text of the cell under a mapped key; empty where the key is not mapped. */
export type Cell = (key: CellKey) => string;
/** Keys of one column each; a group may have several. */
export type CellKey = Exclude<keyof RecordColumns, 'group'>;

/** A row without its coordinates. */
export type RecordHead = Omit<RawRecord, 'place' | 'coordinates' | 'group'>;

/** Everything but the coordinates; a length that nobody can read becomes the row's fault. */
export function recordHead(cell: Cell, about: { columns: RecordColumns; row: number }): RecordHead {
  const { columns } = about;
  const lengths = { errorM: null as number | null, error90M: null as number | null, error95M: null as number | null };
  let fault: Fault | null = null;
  for (const key of ['errorM', 'error90M', 'error95M'] as const) {
    const text = cell(key);
    if (text === '') continue;
    const value = length(text, columns[key]!);
    if (typeof value === 'number') lengths[key] = value;
    else fault ??= value;
  }
  return {
    recordId: cell('recordId') || `row ${about.row}`, row: about.row,
    datumText: columns.datum === undefined ? null : cell('datum'),
    location: locationText(cell, columns), meridian: cell('meridian'), mapDate: cell('mapDate'), sourceText: cell('source'),
    apiNumber: cell('apiNumber'), name: cell('name'), operator: cell('operator'), wellNumber: cell('wellNumber'),
    ...lengths, fault, note: cell('note'),
  };
}

/** A length in a cell: metres, or with its unit (`25 ft`). */
function length(text: string, columnName: string): number | Fault {
  const fault = { column: columnName, value: text, problem: `"${text}" is no length`, advice: 'write metres, or a number with its unit such as 25 ft; 0 or more' };
  try {
    const value = quantity(numberText.test(text) ? Number(text) : text, 'm', columnName);
    return value >= 0 ? value : fault;
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
    return fault;
  }
}

/** What makes up a record's group, joined: empty where every cell is. */
export function groupText(cells: readonly string[]): string {
  return cells.some((text) => text !== '') ? cells.join(' / ') : '';
}

/** Columns of a group, one or several. */
export function groupColumns({ group }: RecordColumns): readonly string[] {
  return group === undefined ? [] : typeof group === 'string' ? [group] : group;
}

/** Mapped columns of one cell each. */
export function cellColumns(columns: RecordColumns): Array<[CellKey, string]> {
  return Object.entries(columns).filter(([key, name]) => key !== 'group' && name !== undefined) as Array<[CellKey, string]>;
}

/** A mapped column of a file; a name that the file does not have is a UserError. */
export function mappedColumn<T>(stored: ReadonlyMap<string, T>, name: string, about: { key: string; source: string; names: readonly string[] }): T {
  const values = stored.get(name);
  if (values !== undefined) return values;
  const close = nearest(name, about.names);
  throw new UserError({
    code: 'column_missing', where: `${about.source}, columns.${about.key}`, found: `no column "${name}"`,
    wanted: `one of ${about.names.join(', ')}`, ...(close === null ? {} : { advice: `did you mean "${close}"` }),
  });
}
