/** Geodetic datums that Ironplat moves positions between. */
export type Datum = 'NAD27' | 'NAD83' | 'NAD83(2011)' | 'WGS 84';

/** Degrees, or metres, as the context says. */
export interface Bounds {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/** A coordinate reference system of the registry. Coordinates pass in and out in metres (degrees where geographic). */
export interface Crs {
  /** As in `EPSG:2264`. */
  readonly code: string;
  readonly epsg: number;
  readonly name: string;
  readonly kind: 'projected' | 'geographic';
  readonly datum: Datum;
  readonly unit: 'metre' | 'US survey foot' | 'foot' | 'degree';
  /** Metres in one unit of the CRS as published; 1 for degrees. Applied at the door and at the exit only. */
  readonly metresPerUnit: number;
  /** Longitude and latitude in degrees within which EPSG says the CRS may be used. */
  readonly areaOfUse: Bounds;
  /** Longitude and latitude (degrees, on the CRS's own datum) to easting and northing in metres. */
  forward(lonDeg: number, latDeg: number): [number, number];
  /** Easting and northing in metres to longitude and latitude (degrees, on the CRS's own datum). */
  inverse(eastM: number, northM: number): [number, number];
}

/** A place moved from one datum to another, with what moved it and how well. */
export interface ShiftedPlace {
  readonly lonDeg: number;
  readonly latDeg: number;
  /** What was used, for the `shift` attribute: `NADCON conus`, `mean US-48 (TR8350.2)`, `none (NAD83 as WGS 84, EPSG:1188)`. */
  readonly shift: string;
  /** Standard error of the shift on each axis, metres, independent from place to place. */
  readonly sdM: number;
  /** Standard error on each axis, metres, of the part that neighbours share (a regional mean misses them all the same way). */
  readonly sharedSdM: number;
}

export interface DatumShift {
  readonly from: Datum;
  readonly to: Datum;
  /** Throws UserError `outside_area` where a datum has no meaning, `position_invalid` for what is no place at all. */
  place(lonDeg: number, latDeg: number): ShiftedPlace;
  /** Many places at once; a row with NaN in either column stays NaN in both. */
  arrays(lonDeg: ArrayLike<number>, latDeg: ArrayLike<number>): ShiftedColumns;
}

/** Columns moved from one datum to another. */
export interface ShiftedColumns {
  /** Degrees. */
  readonly lonDeg: Float64Array;
  readonly latDeg: Float64Array;
  /** Every shift that was used, each once, in the order of first use. */
  readonly shifts: readonly string[];
  /** Largest standard errors on each axis among the rows, metres, as in `ShiftedPlace`; 0 where no row has a place. */
  readonly sdM: number;
  readonly sharedSdM: number;
}

/** A table of differences between two datums. */
export interface ShiftGrid {
  /** As it is named in the `shift` attribute. */
  readonly name: string;
  /** A `Datum` where it is one that Ironplat knows, else the name that the file gives (`Old Hawaiian`): never used then. */
  readonly from: string;
  readonly to: string;
  /** Accuracy published for it, metres. */
  readonly accuracyM: number;
  /** Where that accuracy is stated; absent, all over the grid. Beyond it the grid still moves a place, with the error of `UNSTATED_ACCURACY_M`. */
  statedAt?(lonDeg: number, latDeg: number): boolean;
  /** What to add to longitude and latitude in degrees at a place on `from`; null outside the grid and where it has no value. */
  offsetAt(lonDeg: number, latDeg: number): readonly [number, number] | null;
}

/** The frame in which a satellite receiver gave its positions, whatever its file calls them. */
export type ReceiverFrame = 'WGS 84' | 'ITRF2014' | 'ITRF2020' | 'NAD83(2011)';

export interface DatumSetting {
  /** Further grids, tried in this order before the shipped one; the first that covers a place moves it. */
  readonly grids: readonly ShiftGrid[];
  /** False leaves out the grid that Ironplat ships. */
  readonly shipped: boolean;
  /** What positions on `WGS 84` really are in, and when they were measured (decimal year); unsaid, the null shift is used and named. */
  readonly receiver?: { readonly frame: ReceiverFrame; readonly epoch: number };
}
