import { contours } from 'd3-contour';
import { ringAreaM2 } from './area.js';
import { ELLIPSE_MASS, ELLIPSE_SIGMAS, ellipseOfCovariance, ellipseRing, scaledEllipse } from './ellipse.js';
import { massInEllipse } from './massInEllipse.js';
import { densityCovariance, densityMean } from './moments.js';
import { placeParts, steadyCovariance } from './parts.js';
import type { Fineness } from './partShapes.js';
import { patches, type Patch } from './patches.js';
import { rankBetween } from './rankBetween.js';
import { regionLevel, type RegionLevel } from './regionLevel.js';
import type { Area, Density, Ellipse, GaussianPart } from './types.js';

/** Cells that find the region: its mass then comes within 0.2 % of 95 %. */
export const REGION_FINENESS: Fineness = Object.freeze({ perSd: 6, acrossArea: 64 });
/** Corners of the region of one Gaussian: a chord stays within 0.03 % of the axis. */
const GAUSSIAN_CORNERS = 144;
/** The outline bulges beyond the chords between its cells by less than this share. */
const BULGE = 1.002;

/** The smallest region that holds 95 % of a density without its blunders. */
export interface Region95 {
  /** Share of the density, blunders left out, that lies in it. */
  readonly mass: number;
  readonly areaM2: number;
  contains(x: number, y: number): boolean;
  /** Its polygons, frame metres; outer rings counter-clockwise, holes clockwise. */
  outline(): Area;
  /** The ellipse of the density's own mean and shape that just encloses it. */
  enclosing(): Ellipse;
}

/** How much more than the 95 % region its enclosing ellipse is. */
export interface EllipseExcess {
  /** Share of the density, blunders left out, within the ellipse: 0.95 for one Gaussian, else more. */
  readonly massHeld: number;
  /** Area of the ellipse over that of the region. */
  readonly areaRatio: number;
}

/**
 * The region of highest density that holds 95 % of a density without its blunder share. For one Gaussian it is the 95 %
 * ellipse; otherwise a raster ranks places by their density, and the region is what lies above the level that leaves 95 %.
 * Of flat ground (an area, the digits of a place) the part farthest from its edges is kept: the area drawn in all round
 * until it holds 95 %. The mass comes within 0.2 % of 95 %. Source: Hyndman (1996), highest density regions, Am. Stat. 50.
 */
export function region95(density: Density, fineness: Fineness = REGION_FINENESS): Region95 {
  const parts = placeParts(density);
  const only = parts.length === 1 ? parts[0]! : null;
  if (only?.kind === 'gaussian' && !only.rounding) return gaussianRegion(only);
  const rasters = patches(density, fineness);
  const found = regionLevel(rasters, ELLIPSE_MASS);
  return {
    mass: found.mass, areaM2: found.areaM2,
    contains: (x, y) => rasters.some((patch) => rankAt(patch, x, y) >= found.level),
    outline: () => rasters.flatMap((patch) => contour(patch, found)),
    enclosing: () => {
      const { x, y } = densityMean(density);
      const cov = steadyCovariance(densityCovariance(density));
      const det = cov[0] * cov[2] - cov[1] * cov[1];
      let farthest = 0;
      for (const patch of rasters) {
        forCrossings(patch, found.level, (px, py) => {
          const [dx, dy] = [px - x, py - y];
          farthest = Math.max(farthest, (cov[2] * dx * dx - 2 * cov[1] * dx * dy + cov[0] * dy * dy) / det);
        });
      }
      return scaledEllipse(x, y, { cov, scale: BULGE * Math.sqrt(farthest) });
    },
  };
}

/** How much more an ellipse holds than the region that it encloses; `ellipse` and `region` are those of the density. */
export function ellipseExcess(density: Density, ellipse: Ellipse, region: Region95): EllipseExcess {
  const place: Density = { parts: placeParts(density).map((part) => ({ ...part, role: 'place' })) };
  return { massHeld: massInEllipse(place, ellipse), areaRatio: (Math.PI * ellipse.semiMajM * ellipse.semiMinM) / region.areaM2 };
}

function gaussianRegion({ x, y, cov }: GaussianPart): Region95 {
  const ellipse = ellipseOfCovariance(x, y, cov);
  const det = cov[0] * cov[2] - cov[1] * cov[1];
  return {
    mass: ELLIPSE_MASS, areaM2: Math.PI * ellipse.semiMajM * ellipse.semiMinM,
    contains: (px, py) => {
      const [dx, dy] = [px - x, py - y];
      return cov[2] * dx * dx - 2 * cov[1] * dx * dy + cov[0] * dy * dy <= ELLIPSE_SIGMAS ** 2 * det;
    },
    outline: () => [[ellipseRing(ellipse, GAUSSIAN_CORNERS)]],
    enclosing: () => ellipse,
  };
}

/** Rank at a place in frame metres. */
function rankAt(patch: Patch, x: number, y: number): number {
  const { origin, column, row } = patch;
  const det = column[0] * row[1] - column[1] * row[0];
  const [dx, dy] = [x - origin[0], y - origin[1]];
  return rankBetween(patch, (row[1] * dx - row[0] * dy) / det - 0.5, (column[0] * dy - column[1] * dx) / det - 0.5);
}

/** Calls with every point at which the outline crosses a line between the middles of neighbouring cells. */
function forCrossings({ width, height, origin, column, row, rank }: Patch, level: number, visit: (x: number, y: number) => void): void {
  const at = (i: number, j: number): void => visit(origin[0] + (i + 0.5) * column[0] + (j + 0.5) * row[0], origin[1] + (i + 0.5) * column[1] + (j + 0.5) * row[1]);
  for (let j = 0, cell = 0; j < height; j++) {
    for (let i = 0; i < width; i++, cell++) {
      const here = rank[cell]! - level;
      const east = (i < width - 1 ? rank[cell + 1]! : 0) - level;
      const south = (j < height - 1 ? rank[cell + width]! : 0) - level;
      if (here >= 0 !== east >= 0) at(i + here / (here - east), j);
      if (here >= 0 !== south >= 0) at(i, j + here / (here - south));
      // The patch's own west and north edges.
      if (here >= 0 && i === 0) at(-1, j);
      if (here >= 0 && j === 0) at(i, -1);
    }
  }
}

/** Source: marching squares (Lorensen & Cline 1987, in the plane), through d3-contour. */
function contour({ width, height, origin, column, row, rank }: Patch, { level }: RegionLevel): Area {
  const { coordinates } = contours().size([width, height]).contour(Array.from(rank), level);
  return coordinates.map((rings) => rings.map((ring, index) => {
    const points = ring.map(([i, j]) => [origin[0] + i! * column[0] + j! * row[0], origin[1] + i! * column[1] + j! * row[1]] as const);
    return (ringAreaM2(points) > 0) === (index === 0) ? points : points.toReversed();
  }));
}
