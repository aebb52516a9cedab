import type { Area, Covariance, DensityPart } from '../density/types.js';
import type { Datum } from '../geodesy/types.js';

/** How a statement says where: each is solved by itself, and the best is checked against the others. */
export type StatementKind = 'coordinates' | 'map corner' | 'footage calls' | 'corner tie' | 'centre' | 'part' | 'lot' | 'section';

/** One statement of a record as a place with error, blunders left out. Frame metres. */
export interface Solution {
  readonly kind: StatementKind;
  /** The statement as it is read, in words: `footage calls 660 ft FNL, 1,980 ft FEL of section 3, T35S R29E`. */
  readonly said: string;
  /** Weights sum to 1; an area for what names no point. */
  readonly parts: readonly DensityPart[];
  /** Mean and covariance of the parts together. */
  readonly x: number;
  readonly y: number;
  readonly cov: Covariance;
  /** Root mean square of both axes' standard deviations, by which the best statement is chosen. */
  readonly sdM: number;
  readonly datum: Datum | 'unknown';
  readonly shift: string;
  /** That part of the datum shift's error which neighbours share, one σ per axis. */
  readonly sharedSdM: number;
  readonly basis: readonly string[];
  readonly notes: readonly string[];
  /** The section that the statement names, over which its blunders are spread; null where none is named. */
  readonly section: Area | null;
}
