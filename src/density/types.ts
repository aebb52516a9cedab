/** Rings of a polygon in frame metres: the first is the outer one, the others are holes; closed. */
export type Rings = ReadonlyArray<ReadonlyArray<readonly [number, number]>>;
/** Several polygons, none overlapping another. */
export type Area = readonly Rings[];

/** Symmetric 2 × 2 covariance in m²: east-east, east-north, north-north. */
export type Covariance = readonly [ee: number, en: number, nn: number];

export type DensityPart =
  | { readonly kind: 'gaussian'; readonly weight: number; readonly x: number; readonly y: number; readonly cov: Covariance }
  | { readonly kind: 'disc'; readonly weight: number; readonly x: number; readonly y: number; readonly radiusM: number }
  | { readonly kind: 'area'; readonly weight: number; readonly area: Area };

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
