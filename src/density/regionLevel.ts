import { rankOf, type Patch } from './patches.js';
import { rankBetween } from './rankBetween.js';

/** Share within which the level is found; the raster itself is good to about 2e−3. */
const MASS_TOLERANCE = 1e-4;
const MOST_STEPS = 40;
/** Share within which the counted mass has to come, and searches beyond the first. */
const CLOSE_ENOUGH = 3e-4;
const MOST_ROUNDS = 4;
/** A cell that the level cuts is looked at in as many parts along each axis. */
const PARTS = 3;

/** A level of rank and what lies above it. */
export interface RegionLevel {
  readonly level: number;
  readonly mass: number;
  readonly areaM2: number;
}

/**
 * The level of rank above which the share `mass` of the density lies, between the middles of cells as `rankBetween` has it.
 * The search counts a cell that the level cuts by its middle and slope. What that leaves out hardly changes with the level,
 * so it is counted at the end of a search and taken off the aim of the next, until there is no need for one.
 */
export function regionLevel(patches: readonly Patch[], mass: number): RegionLevel {
  const spans = patches.map(cellSpans);
  let aim = mass;
  let found = search(patches, { spans, mass: aim });
  for (let i = 0; ; i++) {
    const closely = above(patches, found.level, { spans, closely: true });
    if (i === MOST_ROUNDS || Math.abs(closely.mass - mass) < CLOSE_ENOUGH) return { level: found.level, ...closely };
    aim += mass - closely.mass;
    found = search(patches, { spans, mass: aim });
  }
}

function search(patches: readonly Patch[], { spans, mass }: { spans: readonly Float64Array[]; mass: number }): RegionLevel {
  let highestRank = 0;
  for (const { rank } of patches) for (let at = 0; at < rank.length; at++) if (rank[at]! > highestRank) highestRank = rank[at]!;
  // By density, not by rank: for one Gaussian the mass falls in proportion to it, so the first guess is nearly right.
  let [low, lowMass] = [0, 1 - mass];
  let [high, highMass] = [highestRank ** 4 * 1.000001, -mass];
  let found = { level: 0, mass: 1, areaM2: Infinity };
  for (let i = 0; i < MOST_STEPS; i++) {
    const density = (low * highMass - high * lowMass) / (highMass - lowMass);
    const level = rankOf(density);
    found = { level, ...above(patches, level, { spans, closely: false }) };
    const excess = found.mass - mass;
    if (Math.abs(excess) < MASS_TOLERANCE) break;
    // Regula falsi with the standing end halved (Illinois).
    if (excess > 0) {
      if (i > 0) highMass /= 2;
      [low, lowMass] = [density, excess];
    } else {
      if (i > 0) lowMass /= 2;
      [high, highMass] = [density, excess];
    }
  }
  return found;
}

function above(patches: readonly Patch[], level: number, { spans, closely }: { spans: readonly Float64Array[]; closely: boolean }): { mass: number; areaM2: number } {
  let [sum, area] = [0, 0];
  patches.forEach((patch, p) => {
    const { rank, mass } = patch;
    const span = spans[p]!;
    let cells = 0;
    for (let at = 0; at < rank.length; at++) {
      const excess = rank[at]! - level;
      const reach = span[at]!;
      if (2 * excess <= -reach) continue;
      const inside = 2 * excess >= reach ? 1 : closely ? shareAbove(patch, at, { level, span: reach }) : 0.5 + excess / reach;
      sum += inside * mass[at]!;
      cells += inside;
    }
    area += cells * patch.cellM2;
  });
  return { mass: sum, areaM2: area };
}

/** Share of a cell above the level, from its parts, each of which counts by its slope where the level cuts it. */
function shareAbove(patch: Patch, at: number, { level, span }: { level: number; span: number }): number {
  const column = at % patch.width;
  const row = (at - column) / patch.width;
  let sum = 0;
  for (let v = 0; v < PARTS; v++) {
    for (let u = 0; u < PARTS; u++) {
      const rank = rankBetween(patch, column + (u + 0.5) / PARTS - 0.5, row + (v + 0.5) / PARTS - 0.5);
      sum += Math.min(1, Math.max(0, 0.5 + ((rank - level) * PARTS) / span));
    }
  }
  return sum / (PARTS * PARTS);
}

/** How far the rank may change across each cell, corner to corner. */
function cellSpans({ width, height, rank }: Patch): Float64Array {
  const spans = new Float64Array(rank.length);
  for (let j = 0, at = 0; j < height; j++) {
    const [up, down] = [j > 0 ? -width : 0, j < height - 1 ? width : 0];
    for (let i = 0; i < width; i++, at++) {
      const [left, right] = [i > 0 ? -1 : 0, i < width - 1 ? 1 : 0];
      const here = rank[at]!;
      spans[at] = Math.max(Math.abs(rank[at + right]! - here), Math.abs(rank[at + left]! - here)) + Math.max(Math.abs(rank[at + down]! - here), Math.abs(rank[at + up]! - here));
    }
  }
  return spans;
}
