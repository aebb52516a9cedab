import type { Geometry } from 'geojson';
import type { Crs } from '../types.js';

/** A line of a section, or of a part of one, that a call is measured from. */
export type Side = 'N' | 'S' | 'E' | 'W';

/** A quarter (`NE`) or a half (`N2`) of whatever it is taken of. */
export type AliquotStep = 'NE' | 'NW' | 'SE' | 'SW' | 'N2' | 'S2' | 'E2' | 'W2';

/**
 * A part of a section from the whole inwards, the reverse of the order in which it is written: `NE/4 SW/4` (the
 * north-east quarter of the south-west quarter) is `['SW', 'NE']`, `S½ of the NW¼` is `['NW', 'S2']`; `[]` is the
 * section itself.
 */
export interface AliquotPart {
  readonly steps: readonly AliquotStep[];
}

export interface FootageCall {
  /** Metres from the line, perpendicular to it; survey units (US survey feet, rods, chains) are converted by the reader. */
  readonly distanceM: number;
  /** Step of the last digit that the call gives, metres: its rounding is uniform over plus and minus half of this. */
  readonly resolutionM: number;
  /** The line that it is measured from: `FNL` is from `N`. */
  readonly from: Side;
}

/** One call from the north or south line and one from the east or west line, in either order. */
export type FootageCalls = readonly [FootageCall, FootageCall];

/** A section of the public land survey, as a record names it. */
export interface SectionReference {
  readonly township: number;
  /** A half township, as in `T 35½ S`. */
  readonly townshipHalf?: boolean;
  readonly townshipDir: 'N' | 'S';
  readonly range: number;
  /** A half range, as in `R 10½ E`. */
  readonly rangeHalf?: boolean;
  readonly rangeDir: 'E' | 'W';
  readonly section: number;
  /** Principal meridian by name (`Willamette`), or by its code in the section layer (`33`); absent where the record names none. */
  readonly meridian?: string;
  /** A government lot, as it is written: `3`, `12A`. */
  readonly lot?: string;
}

/** Vertices in frame metres, counter-clockwise and closed: the last repeats the first. */
export type Ring = ReadonlyArray<readonly [x: number, y: number]>;

/** Symmetric covariance in m²: east-east, east-north, north-north. */
export type PlaneCovariance = readonly [ee: number, en: number, nn: number];

/** Polygons of sections and their attributes, in the frame: every position in metres of `crs`. */
export interface SectionFeatures {
  /** The file's name, for messages; feature n of it is `features[n − 1]`. */
  readonly source: string;
  readonly crs: Crs;
  readonly features: ReadonlyArray<{
    readonly geometry: Geometry | null;
    readonly properties: Readonly<Record<string, string | number | boolean | null>>;
  }>;
}

/** A place that two footage calls lead to. Frame metres. */
export interface CalledPlace {
  readonly x: number;
  readonly y: number;
  /** Sum of the three that follow. */
  readonly cov: PlaneCovariance;
  /** Of the calls' last digits. */
  readonly roundingCov: PlaneCovariance;
  /** Of the measuring on the ground. */
  readonly measurementCov: PlaneCovariance;
  /** Of the corners of the section layer. */
  readonly layerCov: PlaneCovariance;
  /** Metres that the place moves, east and north, for one metre more in the first call and in the second. */
  readonly byCall: readonly [first: readonly [dx: number, dy: number], second: readonly [dx: number, dy: number]];
  /** What a shift of each vertex of the layer that the lines rest on does to the place. */
  readonly byVertex: readonly VertexInfluence[];
}

export interface VertexInfluence {
  /** The vertex in the layer, frame metres. */
  readonly x: number;
  readonly y: number;
  /** Rows of the 2 × 2 Jacobian: place east by vertex east and north, place north by vertex east and north. */
  readonly jacobian: readonly [xByX: number, xByY: number, yByX: number, yByY: number];
}

export type CornerName = 'NE' | 'NW' | 'SE' | 'SW';

/** A point of the ground plane, metres. */
export type PlanePoint = readonly [east: number, north: number];

/** Metres on the ground about a section: true east and true north of its middle, at height 0. */
export interface GroundPlane {
  readonly crs: Crs;
  toPlane(x: number, y: number): [east: number, north: number];
  toFrame(east: number, north: number): [x: number, y: number];
  /** Frame metres for plane metres in the middle: x by east and north, y by east and north. */
  readonly jacobian: readonly [number, number, number, number];
}

/** A section with its corners and lines found. Vertices are in its ground plane, counter-clockwise, not repeated. */
export interface Section {
  /** File and feature, for messages. */
  readonly where: string;
  /** As in `section 3, T35S R29E`. */
  readonly name: string;
  readonly plane: GroundPlane;
  readonly vertices: readonly PlanePoint[];
  /** The same vertices in frame metres, as they stand in the layer. */
  readonly frameVertices: ReadonlyArray<readonly [x: number, y: number]>;
  /** Indices of the vertices of each line, both corners included: west to east for N and S, south to north for E and W. */
  readonly lines: Readonly<Record<Side, readonly number[]>>;
  /** Index of the quarter corner of each line where the layer has a vertex for it, else null: then its midpoint serves. */
  readonly quarters: Readonly<Record<Side, number | null>>;
  /** Likewise the two sixteenth corners, in the order of the line. */
  readonly sixteenths: Readonly<Record<Side, readonly [number | null, number | null]>>;
  /** Lines too crooked to measure from (meandered along water, broken by a grant). */
  readonly irregular: readonly Side[];
  readonly notes: readonly string[];
}
