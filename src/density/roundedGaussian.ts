import { normalCdf, normalPdf } from '../numerics/special.js';

/** Below this half width the uniform part changes nothing: its share of the variance is under 1e−7. */
const LEAST_HALF_WIDTH = 5e-4;

/** Density at x of a standard normal variable plus a uniform one on [−halfWidth, halfWidth]. */
export function roundedPdf(x: number, halfWidth: number): number {
  if (halfWidth < LEAST_HALF_WIDTH) return normalPdf(x);
  // From the tail's side, where a difference of small numbers keeps its digits.
  const size = Math.abs(x);
  return (normalCdf(halfWidth - size) - normalCdf(-halfWidth - size)) / (2 * halfWidth);
}

/** Chance that a standard normal variable plus a uniform one on [−halfWidth, halfWidth] is at most x. */
export function roundedCdf(x: number, halfWidth: number): number {
  if (halfWidth < LEAST_HALF_WIDTH) return normalCdf(x);
  if (x > 0) return 1 - roundedCdf(-x, halfWidth);
  return (integratedCdf(x + halfWidth) - integratedCdf(x - halfWidth)) / (2 * halfWidth);
}

/** ∫ Φ from −∞ to z: z Φ(z) + φ(z). */
function integratedCdf(z: number): number {
  return z * normalCdf(z) + normalPdf(z);
}
