import { ellipseOfCovariance, scaledEllipse } from './ellipse.js';
import { localFrame } from './localFrame.js';
import { placeParts } from './parts.js';
import { ellipseExcess, region95, type EllipseExcess } from './region95.js';
import type { Area, Covariance, Density, Ellipse, GaussianPart } from './types.js';

/** The ellipse to draw for a density, and how much more it is than the 95 % region that it encloses. */
export interface DrawnEllipse {
  readonly ellipse: Ellipse;
  readonly excess: EllipseExcess;
}

/**
 * What was found for shapes that come again: a rounded place by its half widths in σ, an area by being the same object.
 * One for a batch of densities; results do not depend on what it holds.
 */
export interface KnownShapes {
  readonly rounded: Map<string, { readonly scale: number; readonly excess: EllipseExcess }>;
  readonly areas: Map<Area, { readonly cov: Covariance | undefined; readonly drawn: DrawnEllipse }>;
}

export function noShapes(): KnownShapes {
  return { rounded: new Map(), areas: new Map() };
}

/** An ellipse that encloses its region holds 95 % of one Gaussian and has its area. */
const EXACT: EllipseExcess = Object.freeze({ massHeld: 0.95, areaRatio: 1 });
/** Half widths of a rounding are taken in steps of 1/200 of themselves; the scale changes by less than 0.05 % in one. */
const STEPS_PER_E = 200;
/** A rounding narrower than this, in σ, counts as none along its axis: its share of the variance is below 1e−3. */
const LEAST_HALF_WIDTH = 0.05;

/**
 * The ellipse that is drawn for a density, blunders left out: of its mean and covariance's shape, just enclosing the region
 * that holds 95 % (`region95`). For one Gaussian it is that region, half-axes 2.4477 σ; otherwise it is more than the
 * region by what `excess` says.
 */
export function drawnEllipse(density: Density, known: KnownShapes = noShapes()): DrawnEllipse {
  const parts = placeParts(density);
  const only = parts.length === 1 ? parts[0]! : null;
  if (only?.kind === 'gaussian') return only.rounding ? ofRounded(only, known) : { ellipse: ellipseOfCovariance(only.x, only.y, only.cov), excess: EXACT };
  if (only?.kind !== 'area') return found(density);
  const before = known.areas.get(only.area);
  if (before && same(before.cov, only.cov)) return before.drawn;
  const drawn = found(density);
  known.areas.set(only.area, { cov: only.cov, drawn });
  return drawn;
}

/** In its own coordinates, in σ, a rounded place is known by the half widths of its rounding. */
function ofRounded(part: GaussianPart, known: KnownShapes): DrawnEllipse {
  const [first, second] = localFrame(part).halfWidths.map(stepped) as [number, number];
  const key = `${first} ${second}`;
  let shape = known.rounded.get(key);
  if (!shape) {
    const cov = [1 + first ** 2 / 3, 0, 1 + second ** 2 / 3] as const;
    const { ellipse, excess } = found({ parts: [{ kind: 'gaussian', role: 'place', weight: 1, x: 0, y: 0, cov, rounding: [[first, 0], [0, second]] }] });
    shape = { scale: ellipse.semiMajM / Math.sqrt(Math.max(cov[0], cov[2])), excess };
    known.rounded.set(key, shape);
  }
  return { ellipse: scaledEllipse(part.x, part.y, { cov: part.cov, scale: shape.scale }), excess: shape.excess };
}

function stepped(halfWidth: number): number {
  return halfWidth < LEAST_HALF_WIDTH ? 0 : Math.exp(Math.round(Math.log(halfWidth) * STEPS_PER_E) / STEPS_PER_E);
}

function found(density: Density): DrawnEllipse {
  const region = region95(density);
  const ellipse = region.enclosing();
  return { ellipse, excess: ellipseExcess(density, ellipse, region) };
}

function same(a: Covariance | undefined, b: Covariance | undefined): boolean {
  return a === b || (a !== undefined && b !== undefined && a.every((value, i) => value === b[i]));
}
