import { ellipseOfCovariance } from './ellipse.js';
import { shapeOf } from './knownShapes.js';
import { densityMean } from './moments.js';
import { placeParts } from './parts.js';
import { ellipseExcess, region95, type EllipseExcess } from './region95.js';
import type { Area, Covariance, Density, DensityPart, Ellipse, GaussianPart } from './types.js';

/** The ellipse to draw for a density, and how much more it is than the 95 % region that it encloses. */
export interface DrawnEllipse {
  readonly ellipse: Ellipse;
  readonly excess: EllipseExcess;
}

/**
 * What was found for shapes that come again: Gaussians by their shape in round numbers, an area by being the same object.
 * One for a batch of densities; results do not depend on what it holds.
 */
export interface KnownShapes {
  readonly gaussians: Map<string, DrawnEllipse>;
  readonly areas: Map<Area, { readonly cov: Covariance | undefined; readonly drawn: DrawnEllipse }>;
}

export function noShapes(): KnownShapes {
  return { gaussians: new Map(), areas: new Map() };
}

/** An ellipse that encloses its region holds 95 % of one Gaussian and has its area. */
const EXACT: EllipseExcess = Object.freeze({ massHeld: 0.95, areaRatio: 1 });
/** A shape in round numbers lies within 1/100 of the narrowest σ of the true one; the ellipse is this much larger to hold it. */
const ROUND_NUMBERS = 1.004;

/**
 * The ellipse that is drawn for a density, blunders left out: of its mean and covariance's shape, just enclosing the region
 * that holds 95 % (`region95`). For one Gaussian it is that region, half-axes 2.4477 σ; otherwise it is more than the
 * region by what `excess` says, and the half-axes are good to half a per cent.
 */
export function drawnEllipse(density: Density, known: KnownShapes = noShapes()): DrawnEllipse {
  const parts = placeParts(density);
  const only = parts.length === 1 ? parts[0]! : null;
  if (only?.kind === 'gaussian' && !only.rounding) return { ellipse: ellipseOfCovariance(only.x, only.y, only.cov), excess: EXACT };
  if (parts.every(isGaussian)) return ofGaussians(density, parts, known);
  if (only?.kind !== 'area') return found(density, 1);
  const before = known.areas.get(only.area);
  if (before && same(before.cov, only.cov)) return before.drawn;
  const drawn = found(density, 1);
  known.areas.set(only.area, { cov: only.cov, drawn });
  return drawn;
}

function isGaussian(part: DensityPart): part is GaussianPart {
  return part.kind === 'gaussian';
}

function ofGaussians(density: Density, parts: readonly GaussianPart[], known: KnownShapes): DrawnEllipse {
  const { key, unitM, standard } = shapeOf(parts);
  let drawn = known.gaussians.get(key);
  if (!drawn) {
    drawn = found(standard(), ROUND_NUMBERS);
    known.gaussians.set(key, drawn);
  }
  const { semiMajM, semiMinM, azimDeg } = drawn.ellipse;
  return { ellipse: { ...densityMean(density), semiMajM: semiMajM * unitM, semiMinM: semiMinM * unitM, azimDeg }, excess: drawn.excess };
}

function found(density: Density, scale: number): DrawnEllipse {
  const region = region95(density);
  const enclosing = region.enclosing();
  const ellipse = { ...enclosing, semiMajM: enclosing.semiMajM * scale, semiMinM: enclosing.semiMinM * scale };
  return { ellipse, excess: ellipseExcess(density, ellipse, region) };
}

function same(a: Covariance | undefined, b: Covariance | undefined): boolean {
  return a === b || (a !== undefined && b !== undefined && a.every((value, i) => value === b[i]));
}
