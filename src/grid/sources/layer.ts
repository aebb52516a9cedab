/**
 * What readings have to do with each other if the field comes from a layer of poles below them, of independent random
 * strengths and everywhere equally strong: the least-norm solution for equivalent sources on that layer is the best linear
 * estimate under this covariance, so no lattice of sources has to be laid or solved for. Heights enter exactly.
 *
 * A second, deep layer stands for geology, and a constant for the level that the survey does not know.
 *
 * Source: Dampney (1969), The equivalent source technique, Geophysics 34, 39-53; Moritz (1980), Advanced Physical
 * Geodesy, ch. 11 (least norm and collocation are one).
 */
export interface Layer {
  /** Of the shallow layer below the level, metres. */
  readonly depthM: number;
  /** Of the deep one. */
  readonly deepM: number;
}

/** Variance of the deep layer's field and of the unknown level, as shares of the shallow layer's. Measured: 0 to 3 give rmse within 3 % of each other. */
export const DEEP_SHARE = 0.3;
export const LEVEL_SHARE = 1;
/** Depth of the deep layer, in line spacings: anomalies of that width are known between lines anyway. */
export const DEEP_SPACINGS = 3;

/** Covariance of two values, in units of the shallow layer's variance at the level; `up` is the sum of their heights above it. */
export function layerCovariance({ depthM, deepM }: Layer, squaredM2: number, up: number): number {
  return decay(squaredM2, up, 2 * depthM) + DEEP_SHARE * decay(squaredM2, up, 2 * deepM) + LEVEL_SHARE;
}

/** H D² / (r² + H²)^(3/2) with H = D + up: the integral of k e^(−kH) J₀(kr) over k, scaled to 1 at r = 0, up = 0. */
function decay(squaredM2: number, up: number, doubledM: number): number {
  const h = doubledM + up;
  const a = h * h + squaredM2;
  return (doubledM * doubledM * h) / (a * Math.sqrt(a));
}

/** Covariance of a value with the strength of the shallow layer at a place, per root of area; its square integrates to 1 at the level. */
export function layerKernel({ depthM }: Layer, squaredM2: number, up: number): number {
  const h = depthM + up;
  const a = h * h + squaredM2;
  return (Math.sqrt(2 / Math.PI) * depthM * h) / (a * Math.sqrt(a));
}
