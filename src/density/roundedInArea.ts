import { ringAreaM2 } from './area.js';
import { LEGENDRE_NODES, LEGENDRE_WEIGHTS } from './legendre20.js';
import { localFrame } from './localFrame.js';
import { roundedCdf, roundedPdf } from './roundedGaussian.js';
import type { Area, GaussianPart, Rings } from './types.js';

/** σ beyond the rounding's edges at which nothing is left. */
const REACH = 7;
/** A panel of the quadrature is at most this many σ long: 20 nodes then follow any edge within 1e−8. */
const PANEL = 7;

/** Mass of a Gaussian with rounding in an area, within 1e−6. */
export function roundedInArea(area: Area, part: GaussianPart): number {
  const { inverse: [a, b, c, d], halfWidths } = localFrame(part);
  const local = (ring: Rings[number]): Array<readonly [number, number]> =>
    ring.map(([x, y]) => [a * (x - part.x) + b * (y - part.y), c * (x - part.x) + d * (y - part.y)] as const);
  let sum = 0;
  for (const rings of area) {
    rings.forEach((ring, i) => { sum += (i === 0 ? 1 : -1) * Math.sign(ringAreaM2(ring)) * alongRing(local(ring), halfWidths); });
  }
  return sum;
}

/**
 * ∮ F(u) g(v) dv round a ring, with F the distribution along the first local axis and g the density along the second:
 * by Green's theorem the mass inside it.
 */
function alongRing(ring: ReadonlyArray<readonly [number, number]>, halfWidths: readonly [number, number]): number {
  let sum = 0;
  for (let i = 0; i < ring.length; i++) {
    const [u0, v0] = ring[i]!;
    const [u1, v1] = ring[(i + 1) % ring.length]!;
    sum += v1 > v0 ? alongEdge([u0, v0, u1, v1], halfWidths) : -alongEdge([u1, v1, u0, v0], halfWidths);
  }
  return sum;
}

/** The same along an edge that climbs. West of all mass F is 0; east of it F is 1 and the rest has a closed form. */
function alongEdge([u0, v0, u1, v1]: readonly [number, number, number, number], [first, second]: readonly [number, number]): number {
  if (!(v1 > v0)) return 0;
  const slope = (u1 - u0) / (v1 - v0);
  const reach = first + REACH;
  const vAt = (u: number): number => Math.min(v1, Math.max(v0, v0 + (u - u0) / slope));
  const level = slope === 0;
  const [vWest, vEast] = level ? (Math.abs(u0) <= reach ? [v0, v1] : [v0, v0]) : [vAt(-reach), vAt(reach)];
  const beyond = slope > 0 ? [vEast, v1] : slope < 0 ? [v0, vEast] : u0 > reach ? [v0, v1] : [v0, v0];
  let sum = roundedCdf(beyond[1]!, second) - roundedCdf(beyond[0]!, second);
  const low = Math.max(Math.min(vWest, vEast), -second - REACH);
  const high = Math.min(Math.max(vWest, vEast), second + REACH);
  if (high <= low) return sum;
  const panels = Math.ceil(((high - low) * Math.max(1, Math.abs(slope))) / PANEL);
  const half = (high - low) / panels / 2;
  for (let panel = 0; panel < panels; panel++) {
    const middle = low + (2 * panel + 1) * half;
    for (let k = 0; k < LEGENDRE_NODES.length; k++) {
      const v = middle + half * LEGENDRE_NODES[k]!;
      sum += LEGENDRE_WEIGHTS[k]! * half * roundedPdf(v, second) * roundedCdf(u0 + slope * (v - v0), first);
    }
  }
  return sum;
}
