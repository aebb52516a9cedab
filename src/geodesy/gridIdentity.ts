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

/**
 * Accuracies that EPSG states for grids between these datums, metres: operations 1241 (lower 48), 1243 (Alaska),
 * 1454 (Hawaii), 1313 (Canada, NTv2). Told apart by what is written in the file or its name.
 */
const STATED: readonly (readonly [RegExp, number])[] = [
  [/conus|conterminous/i, 0.15],
  [/alaska/i, 0.5],
  [/hawaii/i, 0.2],
];
/** Metres, where nothing is stated: that of a national grid in NTv2 form (EPSG:1313), the widest of the published ones. */
export const UNSTATED_ACCURACY_M = 1.5;

export function gridAccuracyM(...texts: readonly string[]): number {
  return STATED.find(([pattern]) => texts.some((text) => pattern.test(text)))?.[1] ?? UNSTATED_ACCURACY_M;
}
