import { steadyCovariance } from './parts.js';
import type { Covariance, GaussianPart, HalfAxes } from './types.js';

/**
 * Coordinates in which a Gaussian part is a product: of two standard normal variables, each plus a uniform one. With the
 * part's mean as origin, frame = matrix × local.
 */
export interface LocalFrame {
  readonly x: number;
  readonly y: number;
  /** Frame metres by local units, row by row: east by first and second, north by first and second. */
  readonly matrix: readonly [number, number, number, number];
  /** Local units by frame metres. */
  readonly inverse: readonly [number, number, number, number];
  /** m² of one square local unit. */
  readonly det: number;
  /** Half widths of the uniform variables; 0 for a plain Gaussian. */
  readonly halfWidths: readonly [number, number];
}

/** The Gaussian part of a rounded place is taken at least this wide against the half width of its rounding: its edges stay smooth. */
export const LEAST_CORE_SHARE = 0.01;
/**
 * Cosine of the angle between the half axes, in units of the Gaussian's σ, up to which they count as square. Digits of
 * any conformal projection are square; calls from lines that meet askew may not be.
 */
const SQUARE_COSINE = 0.05;

/**
 * The local frame of a part. A parallelogram that is not a rectangle in units of the Gaussian's σ is replaced by a
 * rectangle along its principal axes with the same covariance.
 */
export function localFrame({ x, y, cov, rounding }: Pick<GaussianPart, 'x' | 'y' | 'cov' | 'rounding'>): LocalFrame {
  const core = coreCovariance(cov, rounding);
  const [ee, en, nn] = core;
  const l11 = Math.sqrt(ee);
  const l21 = en / l11;
  const l22 = Math.sqrt(nn - l21 * l21);
  let [cos, sin] = [1, 0];
  let halfWidths: [number, number] = [0, 0];
  if (rounding) {
    const [first, second] = rounding.map(([east, north]) => [east / l11, (north - (l21 * east) / l11) / l22] as [number, number]) as [[number, number], [number, number]];
    ({ cos, sin, halfWidths } = rectangle(first, second));
  }
  // Lower triangle of Cholesky times the rotation.
  const matrix = [l11 * cos, -l11 * sin, l21 * cos + l22 * sin, -l21 * sin + l22 * cos] as const;
  const det = l11 * l22;
  return { x, y, matrix, inverse: [matrix[3] / det, -matrix[1] / det, -matrix[2] / det, matrix[0] / det], det, halfWidths };
}

/** Direction and half widths of the rectangle that stands for two half axes. */
function rectangle(first: readonly [number, number], second: readonly [number, number]): { cos: number; sin: number; halfWidths: [number, number] } {
  const [a, b] = [Math.hypot(...first), Math.hypot(...second)];
  const skew = first[0] * second[0] + first[1] * second[1];
  if (a === 0 && b === 0) return { cos: 1, sin: 0, halfWidths: [0, 0] };
  if (Math.abs(skew) <= SQUARE_COSINE * a * b) {
    // The longer one says the direction.
    const [cos, sin] = a >= b ? [first[0] / a, first[1] / a] : [second[1] / b, -second[0] / b];
    return { cos, sin, halfWidths: [a, b] };
  }
  const [ee, en, nn] = [first[0] ** 2 + second[0] ** 2, first[0] * first[1] + second[0] * second[1], first[1] ** 2 + second[1] ** 2];
  const angle = Math.atan2(2 * en, ee - nn) / 2;
  const radius = Math.hypot((ee - nn) / 2, en);
  const mean = (ee + nn) / 2;
  return { cos: Math.cos(angle), sin: Math.sin(angle), halfWidths: [Math.sqrt(mean + radius), Math.sqrt(Math.max(0, mean - radius))] };
}

/** What rounding leaves of a covariance: the Gaussian part, steadied. */
export function coreCovariance(cov: Covariance, rounding: HalfAxes | undefined): Covariance {
  if (!rounding) return steadyCovariance(cov);
  const spread = roundingCovariance(rounding);
  const least = 3 * LEAST_CORE_SHARE * LEAST_CORE_SHARE;
  return steadyCovariance(positive([cov[0] - spread[0] + least * spread[0], cov[1] - spread[1] + least * spread[1], cov[2] - spread[2] + least * spread[2]]));
}

/** Covariance of a place spread evenly over a parallelogram of these half axes, m². */
export function roundingCovariance([[ax, ay], [bx, by]]: HalfAxes): Covariance {
  return [(ax * ax + bx * bx) / 3, (ax * ay + bx * by) / 3, (ay * ay + by * by) / 3];
}

/** Rounding errors of the subtraction may leave a variance just below 0; more than that is no covariance. */
function positive([ee, en, nn]: Covariance): Covariance {
  const slack = 1e-9 * (Math.abs(ee) + Math.abs(nn)) + 1e-12;
  if (ee < -slack || nn < -slack) throw new Error('density: the rounding of a part is wider than its covariance');
  return [Math.max(ee, 0), en, Math.max(nn, 0)];
}
