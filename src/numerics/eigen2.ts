export interface Eigen2 {
  readonly majorVariance: number;
  readonly minorVariance: number;
  /** Azimuth of the major axis, degrees in [0, 180) clockwise from north; 0 where both variances are equal. */
  readonly azimDeg: number;
}

/**
 * Principal variances of a symmetric 2 × 2 covariance (east-east, east-north, north-north) and the azimuth of the larger.
 * A variance that rounding made slightly negative comes back as 0. NaN in, NaN out.
 */
export function symmetricEigen2([ee, en, nn]: readonly [ee: number, en: number, nn: number]): Eigen2 {
  const mean = (ee + nn) / 2;
  const half = (nn - ee) / 2;
  const radius = Math.hypot(half, en);
  // The azimuth θ from north satisfies tan 2θ = 2 en / (nn − ee).
  const azimDeg = radius === 0 ? 0 : ((Math.atan2(en, half) * 90) / Math.PI + 180) % 180;
  return { majorVariance: mean + radius, minorVariance: Math.max(0, mean - radius), azimDeg };
}
