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
