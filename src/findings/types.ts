export type FindingWord = 'located' | 'ambiguous' | 'not_found' | 'not_searched' | 'unrecorded';

/** One row per record, and one per casing that no record tells of. Frame metres. */
export interface Finding {
  /** Empty for an unrecorded casing. */
  readonly recordId: string;
  /** Empty where no anomaly belongs to it. */
  readonly anomalyId: string;
  readonly finding: FindingWord;
  /** Chance that this record and this anomaly are the same well; for an unrecorded casing, that no record tells of it. */
  readonly pMatch: number;
  /** From the record to the casing; NaN where there is none. */
  readonly distM: number;
  readonly azimDeg: number;
  /** The well lies in ground searched. */
  readonly pCovered: number;
  /** It lies there and would have been detected. */
  readonly pDetect: number;
  /** A casing as stated is still there, given the search. */
  readonly pRemains: number;
  /** From 1, most worth digging first; 0 where there is nothing to dig. */
  readonly digOrder: number;
  /** Casing where located or unrecorded, else the record; NaN where the record has no place. */
  readonly x: number;
  readonly y: number;
  readonly note: string;
}

/** Chance of every record–anomaly pair, for those who want more than the best. */
export interface PairChance {
  readonly recordId: string;
  readonly anomalyId: string;
  readonly p: number;
}

export interface Findings {
  readonly list: readonly Finding[];
  readonly pairs: readonly PairChance[];
  readonly notes: readonly string[];
}
