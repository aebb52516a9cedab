import { symmetricEigen2 } from '../numerics/eigen2.js';
import { densityCovariance, densityMean } from './moments.js';
import { massInEllipse } from './massInEllipse.js';
import { placeParts } from './parts.js';
import type { Covariance, Density, Ellipse } from './types.js';

/** Share of the density, its blunders left out, that an ellipse encloses. */
export const ELLIPSE_MASS = 0.95;
/** Half-axis of the 95 % ellipse of a bivariate Gaussian in σ: √(−2 ln 0.05) = 2.4477. */
export const ELLIPSE_SIGMAS = Math.sqrt(-2 * Math.log(1 - ELLIPSE_MASS));
/** Share of the mass within which the scale of a mixture's ellipse is found. */
const MASS_TOLERANCE = 1e-6;
/** Steps of the search at most; it needs about six. */
const MOST_STEPS = 60;

/** 95 % ellipse of a Gaussian. */
export function ellipseOfCovariance(x: number, y: number, cov: Covariance): Ellipse {
  return scaledEllipse(x, y, { cov, scale: ELLIPSE_SIGMAS });
}

/**
 * An ellipse that encloses 95 % of the density without its blunder share: for one Gaussian the half-axes are 2.4477 σ;
 * for a mixture, a disc or an area it has the centre and the shape of the covariance and is scaled until it holds 95 %.
 * Not the smallest such ellipse: two candidate places are spanned by one long ellipse.
 */
export function ellipse95(density: Density): Ellipse {
  const parts = placeParts(density);
  const { x, y } = densityMean(density);
  const cov = densityCovariance(density);
  const only = parts.length === 1 ? parts[0]! : null;
  if (only?.kind === 'gaussian' && !only.rounding) return ellipseOfCovariance(x, y, cov);
  const place: Density = { parts: parts.map((part) => ({ ...part, role: 'place' })) };
  return scaledEllipse(x, y, { cov, scale: scaleHolding((scale) => massInEllipse(place, scaledEllipse(x, y, { cov, scale }))) });
}

/** Scale at which the mass comes to 95 %, never below it; by regula falsi with halved ends (Illinois), from 2.4477 σ outwards. */
function scaleHolding(massAt: (scale: number) => number): number {
  let [low, lowMass] = [0, -ELLIPSE_MASS];
  let [high, highMass] = [ELLIPSE_SIGMAS, massAt(ELLIPSE_SIGMAS) - ELLIPSE_MASS];
  // By Chebyshev's inequality in two dimensions at most 2/k² lies outside k, so √40 is always enough.
  while (highMass < 0) {
    [low, lowMass] = [high, highMass];
    high *= 1.2;
    highMass = massAt(high) - ELLIPSE_MASS;
  }
  let reached = highMass;
  for (let i = 0; i < MOST_STEPS && reached > MASS_TOLERANCE; i++) {
    const scale = (low * highMass - high * lowMass) / (highMass - lowMass);
    const mass = massAt(scale) - ELLIPSE_MASS;
    if (mass < 0) {
      if (low > 0) highMass /= 2;
      [low, lowMass] = [scale, mass];
    } else {
      lowMass /= 2;
      [high, highMass, reached] = [scale, mass, mass];
    }
  }
  return high;
}

/** Closed counter-clockwise ring of n corners on the ellipse (n + 1 points, the first again at the end). */
export function ellipseRing(ellipse: Ellipse, n: number): Array<[number, number]> {
  const azimuth = (ellipse.azimDeg * Math.PI) / 180;
  const [sin, cos] = [Math.sin(azimuth), Math.cos(azimuth)];
  const ring = Array.from({ length: n }, (_, i): [number, number] => {
    const t = (2 * Math.PI * i) / n;
    const major = ellipse.semiMajM * Math.cos(t);
    const minor = ellipse.semiMinM * Math.sin(t);
    // The minor axis lies a quarter turn counter-clockwise of the major one.
    return [ellipse.x + major * sin - minor * cos, ellipse.y + major * cos + minor * sin];
  });
  ring.push([...ring[0]!]);
  return ring;
}

/** Ellipse about a centre whose half-axes are `scale` σ of a covariance. */
export function scaledEllipse(x: number, y: number, { cov, scale }: { cov: Covariance; scale: number }): Ellipse {
  const { majorVariance, minorVariance, azimDeg } = symmetricEigen2(cov);
  return { x, y, azimDeg, semiMajM: scale * Math.sqrt(majorVariance), semiMinM: scale * Math.sqrt(minorVariance) };
}
