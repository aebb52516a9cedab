import { coverage } from './coverage.js';
import { normalCdf } from '../numerics/special.js';
import { partShapes, RANK_SD_OF_HALF_WIDTH, type Basis, type Fineness, type PartShape, type Reach } from './partShapes.js';
import { roundedCdf, roundedPdf } from './roundedGaussian.js';
import type { Density } from './types.js';

/**
 * A raster of one clump of the density without its blunders, column by column eastwards and row by row southwards in a
 * basis of its own.
 */
export interface Patch {
  readonly width: number;
  readonly height: number;
  /** Frame metres of the corner where column 0 and row 0 begin, and of a step by one column and by one row. */
  readonly origin: readonly [number, number];
  readonly column: readonly [number, number];
  readonly row: readonly [number, number];
  readonly cellM2: number;
  /** Share of the density in each cell. */
  readonly mass: Float64Array;
  /**
   * Rank of the middle of each cell: the fourth root of the density (1/m²), blurred where it would be flat. About the edge
   * of a Gaussian's 95 % region that root is nearly straight, so it may be interpolated between cells.
   */
  readonly rank: Float64Array;
}

/** Cells of a patch along each axis at most; a density that mixes very narrow and very wide parts is coarser. */
const MOST_CELLS = 400;
/** Ranks in areas are blurred by this many cells at least, for the same reason. */
const RANK_SD_CELLS = 1.5;

/** Rasters of all clumps; clumps do not meet. */
export function patches(density: Density, fineness: Fineness): Patch[] {
  const { basis, shapes } = partShapes(density, fineness);
  return clumps(shapes).map((clump) => patchOf(clump, basis));
}

/** Parts whose boxes meet belong to one clump. */
function clumps(shapes: readonly PartShape[]): PartShape[][] {
  let groups: Array<{ box: Reach; members: PartShape[] }> = [];
  for (const shape of shapes) {
    let joined = { box: shape as Reach, members: [shape] };
    // A box that has grown may meet another one.
    for (let grown = true; grown;) {
      const meeting = groups.filter(({ box }) => meet(box, joined.box));
      grown = meeting.length > 0;
      groups = groups.filter((group) => !meeting.includes(group));
      for (const { box, members } of meeting) joined = { box: union(joined.box, box), members: [...joined.members, ...members] };
    }
    groups.push(joined);
  }
  return groups.map(({ members }) => members);
}

function meet(a: Reach, b: Reach): boolean {
  return a.west <= b.east && b.west <= a.east && a.south <= b.north && b.south <= a.north;
}

function union(a: Reach, b: Reach): Reach {
  return {
    west: Math.min(a.west, b.west), east: Math.max(a.east, b.east), south: Math.min(a.south, b.south), north: Math.max(a.north, b.north),
    stepX: Math.min(a.stepX, b.stepX), stepY: Math.min(a.stepY, b.stepY),
  };
}

function patchOf(clump: readonly PartShape[], { matrix: [a, b, c, d], det }: Basis): Patch {
  const { west, east, south, north, stepX, stepY } = clump.reduce(union, clump[0]!);
  const width = Math.min(MOST_CELLS, Math.ceil((east - west) / stepX));
  const height = Math.min(MOST_CELLS, Math.ceil((north - south) / stepY));
  const [dx, dy] = [(east - west) / width, (north - south) / height];
  const patch: Patch = {
    width, height,
    origin: [a * west + b * north, c * west + d * north], column: [a * dx, c * dx], row: [-b * dy, -d * dy], cellM2: dx * dy * det,
    mass: new Float64Array(width * height), rank: new Float64Array(width * height),
  };
  const lattice: Lattice = { west, north, dx, dy, det };
  for (const shape of clump) {
    if (shape.kind === 'product') addProduct(patch, shape, lattice);
    else if (shape.kind === 'leaning') addLeaning(patch, shape);
    else addArea(patch, shape, lattice);
  }
  const { rank } = patch;
  for (let at = 0; at < rank.length; at++) rank[at] = rankOf(rank[at]!);
  return patch;
}

/** Rank of a density, 1/m². */
export function rankOf(density: number): number {
  return Math.sqrt(Math.sqrt(density));
}

interface Lattice { readonly west: number; readonly north: number; readonly dx: number; readonly dy: number; readonly det: number }

function addProduct({ width, height, mass, rank }: Patch, { weight, centre, sd, halfWidth }: Extract<PartShape, { kind: 'product' }>, { west, north, dx, dy, det }: Lattice): void {
  const along = profile({ count: width, first: west - centre[0], step: dx }, sd[0], halfWidth[0]);
  const down = profile({ count: height, first: centre[1] - north, step: dy }, sd[1], halfWidth[1]);
  for (let j = down.from; j < down.to; j++) {
    const [rowMass, rowRank] = [weight * down.mass[j]!, (weight * down.rank[j]!) / det];
    for (let i = along.from, at = j * width + i; i < along.to; i++, at++) {
      mass[at]! += rowMass * along.mass[i]!;
      rank[at]! += rowRank * along.rank[i]!;
    }
  }
}

interface Profile { readonly mass: Float64Array; readonly rank: Float64Array; readonly from: number; readonly to: number }

/** σ beyond which a part adds nothing to a cell. */
const NOTHING_BEYOND = 6;

/** Shares of cells on an axis, and densities at their middles; `first` is where the cells begin, from the part's centre. */
function profile({ count, first, step }: { count: number; first: number; step: number }, sd: number, halfWidth: number): Profile {
  const [mass, rank] = [new Float64Array(count), new Float64Array(count)];
  // A part that is lost between two cells' middles still has to rank by its mass.
  const rankSd = Math.max(sd, RANK_SD_OF_HALF_WIDTH * halfWidth, step / 2);
  const reach = halfWidth + NOTHING_BEYOND * rankSd;
  const from = Math.max(0, Math.floor((-reach - first) / step));
  const to = Math.min(count, Math.ceil((reach - first) / step));
  const [half, rankHalf] = [halfWidth / sd, halfWidth / rankSd];
  let below = roundedCdf((first + from * step) / sd, half);
  for (let i = from; i < to; i++) {
    const above = roundedCdf((first + (i + 1) * step) / sd, half);
    mass[i] = above - below;
    rank[i] = roundedPdf((first + (i + 0.5) * step) / rankSd, rankHalf) / rankSd;
    below = above;
  }
  return { mass, rank, from, to };
}

function addLeaning(patch: Patch, { weight, frame }: Extract<PartShape, { kind: 'leaning' }>): void {
  const { width, height, origin, column, row, cellM2, mass, rank } = patch;
  const [a, b, c, d] = frame.inverse;
  for (let j = 0, at = 0; j < height; j++) {
    for (let i = 0; i < width; i++, at++) {
      const east = origin[0] + (i + 0.5) * column[0] + (j + 0.5) * row[0] - frame.x;
      const north = origin[1] + (i + 0.5) * column[1] + (j + 0.5) * row[1] - frame.y;
      const value = (weight * roundedPdf(a * east + b * north, frame.halfWidths[0]) * roundedPdf(c * east + d * north, frame.halfWidths[1])) / frame.det;
      mass[at]! += value * cellM2;
      rank[at]! += value;
    }
  }
}

function addArea({ width, height, cellM2, mass, rank }: Patch, { weight, area, sizeM2, blurSd }: Extract<PartShape, { kind: 'area' }>, { west, north, dx, dy }: Lattice): void {
  const cells = area.map((rings) => rings.map((ring) => ring.map(([x, y]) => [(x - west) / dx, (y - north) / dy] as const)));
  const shares = coverage(cells, { width, height, west: 0, north: 0, cellM: 1 });
  const size = { width, height };
  const [sdX, sdY] = [blurSd[0] / dx, blurSd[1] / dy];
  const held = blurred(shares, size, [sdX, sdY]);
  const [moreX, moreY] = [sdX, sdY].map((sd) => Math.sqrt(Math.max(0, RANK_SD_CELLS ** 2 - sd ** 2))) as [number, number];
  const ranked = moreX === 0 && moreY === 0 ? held : blurred(held, size, [moreX, moreY]);
  for (let at = 0; at < mass.length; at++) {
    mass[at]! += (weight * held[at]! * cellM2) / sizeM2;
    rank[at]! += (weight * ranked[at]!) / sizeM2;
  }
}

/** Blur by a Gaussian, standard deviations in cells along columns and rows; what leaves the raster is lost. */
function blurred(values: Float64Array, { width, height }: { width: number; height: number }, [sdX, sdY]: readonly [number, number]): Float64Array {
  const along = blurredLines(values, { lines: height, lineStride: width, count: width, stride: 1 }, sdX);
  return blurredLines(along, { lines: width, lineStride: 1, count: height, stride: width }, sdY);
}

function blurredLines(values: Float64Array, { lines, lineStride, count, stride }: { lines: number; lineStride: number; count: number; stride: number }, sd: number): Float64Array {
  const reach = Math.ceil(4 * sd);
  if (reach === 0) return values;
  const kernel = Float64Array.from({ length: 2 * reach + 1 }, (_, k) => normalCdf((k - reach + 0.5) / sd) - normalCdf((k - reach - 0.5) / sd));
  const out = new Float64Array(values.length);
  for (let line = 0; line < lines; line++) {
    for (let i = 0; i < count; i++) {
      const value = values[line * lineStride + i * stride]!;
      if (value === 0) continue;
      const [from, to] = [Math.max(0, i - reach), Math.min(count - 1, i + reach)];
      for (let k = from; k <= to; k++) out[line * lineStride + k * stride]! += value * kernel[k - i + reach]!;
    }
  }
  return out;
}
