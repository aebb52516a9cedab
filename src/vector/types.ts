import type { Geometry } from 'geojson';
import type { Crs } from '../geodesy/types.js';

export type FieldType = 'text' | 'real' | 'integer';

/** A column of a layer. Names have at most 10 characters, lower case, so that they outlive a Shapefile. */
export interface Field {
  readonly name: string;
  readonly type: FieldType;
  /** What the value is, with its unit. */
  readonly title: string;
  /** Decimals that are written (real only). */
  readonly decimals?: number;
}

export type FieldValue = string | number | null;

export interface Feature {
  /** Coordinates in metres in the layer's CRS (degrees where the CRS is geographic); null where the place is not known. */
  readonly geometry: Geometry | null;
  readonly values: Readonly<Record<string, FieldValue>>;
}

/** A named set of features of one geometry type in one CRS, with its columns stated rather than guessed from the first row. */
export interface Layer {
  readonly name: string;
  readonly title: string;
  readonly crs: Crs;
  readonly geometryType: 'Point' | 'LineString' | 'Polygon' | 'MultiPolygon' | 'MultiLineString';
  readonly fields: readonly Field[];
  readonly features: readonly Feature[];
}

export type PropertyValue = string | number | boolean | null;

/** Features as they were read from a file, each with its place in the layer's CRS. */
export interface VectorInput {
  /** The file's name, for messages; feature n of it is `features[n − 1]`. */
  readonly source: string;
  /** As the file names it, or as the caller stated it for a file that names none. */
  readonly crs: Crs;
  readonly features: readonly InputFeature[];
  readonly rows: number;
  /** What the user has to know about how the file was read: heights left out, an encoding that was taken. */
  readonly notes: readonly string[];
}

export interface InputFeature {
  /** Metres in the CRS, whatever its own unit (degrees where it is geographic); two numbers a position; null for no place. */
  readonly geometry: Geometry | null;
  /** Values as the file has them; a date is text, `YYYY-MM-DD`. */
  readonly properties: Readonly<Record<string, PropertyValue>>;
}

/** What a format's reader hands over: positions in the file's units, and the CRS that the file names, if any. */
export interface RawVector {
  readonly crs: Crs | null;
  /** What the format lays down for a file that names none; none for most. */
  readonly formatCrs?: Crs;
  readonly features: readonly InputFeature[];
  readonly notes: readonly string[];
}
