import type { Datum } from '../geodesy/types.js';
import type { EllipseExcess } from '../density/region95.js';
import type { Density } from '../density/types.js';
import type { RepairKind } from './repairKinds.js';

/** A historic record (permit, map point) that has become a place with an error. Metres in the survey's frame. */
export interface WellRecord {
  readonly recordId: string;
  /** File and row it was read from, for messages. */
  readonly source: string;
  readonly row: number;
  /** Best position: mean of the density without its blunder share. */
  readonly x: number;
  readonly y: number;
  readonly density: Density;
  /**
   * Half-axes of an ellipse round the smallest region that holds 95 % of the density without its blunder share: 2.4477 σ
   * for a Gaussian, where it is that region.
   */
  readonly semiMajM: number;
  readonly semiMinM: number;
  readonly azimDeg: number;
  /** By how much that ellipse is more than the region; absent where nobody has worked it out. */
  readonly excess?: EllipseExcess;
  /** Per axis, root mean square of both. */
  readonly posSdM: number;
  /** `unknown` where the density is a mixture over datums. */
  readonly datum: Datum | 'unknown';
  /** How it was moved to the frame's datum. */
  readonly shift: string;
  /** What the position rests on, in words. */
  readonly basis: string;
  readonly note: string;
  /** Records that share an unknown common shift (same file and datum), with its standard error per axis; null where none. */
  readonly group: { readonly id: string; readonly sharedSdM: number } | null;
  /** Chance that a steel casing was set and left, before any search. */
  readonly pCasing: number;
  /** API well number as the standard writes it; absent where the file has none that can be read. */
  readonly apiNumber?: string;
  /** Rows that were joined into this record, its own first, as `file, row n`; absent where it is one row. */
  readonly joined?: readonly string[];
}

/** A record that could not be placed, with what to do about it. */
export interface UnplacedRecord {
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  /** Column or columns that are at fault. */
  readonly column: string;
  /** As it stands in the file. */
  readonly value: string;
  readonly problem: string;
  readonly advice: string;
}

/** Statements of one well that lie farther apart than their errors allow. Distances in metres. */
export interface Disagreement {
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  /** What the position rests on, and what disagrees with it. */
  readonly kept: string;
  readonly other: string;
  /** Between the middles of both, m. */
  readonly distanceM: number;
  /** Chance that right statements lie at least so far apart. */
  readonly p: number;
  /** Chance that the density gives the other one. */
  readonly otherShare: number;
}

/** A slip of the pen that would explain a place where no record can be. */
export interface Repair {
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  readonly kind: RepairKind;
  readonly column: string;
  /** What is changed, in words, and the text before and after. */
  readonly what: string;
  readonly before: string;
  readonly after: string;
  /** From the parcel, m; Infinity where the place as written is none. */
  readonly distanceBeforeM: number;
  readonly distanceAfterM: number;
  /** What speaks for it. */
  readonly evidence: string;
  /** True where the survey file allows it and it was done, false where it is proposed. */
  readonly applied: boolean;
}

/** A row that was joined into another one's record, since both tell of one well. */
export interface JoinedRow {
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  /** Record that it was joined into. */
  readonly into: string;
  readonly why: string;
  /** How far apart both positions lie, m. */
  readonly distanceM: number;
}

/** What is odd about an API number; the record is placed all the same. */
export interface ApiRemark {
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  readonly value: string;
  readonly remark: string;
}

/** How one row became a place, or why it did not. */
export interface Decision {
  readonly recordId: string;
  readonly source: string;
  readonly row: number;
  /** What was read, and as what. */
  readonly readAs: string;
  /** Datum shifts, and repairs. */
  readonly movedBy: string;
  readonly restsOn: string;
  /** How sure the place is, or that there is none. */
  readonly sureTo: string;
}

export interface Records {
  readonly placed: readonly WellRecord[];
  readonly unplaced: readonly UnplacedRecord[];
  readonly disagreements?: readonly Disagreement[];
  readonly repairs?: readonly Repair[];
  readonly joined?: readonly JoinedRow[];
  readonly apiRemarks?: readonly ApiRemark[];
  /** One line a row, in the order of the files. */
  readonly log?: readonly Decision[];
}
