import { contours } from 'd3-contour';
import { areaM2, pointInArea } from '../density/area.js';
import type { Area } from '../density/types.js';
import type { Grid } from '../raster/types.js';

export interface OutlineInput {
  readonly x: number;
  readonly y: number;
  /** Cells further from the source than this are not looked at, metres. */
  readonly radiusM: number;
  /** Contour, nT above (or below) the background. */
  readonly levelNT: number;
  /** Local background at a place, nT. */
  readonly background: (x: number, y: number) => number;
  /** Whether the anomaly at a place is this source's and not another's. */
  readonly owns: (x: number, y: number) => boolean;
  /** Whether a ring that does not hold the source itself may be taken as well. */
  readonly whole: boolean;
}

/**
 * The contour of the anomaly on the residual grid around a source, as polygons in frame metres: the piece that holds the
 * source, or the largest one where none does (all of them where `whole`). Null where the grid has nothing above the level
 * there. Cells without a value count as background.
 *
 * Source: marching squares (Lorensen & Cline 1987, in the plane), through d3-contour.
 */
export function contourOutline(grid: Grid, input: OutlineInput): { area: Area; areaM2: number } | null {
  const { x, y, radiusM, levelNT, background, owns, whole } = input;
  const { cellM, west, north } = grid;
  const column0 = Math.max(0, Math.floor((x - radiusM - west) / cellM));
  const column1 = Math.min(grid.width - 1, Math.floor((x + radiusM - west) / cellM));
  const row0 = Math.max(0, Math.floor((north - y - radiusM) / cellM));
  const row1 = Math.min(grid.height - 1, Math.floor((north - y + radiusM) / cellM));
  // A rim of background closes every ring inside the clip.
  const width = column1 - column0 + 3;
  const height = row1 - row0 + 3;
  if (width < 4 || height < 4) return null;
  const values = Array.from<number>({ length: width * height }).fill(0);
  for (let row = row0; row <= row1; row++) {
    for (let column = column0; column <= column1; column++) {
      const value = grid.values[row * grid.width + column]!;
      const cx = west + (column + 0.5) * cellM;
      const cy = north - (row + 0.5) * cellM;
      if (Number.isNaN(value) || Math.hypot(cx - x, cy - y) > radiusM || !owns(cx, cy)) continue;
      values[(row - row0 + 1) * width + column - column0 + 1] = Math.abs(value - background(cx, cy));
    }
  }
  const shape = contours().size([width, height]).contour(values, levelNT);
  const toFrame = (point: readonly number[]): [number, number] => [west + (point[0]! + column0 - 1) * cellM, north - (point[1]! + row0 - 1) * cellM];
  const polygons = shape.coordinates.map((rings) => rings.map((ring) => ring.map(toFrame)));
  if (polygons.length === 0) return null;
  const sized = polygons.map((rings) => ({ rings, size: areaM2([rings]), holds: pointInArea([rings], x, y) })).toSorted((a, b) => Number(b.holds) - Number(a.holds) || b.size - a.size);
  const taken = (whole ? sized : sized.slice(0, 1)).map(({ rings }) => rings);
  return { area: taken, areaM2: areaM2(taken) };
}

/** Corners of a circle that stands in for a contour. */
const CIRCLE_CORNERS = 32;

export function circleOutline(x: number, y: number, radiusM: number): { area: Area; areaM2: number } {
  const ring = Array.from({ length: CIRCLE_CORNERS }, (_, k): [number, number] => {
    const t = (2 * Math.PI * k) / CIRCLE_CORNERS;
    return [x + radiusM * Math.cos(t), y + radiusM * Math.sin(t)];
  });
  const area: Area = [[[...ring, ring[0]!]]];
  return { area, areaM2: areaM2(area) };
}
