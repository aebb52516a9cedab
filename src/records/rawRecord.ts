import type { UnplacedRecord } from './types.js';

/** Coordinates as the file gives them, with the worth of the last digit. */
export type RawPlace =
  | { readonly kind: 'angles'; readonly lonDeg: number; readonly latDeg: number; readonly lonResolutionDeg: number; readonly latResolutionDeg: number }
  | { readonly kind: 'projected'; readonly eastM: number; readonly northM: number; readonly eastResolutionM: number; readonly northResolutionM: number };

/** What is wrong with a row, in the words of the report. `absent` where the cells are empty, not wrong. */
export type Fault = Pick<UnplacedRecord, 'column' | 'value' | 'problem' | 'advice'> & { readonly absent?: true };

/** A cell, or several, as they stand in the file. */
export interface RawText {
  readonly columns: string;
  readonly value: string;
}

/** A row of a file, read but not yet placed. */
export interface RawRecord {
  readonly recordId: string;
  readonly row: number;
  /** The coordinates, or why there are none; null where the file has no columns for them. */
  readonly place: RawPlace | Fault | null;
  /** The columns of the coordinates and their text, for messages. */
  readonly coordinates: RawText;
  /** Location in words: a free text, or columns of section, township, range, calls and part put together; null where empty. */
  readonly location: RawText | null;
  /** Principal meridian of a column of its own; empty where there is none. */
  readonly meridian: string;
  /** Datum as it stands in the row; null where the file has no such column. */
  readonly datumText: string | null;
  /** Date of the map, as it stands in the row. */
  readonly mapDate: string;
  /** Source class as it stands in the row. */
  readonly sourceText: string;
  readonly apiNumber: string;
  readonly name: string;
  readonly operator: string;
  readonly wellNumber: string;
  /** What else is wrong with the row, apart from its coordinates. */
  readonly fault: Fault | null;
  readonly errorM: number | null;
  readonly error90M: number | null;
  readonly error95M: number | null;
  /** Cells of the columns that make up a group, joined; empty where all are. */
  readonly group: string;
  readonly note: string;
}

export function isFault(place: RawPlace | Fault): place is Fault {
  return 'problem' in place;
}
