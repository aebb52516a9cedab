/** Rings of a polygon in frame metres: the first is the outer one, the others are holes; closed. */
export type Rings = ReadonlyArray<ReadonlyArray<readonly [number, number]>>;
/** Several polygons, none overlapping another. */
export type Area = readonly Rings[];

/** Symmetric 2 × 2 covariance in m²: east-east, east-north, north-north. */
export type Covariance = readonly [ee: number, en: number, nn: number];

/** Half axes of a parallelogram, frame metres: east and north of each. */
export type HalfAxes = readonly [first: readonly [east: number, north: number], second: readonly [east: number, north: number]];

/** `cov` of a Gaussian is the whole of its covariance, what `rounding` adds to it included. */
export interface GaussianPart {
  readonly kind: 'gaussian';
  readonly weight: number;
  readonly x: number;
  readonly y: number;
  readonly cov: Covariance;
  /**
   * That part of the error which is no Gaussian but even over a parallelogram: the digits given. Without it all of `cov`
   * is Gaussian. Whoever leaves it aside has a Gaussian of the same mean and covariance.
   */
  readonly rounding?: HalfAxes;
}

/** A place anywhere within a radius, all of it alike. */
export interface DiscPart {
  readonly kind: 'disc';
  readonly weight: number;
  readonly x: number;
  readonly y: number;
  readonly radiusM: number;
}

/** A place anywhere in an area, all of it alike. */
export interface AreaPart {
  readonly kind: 'area';
  readonly weight: number;
  readonly area: Area;
  /** Covariance of the error of the area itself (section lines that lie elsewhere), which blurs its edges; none without. */
  readonly cov?: Covariance;
}

export type DensityPart = GaussianPart | DiscPart | AreaPart;

/** Where something may be: a mixture whose weights sum to 1. Parts marked `blunder` are left out of the drawn ellipse. */
export interface Density {
  readonly parts: ReadonlyArray<DensityPart & { readonly role: 'place' | 'blunder' }>;
}

/** An ellipse in the frame; half-axes in metres; azimuth of the major axis clockwise from grid north, degrees in [0, 180). */
export interface Ellipse {
  readonly x: number;
  readonly y: number;
  readonly semiMajM: number;
  readonly semiMinM: number;
  readonly azimDeg: number;
}
