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
  place(lonDeg: number, latDeg: number): ShiftedPlace;
}
