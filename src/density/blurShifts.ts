import { steadyCovariance } from './parts.js';
import type { Area, Covariance } from './types.js';

/** 7-point Gauss–Hermite quadrature for the standard normal weight. Source: Abramowitz & Stegun, table 25.10, nodes × √2, weights ÷ √π. */
const NODES = [-3.7504397177257, -2.3667594107345, -1.15440539473997, 0, 1.15440539473997, 2.3667594107345, 3.7504397177257];
const WEIGHTS = [5.4826885597222e-4, 0.0307571239675865, 0.240123178605013, 0.457142857142857, 0.240123178605013, 0.0307571239675865, 5.4826885597222e-4];

export interface Shift {
  readonly weight: number;
  /** Metres east and north. */
  readonly dx: number;
  readonly dy: number;
}

/** Shifts that stand for a Gaussian error of this covariance; weights sum to 1, mean 0, covariance kept. */
export function blurShifts(cov: Covariance): Shift[] {
  const [ee, en, nn] = steadyCovariance(cov);
  const l11 = Math.sqrt(ee);
  const l21 = en / l11;
  const l22 = Math.sqrt(nn - l21 * l21);
  return NODES.flatMap((u, i) => NODES.map((v, j) => ({ weight: WEIGHTS[i]! * WEIGHTS[j]!, dx: l11 * u, dy: l21 * u + l22 * v })));
}

/** An area moved east and north, metres. */
export function shiftedArea(area: Area, dx: number, dy: number): Area {
  return area.map((rings) => rings.map((ring) => ring.map(([x, y]) => [x + dx, y + dy] as const)));
}
