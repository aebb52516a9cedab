import { symmetricEigen2 } from '../numerics/eigen2.js';
import { densityCovariance, densityMean } from './moments.js';
import { massIn } from './massIn.js';
import { placeParts } from './parts.js';
import type { Covariance, Density, Ellipse } from './types.js';

/** Share of the density, its blunders left out, that an ellipse encloses. */
export const ELLIPSE_MASS = 0.95;
/** Half-axis of the 95 % ellipse of a bivariate Gaussian in σ: √(−2 ln 0.05) = 2.4477. */
export const ELLIPSE_SIGMAS = Math.sqrt(-2 * Math.log(1 - ELLIPSE_MASS));
/** Corners of the polygon in which a mixture's mass is counted; it lies inside the ellipse, so the ellipse holds more. */
const COUNTING_CORNERS = 360;
/** Halvings of the interval for the scale: far below a millimetre. */
const HALVINGS = 40;

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
  if (parts.length === 1 && parts[0]!.kind === 'gaussian') return ellipseOfCovariance(x, y, cov);
  const place: Density = { parts: parts.map((part) => ({ ...part, role: 'place' })) };
  const holds = (scale: number): number => massIn(place, [[ellipseRing(scaledEllipse(x, y, { cov, scale }), COUNTING_CORNERS)]]);
  let low = 0;
  // By Chebyshev's inequality in two dimensions at most 2/k² lies outside k, so k = √40 is always enough.
  let high = Math.sqrt(2 / (1 - ELLIPSE_MASS)) * 1.001;
  for (let i = 0; i < HALVINGS; i++) {
    const middle = (low + high) / 2;
    if (holds(middle) < ELLIPSE_MASS) low = middle; else high = middle;
  }
  return scaledEllipse(x, y, { cov, scale: high });
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

function scaledEllipse(x: number, y: number, { cov, scale }: { cov: Covariance; scale: number }): Ellipse {
  const { majorVariance, minorVariance, azimDeg } = symmetricEigen2(cov);
  return { x, y, azimDeg, semiMajM: scale * Math.sqrt(majorVariance), semiMinM: scale * Math.sqrt(minorVariance) };
}
