import { EndType, inflatePathsD, JoinType } from 'clipper2-ts';
import { areaBounds, ringAreaM2 } from '../density/area.js';
import { discArea } from '../density/discArea.js';
import { ellipseOfCovariance, ELLIPSE_SIGMAS } from '../density/ellipse.js';
import type { Area, Density, Ellipse, Rings } from '../density/types.js';
import { clipAreas } from '../site/clipAreas.js';

/** Corners of an ellipse as a polygon. */
const CORNERS = 96;
/** Decimals of a metre that the clipper works to. */
const CLIP_DECIMALS = 4;
/** Not used with round corners, but asked for. */
const MITER_LIMIT = 2;

/**
 * Ground that holds the share `mass` of every record (blunders left out) with a margin round it, clipped to `open`; frame
 * metres. A record that may be in one of several datums gets the ground of each.
 */
export function searchArea(densities: readonly Density[], open: Area, options: { readonly mass: number; readonly marginM: number }): Area {
  const sigmas = Math.sqrt(-2 * Math.log(1 - options.mass));
  const shapes = densities.flatMap((density) => density.parts.filter((part) => part.role === 'place').flatMap((part): Area => {
    if (part.kind === 'gaussian') {
      const { semiMajM, semiMinM, ...rest } = ellipseOfCovariance(part.x, part.y, part.cov);
      const scale = sigmas / ELLIPSE_SIGMAS;
      return [[dilatedEllipse({ ...rest, semiMajM: semiMajM * scale, semiMinM: semiMinM * scale }, options.marginM)]];
    }
    return part.kind === 'disc' ? discArea({ ...part, radiusM: part.radiusM + options.marginM }) : dilatedArea(part.area, options.marginM);
  }));
  return clipAreas('intersection', clipAreas('union', shapes), open);
}

/**
 * Polygon round the parallel curve of an ellipse at a distance of `marginM`: it is made of tangents, each at the ellipse's
 * own support distance plus the margin, so it holds the curve instead of cutting it.
 */
function dilatedEllipse({ x, y, semiMajM, semiMinM, azimDeg }: Ellipse, marginM: number): Array<[number, number]> {
  const azimuth = (azimDeg * Math.PI) / 180;
  const [sin, cos] = [Math.sin(azimuth), Math.cos(azimuth)];
  const step = (2 * Math.PI) / CORNERS;
  const tangentM = (angle: number): number => Math.hypot(semiMajM * Math.cos(angle), semiMinM * Math.sin(angle)) + marginM;
  const ring = Array.from({ length: CORNERS }, (_, i): [number, number] => {
    // Corner where the tangents with normals at i and i + 1 steps from the major axis meet.
    const [a, b] = [i * step, (i + 1) * step];
    const [ha, hb] = [tangentM(a), tangentM(b)];
    const major = (ha * Math.sin(b) - hb * Math.sin(a)) / Math.sin(step);
    const minor = (hb * Math.cos(a) - ha * Math.cos(b)) / Math.sin(step);
    return [x + major * sin - minor * cos, y + major * cos + minor * sin];
  });
  return [...ring, ring[0]!];
}

/** An area grown by a margin on all sides, with round corners. */
function dilatedArea(area: Area, marginM: number): Area {
  const { west, south } = areaBounds(area);
  // Near the origin the clipper keeps its digits; it takes the inside from the sense of the rings.
  const paths = area.flatMap((rings) => rings.map((ring, i) => {
    const path = ring.slice(0, -1).map(([x, y]) => ({ x: x - west, y: y - south }));
    return ringAreaM2(ring) > 0 === (i === 0) ? path : path.toReversed();
  }));
  const grown = inflatePathsD(paths, marginM, JoinType.Round, EndType.Polygon, MITER_LIMIT, CLIP_DECIMALS);
  const rings = grown.map((path): Rings[number] => [...path, path[0]!].map(({ x, y }) => [x + west, y + south] as const));
  const outer = rings.filter((ring) => ringAreaM2(ring) > 0).map((ring): Rings => [ring]);
  const holes = rings.filter((ring) => ringAreaM2(ring) < 0).map((ring): Rings => [ring]);
  return clipAreas('difference', outer, holes);
}
