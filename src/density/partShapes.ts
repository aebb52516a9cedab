import { areaBounds, areaM2 } from './area.js';
import { discArea } from './discArea.js';
import { coreCovariance, localFrame, type LocalFrame } from './localFrame.js';
import { placeParts } from './parts.js';
import type { Area, Covariance, Density, DensityPart, GaussianPart } from './types.js';

/** Linear coordinates in which a density's parts are rastered: frame = matrix × basis. Row by row as in `LocalFrame`. */
export interface Basis {
  readonly matrix: LocalFrame['matrix'];
  readonly inverse: LocalFrame['inverse'];
  /** m² of one square basis unit. */
  readonly det: number;
}

/** Box in basis units that holds all but a thousandth of a part. */
export interface Reach {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
  /** A raster's cell follows the part when it is at most this wide and high. */
  readonly stepX: number;
  readonly stepY: number;
}

export type PartShape = Reach & { readonly weight: number } & (
  /** A product of two distributions along the axes of the basis. */
  | { readonly kind: 'product'; readonly centre: readonly [number, number]; readonly sd: readonly [number, number]; readonly halfWidth: readonly [number, number] }
  /** A Gaussian that leans in this basis: its own frame says its density. */
  | { readonly kind: 'leaning'; readonly frame: LocalFrame }
  /** Vertices in basis units; blur along each axis in the same. */
  | { readonly kind: 'area'; readonly area: Area; readonly sizeM2: number; readonly blurSd: readonly [number, number] }
);

/** σ that a part is followed out; beyond lies less than a thousandth of it. */
const REACH_SIGMAS = 3.5;
/** Lean, as a correlation, up to which a part counts as a product: it turns its axes by a degree at most. */
const LEAN = 0.02;

/**
 * Ranks are those of a density whose edges are blurred by at least this share of a rounding's half width: on flat ground
 * a place counts as less likely the nearer it is to the edge.
 */
export const RANK_SD_OF_HALF_WIDTH = 1 / 25;

/** Cells to a standard deviation of a Gaussian, and across an area. */
export interface Fineness {
  readonly perSd: number;
  readonly acrossArea: number;
}

/** The parts of role `place`, their weights scaled to sum to 1, in a basis that makes the heaviest Gaussian a product. */
export function partShapes(density: Density, fineness: Fineness): { readonly basis: Basis; readonly shapes: readonly PartShape[] } {
  const parts = placeParts(density);
  const basis = basisOf(parts);
  return { basis, shapes: parts.map((part) => (part.kind === 'gaussian' ? gaussianShape(part, basis, fineness) : areaShape(part, basis, fineness))) };
}

function basisOf(parts: readonly DensityPart[]): Basis {
  const gaussians = parts.filter((part): part is GaussianPart => part.kind === 'gaussian');
  if (gaussians.length > 0) return localFrame(gaussians.reduce((a, b) => (b.weight > a.weight ? b : a)));
  const blurred = parts.find((part) => part.kind === 'area' && part.cov !== undefined);
  const [ee, en, nn] = blurred?.kind === 'area' && blurred.cov ? blurred.cov : [1, 0, 1];
  // Along the principal axes of the blur its two directions are independent.
  const angle = Math.atan2(2 * en, ee - nn) / 2;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  return { matrix: [cos, -sin, sin, cos], inverse: [cos, sin, -sin, cos], det: 1 };
}

function gaussianShape(part: GaussianPart, { inverse }: Basis, { perSd }: Fineness): PartShape {
  const frame = localFrame(part);
  const centre = turned(inverse, part.x, part.y);
  const [a, b] = turned(inverse, frame.matrix[0], frame.matrix[2]);
  const [c, d] = turned(inverse, frame.matrix[1], frame.matrix[3]);
  const [first, second] = frame.halfWidths;
  const total = [Math.hypot(a * Math.sqrt(1 + first ** 2 / 3), c * Math.sqrt(1 + second ** 2 / 3)), Math.hypot(b * Math.sqrt(1 + first ** 2 / 3), d * Math.sqrt(1 + second ** 2 / 3))] as const;
  const sd = [Math.hypot(a, c), Math.hypot(b, d)] as const;
  const reach = [REACH_SIGMAS * sd[0] + Math.abs(a) * first + Math.abs(c) * second, REACH_SIGMAS * sd[1] + Math.abs(b) * first + Math.abs(d) * second] as const;
  const box = {
    weight: part.weight, west: centre[0] - reach[0], east: centre[0] + reach[0], south: centre[1] - reach[1], north: centre[1] + reach[1],
    stepX: cellOf(total[0], sd[0], perSd), stepY: cellOf(total[1], sd[1], perSd),
  };
  const upright = Math.abs(a * b + c * d) <= LEAN * sd[0] * sd[1];
  const rounded = first > 0 || second > 0;
  if (upright && (!rounded || Math.abs(b) <= LEAN * Math.abs(a))) return { ...box, kind: 'product', centre, sd, halfWidth: [Math.abs(a) * first, Math.abs(d) * second] };
  if (upright && Math.abs(a) <= LEAN * Math.abs(b)) return { ...box, kind: 'product', centre, sd, halfWidth: [Math.abs(c) * second, Math.abs(b) * first] };
  return { ...box, kind: 'leaning', frame };
}

/** Small against the whole of a part and, where its edges are sharper, against these; but no edge is followed finer than its rank is. */
function cellOf(total: number, sd: number, perSd: number): number {
  return Math.min(total / perSd, Math.max(sd, (RANK_SD_OF_HALF_WIDTH * total * Math.sqrt(3))));
}

function areaShape(part: Exclude<DensityPart, GaussianPart>, { inverse }: Basis, { acrossArea }: Fineness): PartShape {
  const whole = part.kind === 'disc' ? discArea(part) : part.area;
  const area = whole.map((rings) => rings.map((ring) => ring.map(([x, y]) => turned(inverse, x, y))));
  const { west, south, east, north } = areaBounds(area);
  const blurSd = part.kind === 'area' && part.cov ? axisSds(inverse, coreCovariance(part.cov, undefined)) : [0, 0] as const;
  const [stepX, stepY] = [(east - west) / acrossArea, (north - south) / acrossArea];
  // Two cells more all round, so that the outline closes inside the raster.
  const [marginX, marginY] = [REACH_SIGMAS * blurSd[0] + 2 * stepX, REACH_SIGMAS * blurSd[1] + 2 * stepY];
  return {
    kind: 'area', weight: part.weight, area, sizeM2: areaM2(whole), blurSd, stepX, stepY,
    west: west - marginX, east: east + marginX, south: south - marginY, north: north + marginY,
  };
}

function axisSds([a, b, c, d]: LocalFrame['inverse'], [ee, en, nn]: Covariance): readonly [number, number] {
  return [Math.sqrt(a * a * ee + 2 * a * b * en + b * b * nn), Math.sqrt(c * c * ee + 2 * c * d * en + d * d * nn)];
}

function turned([a, b, c, d]: LocalFrame['inverse'], x: number, y: number): readonly [number, number] {
  return [a * x + b * y, c * x + d * y];
}
