import { areaM2 } from './area.js';
import { steadyCovariance } from './parts.js';
import type { Area, Covariance } from './types.js';

interface Rule { readonly nodes: readonly number[]; readonly weights: readonly number[] }

/** 7-point Gauss–Hermite quadrature for the standard normal weight. Source: Abramowitz & Stegun, table 25.10, nodes × √2, weights ÷ √π. */
const SEVEN: Rule = {
  nodes: [-3.7504397177257, -2.3667594107345, -1.15440539473997, 0, 1.15440539473997, 2.3667594107345, 3.7504397177257],
  weights: [5.4826885597222e-4, 0.0307571239675865, 0.240123178605013, 0.457142857142857, 0.240123178605013, 0.0307571239675865, 5.4826885597222e-4],
};
/** 3-point, likewise. */
const THREE: Rule = { nodes: [-Math.sqrt(3), 0, Math.sqrt(3)], weights: [1 / 6, 2 / 3, 1 / 6] };
/**
 * Up to this share of an area's width its blur needs three shifts each way: where two edges meet, they misjudge what
 * crosses by a ninth of a σ, here 2e−3 of the area.
 */
const NARROW = 0.02;

interface Shifted {
  readonly weight: number;
  readonly area: Area;
}

/** Copies of an area, shifted, that stand for one whose place is off by a Gaussian error; weights sum to 1, mean 0, covariance kept. */
export function blurShifts(area: Area, cov: Covariance): Shifted[] {
  const [ee, en, nn] = steadyCovariance(cov);
  const l11 = Math.sqrt(ee);
  const l21 = en / l11;
  const l22 = Math.sqrt(nn - l21 * l21);
  const { nodes, weights } = Math.sqrt(Math.max(ee, nn) / areaM2(area)) < NARROW ? THREE : SEVEN;
  return nodes.flatMap((u, i) => nodes.map((v, j) => ({ weight: weights[i]! * weights[j]!, area: shiftedArea(area, l11 * u, l21 * u + l22 * v) })));
}

/** An area moved east and north, metres. */
function shiftedArea(area: Area, dx: number, dy: number): Area {
  return area.map((rings) => rings.map((ring) => ring.map(([x, y]) => [x + dx, y + dy] as const)));
}
