import { areaM2 } from './area.js';
import { blurShifts } from './blurShifts.js';
import { discArea } from './discArea.js';
import { LEGENDRE_NODES, LEGENDRE_WEIGHTS } from './legendre20.js';
import { localFrame } from './localFrame.js';
import { roundedCdf, roundedPdf } from './roundedGaussian.js';
import type { Area, AreaPart, Density, Ellipse, GaussianPart, Rings } from './types.js';
import { unitCircleOverlap } from './unitCircleOverlap.js';

/** σ beyond the rounding's edges at which nothing is left: 1e−12 of the mass. */
const REACH = 7;
/** A panel of 20 nodes spans at most this many σ: error below 1e−8 for a Gaussian anywhere in or across the ellipse. */
const PANEL = 10;

/**
 * Mass of the whole density, blunders included, that lies in an ellipse: within 1e−7 for Gaussians, rounded or not, exact
 * for areas, within about 3e−3 for areas with blurred edges, within 1e−5 for discs.
 */
export function massInEllipse(density: Density, ellipse: Ellipse): number {
  if (!(ellipse.semiMajM > 0 && ellipse.semiMinM > 0)) return 0;
  let sum = 0;
  for (const part of density.parts) {
    if (part.weight === 0) continue;
    if (part.kind === 'gaussian') sum += part.weight * gaussianInside(part, ellipse);
    else sum += part.weight * areaInside(part.kind === 'disc' ? { kind: 'area', weight: 1, area: discArea(part) } : part, ellipse);
  }
  return Math.min(1, Math.max(0, sum));
}

/** Vectors of the half axes, row by row: east by major and minor, north by major and minor. */
function halfAxes({ semiMajM, semiMinM, azimDeg }: Ellipse): [number, number, number, number] {
  const azimuth = (azimDeg * Math.PI) / 180;
  const [sin, cos] = [Math.sin(azimuth), Math.cos(azimuth)];
  return [semiMajM * sin, -semiMinM * cos, semiMajM * cos, semiMinM * sin];
}

/**
 * In the part's own coordinates it is a product of two distributions, so one of the two integrals has a closed form; the
 * other runs over the angle whose sine is the place along the ellipse, which takes the root out of its edge.
 */
function gaussianInside(part: GaussianPart, ellipse: Ellipse): number {
  const frame = localFrame(part);
  const [a, b, c, d] = frame.inverse;
  const [dx, dy] = [ellipse.x - frame.x, ellipse.y - frame.y];
  const [ax, bx, ay, by] = halfAxes(ellipse);
  // Half axes in local units, and the matrix whose quadratic form is the ellipse.
  const [u1, u2, v1, v2] = [a * ax + b * ay, a * bx + b * by, c * ax + d * ay, c * bx + d * by];
  const [uu, uv, vv] = [u1 * u1 + u2 * u2, u1 * v1 + u2 * v2, v1 * v1 + v2 * v2];
  const centre = [a * dx + b * dy, c * dx + d * dy] as const;
  // The longer way outside: across it the closed form is flat but for its two edges.
  const swap = vv > uu;
  const [outer, inner] = swap ? [vv, uu] : [uu, vv];
  const [outerCentre, innerCentre] = swap ? [centre[1], centre[0]] : centre;
  const [outerHalf, innerHalf] = swap ? [frame.halfWidths[1], frame.halfWidths[0]] : frame.halfWidths;
  const reach = Math.sqrt(outer);
  const lean = uv / reach;
  const width = Math.sqrt(Math.max(0, inner - lean * lean));
  const angle = (edge: number): number => Math.asin(Math.min(1, Math.max(-1, (edge - outerCentre) / reach)));
  const [from, to] = [angle(-outerHalf - REACH), angle(outerHalf + REACH)];
  if (to <= from) return 0;
  const panels = Math.ceil((reach * (Math.sin(to) - Math.sin(from))) / PANEL);
  const half = (to - from) / panels / 2;
  let sum = 0;
  for (let panel = 0; panel < panels; panel++) {
    const middle = from + (2 * panel + 1) * half;
    for (let k = 0; k < LEGENDRE_NODES.length; k++) {
      const theta = middle + half * LEGENDRE_NODES[k]!;
      const [sin, cos] = [Math.sin(theta), Math.cos(theta)];
      const along = innerCentre + lean * sin;
      const across = roundedCdf(along + width * cos, innerHalf) - roundedCdf(along - width * cos, innerHalf);
      sum += LEGENDRE_WEIGHTS[k]! * half * reach * cos * roundedPdf(outerCentre + reach * sin, outerHalf) * across;
    }
  }
  return sum;
}

function areaInside({ area, cov }: AreaPart, ellipse: Ellipse): number {
  if (!cov) return plainInside(area, ellipse);
  return blurShifts(area, cov).reduce((sum, { weight, area: shifted }) => sum + weight * plainInside(shifted, ellipse), 0);
}

function plainInside(area: Area, ellipse: Ellipse): number {
  const [ax, bx, ay, by] = halfAxes(ellipse);
  const det = ax * by - bx * ay;
  const unit = (ring: Rings[number]): Array<readonly [number, number]> => ring.map(([x, y]) => {
    const [dx, dy] = [x - ellipse.x, y - ellipse.y];
    return [(by * dx - bx * dy) / det, (ax * dy - ay * dx) / det] as const;
  });
  let inside = 0;
  for (const rings of area) rings.forEach((ring, i) => { inside += (i === 0 ? 1 : -1) * Math.abs(unitCircleOverlap(unit(ring))); });
  return (inside * Math.abs(det)) / areaM2(area);
}
