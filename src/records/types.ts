import type { Datum } from '../geodesy/types.js';
import type { EllipseExcess } from '../density/region95.js';
import type { Density } from '../density/types.js';

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

export interface Records {
  readonly placed: readonly WellRecord[];
  readonly unplaced: readonly UnplacedRecord[];
}
