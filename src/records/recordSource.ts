import type { Crs, Datum } from '../geodesy/types.js';
import type { TextTable } from '../table/types.js';
import type { InputFeature } from '../vector/types.js';
import type { DigitKind } from './digits.js';
import type { LengthUnitName, LocationTextOptions } from './locationText/types.js';
import type { RepairKind } from './repairKinds.js';
import type { SourceClass } from './sourceError.js';

/** Which column of the file holds what; every one may be left out. Names are the file's own. */
export interface RecordColumns {
  readonly recordId?: string;
  readonly latitude?: string;
  readonly longitude?: string;
  readonly easting?: string;
  readonly northing?: string;
  readonly datum?: string;
  /** A location in words: coordinates, a section with its calls or part, distances from a map's corner, or several of these. */
  readonly location?: string;
  /** `12`, `Sec 12`; with township and range, and calls, part or lot where the file has them, these make up one location. */
  readonly section?: string;
  /** `5N`, `T5N`, or `5` with a column of `N` or `S`. */
  readonly township?: string;
  readonly townshipDir?: string;
  readonly range?: string;
  readonly rangeDir?: string;
  /** Principal meridian by name or code. */
  readonly meridian?: string;
  /** Footage calls or corner ties: `660 FNL 1980 FEL`. */
  readonly calls?: string;
  /** Part of the section: `NE/4 SW/4`. */
  readonly aliquot?: string;
  readonly lot?: string;
  /** Date of the map that the position was read from: `1962-05-01`, `5/1/1962`, `1962`. */
  readonly mapDate?: string;
  /** Source class of each row, in place of the file's `source`. */
  readonly source?: string;
  readonly apiNumber?: string;
  readonly name?: string;
  readonly operator?: string;
  readonly wellNumber?: string;
  /** One standard deviation on each axis, in metres. */
  readonly errorM?: string;
  /** Radius that holds 90 %, in metres. */
  readonly error90M?: string;
  /** Radius that holds 95 %, in metres. */
  readonly error95M?: string;
  /** Map sheet, lease, operator or surveyor, one column or several: records that agree in all of them share an unknown common shift. */
  readonly group?: string | readonly string[];
  readonly note?: string;
}

/** Maps dated before the day (`1986-01-01`) are on the datum; `unknown` where its weights are to count. */
export interface DateRule {
  readonly before?: string;
  readonly datum: string;
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
  /** Whether the last digit of a coordinate was rounded, or what followed it cut off. */
  readonly digits?: DigitKind;
  readonly source?: SourceClass;
  /** Standard errors per axis, metres, in place of those that the classes imply. */
  readonly classErrors?: Readonly<Partial<Record<SourceClass, number>>>;
  readonly mapScale?: number;
  readonly errorM?: number;
  readonly error90M?: number;
  readonly error95M?: number;
  /** Standard error per axis, metres, that all records of a group have in common (a map sheet's own offset). */
  readonly sharedSdM?: number;
  /** Weights of the datums that a row without a known datum may be in; they are scaled to sum to 1. */
  /** Datum by the date of the map; the first rule that fits counts. A rule without `before` fits every date. */
  readonly datumByDate?: readonly DateRule[];
  /** Principal meridian of all references that do not name theirs. */
  readonly meridian?: string;
  /** State of API numbers that leave it out, two digits. */
  readonly apiState?: string;
  /** Which comes first in a location's pair of angles of which nothing else decides it. */
  readonly pairOrder?: LocationTextOptions['pairOrder'];
  /** Unit of a location's lengths that have none. */
  readonly lengthUnit?: LengthUnitName;
  /** Kinds of slip that may be mended where the evidence is plain; every other one is proposed only. */
  readonly repairs?: readonly RepairKind[];
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
  digits: 'rounded' as DigitKind,
  sharedSdM: 0,
  /** Share of positions that are blunders. Common practice: a few per cent up to a tenth of old permits. */
  blunderShare: 0.05,
  /** Chance that a steel casing was set and left. Common practice: some permits were never drilled, some casings were pulled. */
  pCasing: 0.8,
});

/** Settings of a file with what it says nothing about. */
export type FullSettings = RecordFileSettings & Required<Pick<RecordFileSettings, keyof typeof RECORD_FILE_DEFAULTS>>;

export function fullSettings({ settings }: Pick<RecordSource, 'settings'>): FullSettings {
  return { ...RECORD_FILE_DEFAULTS, ...settings };
}
