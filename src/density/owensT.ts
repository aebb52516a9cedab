import { normalCdf } from '../numerics/special.js';

/** Nodes and weights of 20-point Gauss–Legendre quadrature on [−1, 1], the positive half. Source: Abramowitz & Stegun, table 25.4. */
const NODES = [
  0.07652652113349734, 0.22778585114164507, 0.37370608871541955, 0.5108670019508271, 0.636053680726515,
  0.7463319064601508, 0.8391169718222188, 0.912234428251326, 0.9639719272779138, 0.9931285991850949,
];
const WEIGHTS = [
  0.15275338713072584, 0.14917298647260374, 0.14209610931838204, 0.13168863844917664, 0.11819453196151841,
  0.10193011981724044, 0.08327674157670475, 0.06267204833410907, 0.04060142980038694, 0.017614007139152118,
];

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
  for (let i = 0; i < NODES.length; i++) {
    for (const node of [NODES[i]!, -NODES[i]!]) {
      const x = (a / 2) * (1 + node);
      sum += (WEIGHTS[i]! * Math.exp((-h * h * (1 + x * x)) / 2)) / (1 + x * x);
    }
  }
  return (sum * a) / (4 * Math.PI);
}
