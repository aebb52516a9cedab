import type { Crs, Datum } from '../geodesy/types.js';
import type { TextTable } from '../table/types.js';
import type { InputFeature } from '../vector/types.js';
import type { SourceClass } from './sourceError.js';

/** Which column of the file holds what; every one may be left out. Names are the file's own. */
export interface RecordColumns {
  readonly recordId?: string;
  readonly latitude?: string;
  readonly longitude?: string;
  readonly easting?: string;
  readonly northing?: string;
  readonly datum?: string;
  /** One standard deviation on each axis, in metres. */
  readonly errorM?: string;
  /** Radius that holds 90 %, in metres. */
  readonly error90M?: string;
  /** Radius that holds 95 %, in metres. */
  readonly error95M?: string;
  /** Map sheet, lease or surveyor: records of one group share an unknown common shift. */
  readonly group?: string;
  readonly note?: string;
}

/** How a file of records is to be read: `locate.files[]` of the survey file. */
export interface RecordFileSettings {
  readonly columns?: RecordColumns;
  /** CRS of a table's easting and northing, or of its latitude and longitude; a vector file brings its own. */
  readonly crs?: Crs;
  /** Datum of all rows whose own is not stated. */
  readonly datum?: string;
  /** Longitudes without a sign or a letter count west of Greenwich. */
  readonly westPositive?: boolean;
  readonly source?: SourceClass;
  readonly mapScale?: number;
  readonly errorM?: number;
  readonly error90M?: number;
  readonly error95M?: number;
  /** Standard error per axis, metres, that all records of a group have in common (a map sheet's own offset). */
  readonly sharedSdM?: number;
  /** Weights of the datums that a row without a known datum may be in; they are scaled to sum to 1. */
  readonly unknownDatum?: Readonly<Partial<Record<Datum, number>>>;
  readonly blunderShare?: number;
  readonly pCasing?: number;
}

/** A file of records as it was read. */
export type RecordSource = { readonly name: string; readonly settings: RecordFileSettings } & (
  | { readonly kind: 'table'; readonly table: TextTable }
  | { readonly kind: 'vector'; readonly crs: Crs; readonly features: readonly InputFeature[] }
);

/** CRS of the coordinates of a source; null for a table of latitudes and longitudes whose datum is stated otherwise. */
export function sourceCrs(source: RecordSource): Crs | null {
  return source.kind === 'vector' ? source.crs : source.settings.crs ?? null;
}

/** What a file says nothing about. Survey-file keys are the same words in snake_case. */
export const RECORD_FILE_DEFAULTS = Object.freeze({
  source: 'unknown' as SourceClass,
  westPositive: false,
  sharedSdM: 0,
  /** Share of positions that are blunders. Common practice: a few per cent up to a tenth of old permits. */
  blunderShare: 0.05,
  /** Chance that a steel casing was set and left. Common practice: some permits were never drilled, some casings were pulled. */
  pCasing: 0.8,
});
