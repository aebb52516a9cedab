import type { UnplacedRecord } from './types.js';

/** Coordinates as the file gives them, with the worth of the last digit. */
export type RawPlace =
  | { readonly kind: 'angles'; readonly lonDeg: number; readonly latDeg: number; readonly lonResolutionDeg: number; readonly latResolutionDeg: number }
  | { readonly kind: 'projected'; readonly eastM: number; readonly northM: number; readonly eastResolutionM: number; readonly northResolutionM: number };

/** What is wrong with a row, in the words of the report. */
export type Fault = Pick<UnplacedRecord, 'column' | 'value' | 'problem' | 'advice'>;

/** A row of a file, read but not yet placed. */
export interface RawRecord {
  readonly recordId: string;
  readonly row: number;
  /** The coordinates, or why there are none. */
  readonly place: RawPlace | Fault;
  /** The columns of the coordinates and their text, for messages. */
  readonly coordinates: { readonly columns: string; readonly value: string };
  /** Datum as it stands in the row; null where the file has no such column. */
  readonly datumText: string | null;
  /** What else is wrong with the row, apart from its coordinates. */
  readonly fault: Fault | null;
  readonly errorM: number | null;
  readonly error90M: number | null;
  readonly error95M: number | null;
  readonly group: string;
  readonly note: string;
}

export function isFault(place: RawPlace | Fault): place is Fault {
  return 'problem' in place;
}
