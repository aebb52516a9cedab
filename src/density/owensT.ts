import { normalCdf } from '../numerics/special.js';
import { LEGENDRE_NODES, LEGENDRE_WEIGHTS } from './legendre20.js';

/**
 * Owen's T: 1/2π ∫₀ᵃ exp(−h²(1 + x²)/2)/(1 + x²) dx, to about 1e−12.
 * Source: Owen (1956), Tables for computing bivariate normal probabilities, Ann. Math. Stat. 27.
 */
export function owensT(h: number, a: number): number {
  if (a < 0) return -owensT(h, -a);
  const size = Math.abs(h);
  if (a <= 1) return quadrature(size, a);
  // Beyond 1 the reciprocal takes over (Owen, eq. 2.3).
  const [p, q] = [normalCdf(size), normalCdf(a * size)];
  return (p + q) / 2 - p * q - quadrature(a * size, 1 / a);
}

function quadrature(h: number, a: number): number {
  // exp(−h²/2) is below 1e−16 there.
  if (h > 8.5) return 0;
  let sum = 0;
  for (let i = 0; i < LEGENDRE_NODES.length; i++) {
    const x = (a / 2) * (1 + LEGENDRE_NODES[i]!);
    sum += (LEGENDRE_WEIGHTS[i]! * Math.exp((-h * h * (1 + x * x)) / 2)) / (1 + x * x);
  }
  return (sum * a) / (4 * Math.PI);
}
