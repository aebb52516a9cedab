import { inLower48OrSea } from './lower48.js';

/** What a grid is called in the `shift` attribute, and between which datums it leads where the caller knows better than the file. */
export interface GridNaming {
  readonly label: string;
  readonly datums?: { readonly from: string; readonly to: string } | undefined;
}

/** Datum names as grid files write them, without spaces and case, to ours. */
const DATUM_NAMES: Readonly<Record<string, string>> = {
  NAD27: 'NAD27', NAD1927: 'NAD27', 'EPSG:4267': 'NAD27',
  NAD83: 'NAD83', NAD1983: 'NAD83', 'NAD83(1986)': 'NAD83', 'EPSG:4269': 'NAD83',
  'NAD83(2011)': 'NAD83(2011)', 'EPSG:6318': 'NAD83(2011)',
  WGS84: 'WGS 84', 'EPSG:4326': 'WGS 84',
  'EPSG:4135': 'Old Hawaiian', 'EPSG:4139': 'Puerto Rico',
};

/** Our name of a datum, or the file's own where it is none of ours. */
export function gridDatum(written: string): string {
  return DATUM_NAMES[written.replace(/\s+/g, '').toUpperCase()] ?? written.trim();
}

/** What is published of a grid's accuracy. */
export interface GridAccuracy {
  readonly accuracyM: number;
  /** Absent where it holds all over the grid. */
  readonly statedAt?: (lonDeg: number, latDeg: number) => boolean;
}

/** Metres, where nothing is stated: that of a national grid in NTv2 form (EPSG:1313, Canada), the widest of the published ones. */
export const UNSTATED_ACCURACY_M = 1.5;

/** NADCON's grid of the lower 48 reaches into Canada and Mexico, for which nothing is published. Source: EPSG:1241. */
export const CONUS_ACCURACY: GridAccuracy = { accuracyM: 0.15, statedAt: inLower48OrSea };

/** Source: EPSG:1243 (Alaska), 1454 (Hawaii). Grids are told apart by what is written in the file or by its name. */
const STATED: readonly (readonly [RegExp, GridAccuracy])[] = [
  [/conus|conterminous/i, CONUS_ACCURACY],
  [/alaska/i, { accuracyM: 0.5 }],
  [/hawaii/i, { accuracyM: 0.2 }],
];

export function gridAccuracy(...texts: readonly string[]): GridAccuracy {
  return STATED.find(([pattern]) => texts.some((text) => pattern.test(text)))?.[1] ?? { accuracyM: UNSTATED_ACCURACY_M };
}
