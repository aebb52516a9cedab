/**
 * A mistake that the user can mend. It reads as one sentence: where, what was found, what is wanted, what to do.
 * Anything else that is thrown is a fault of ours and is shown as such.
 */
export interface Complaint {
  /** Stable word for programs and tests, for example `column_missing`. */
  readonly code: ComplaintCode;
  /** The file, with its row, column or key: `permits.csv, row 7, column lon`. */
  readonly where: string;
  /** What was found there. */
  readonly found: string;
  /** What is wanted instead. */
  readonly wanted: string;
  /** What to do next, where `wanted` does not say it already. */
  readonly advice?: string;
}

export type ComplaintCode =
  | 'usage'
  | 'file_missing'
  | 'file_unreadable'
  | 'file_empty'
  | 'file_exists'
  | 'key_invalid'
  | 'key_missing'
  | 'quantity_invalid'
  | 'column_missing'
  | 'value_invalid'
  | 'zone_missing'
  | 'crs_unknown'
  | 'crs_missing'
  | 'datum_unknown'
  | 'position_invalid'
  | 'coordinates_swapped'
  | 'outside_area'
  | 'polygon_invalid'
  | 'grid_file_invalid'
  | 'field_out_of_range'
  | 'date_out_of_range'
  | 'base_no_overlap'
  | 'no_data'
  | 'input_missing'
  | 'operation_invalid';

/** Misuse of the command line or the survey file ends with 2; everything that lies in the data ends with 1. */
const MISUSE: ReadonlySet<ComplaintCode> = new Set(['usage', 'key_invalid', 'key_missing', 'quantity_invalid', 'operation_invalid', 'crs_unknown']);

export class UserError extends Error {
  override readonly name = 'UserError';
  readonly complaint: Complaint;

  constructor(complaint: Complaint) {
    super(sentence(complaint));
    this.complaint = complaint;
  }

  get code(): ComplaintCode {
    return this.complaint.code;
  }

  /** Exit status of a command that ends with this error: 1 the data failed, 2 misuse. */
  get exitCode(): 1 | 2 {
    return MISUSE.has(this.complaint.code) ? 2 : 1;
  }
}

function sentence({ where, found, wanted, advice }: Complaint): string {
  return `${where}: found ${found}, wanted ${wanted}${advice ? `; ${advice}` : ''}.`;
}
