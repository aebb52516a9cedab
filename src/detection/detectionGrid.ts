import { areaBounds } from '../density/area.js';
import { coverage, type Lattice } from '../density/coverage.js';
import type { Area } from '../density/types.js';
import type { Grid } from '../raster/types.js';
import { REACH_DISTANCES, withinReach } from './coveredGround.js';
import { DETECTOR_DEFAULTS, makeDetector, type Detector, type DetectorOptions } from './detector.js';
import type { Heard } from './heard.js';

export interface DetectionGridOptions extends Omit<DetectorOptions, 'falseAlarmsPerHa'> {
  readonly falseAlarmsPerHa?: number;
  readonly cellM?: number;
  /** Ground this near to a good reading counts as searched; unsaid, 1.9 typical sensor–source distances. */
  readonly reachM?: number;
}

export const DETECTION_GRID_DEFAULTS = Object.freeze({ ...DETECTOR_DEFAULTS, cellM: 2 });

export interface DetectionGrids {
  /** Chance that the target, were it in the cell, would have been detected: 0 to 1; NaN outside open ground. */
  readonly chance: Grid;
  /** 1 where the cell was searched, 0 where not; NaN outside open ground. Where it is 0, so is the chance. */
  readonly covered: Grid;
  readonly reachM: number;
  /** Deflection at which a source counts as detected. */
  readonly threshold: number;
}

/** A cell belongs to the open ground where at least this share of it does. */
const OPEN_SHARE = 0.5;
/** Cells finer than this share of the sensor–source distance are interpolated where the chance hardly changes. */
const COARSE_DISTANCES = 0.75;
/** … that is, where the corners around them differ by no more than this. */
const EVEN = 0.02;

/**
 * Chance of detection over the open ground, cell by cell, from where somebody listened.
 *
 * @param open Parcel less exclusions, frame metres. Ground outside counts nothing.
 */
export function detectionGrid(heard: Heard, open: Area, options: DetectionGridOptions): DetectionGrids {
  const settings = { ...DETECTION_GRID_DEFAULTS, ...options };
  const detector = makeDetector(heard, settings);
  const lattice = latticeOver(open, settings.cellM);
  const count = lattice.width * lattice.height;
  const shares = coverage(open, lattice);
  const reachM = settings.reachM ?? REACH_DISTANCES * detector.distanceM;
  const within = withinReach(heard, lattice, reachM);
  const covered = new Float32Array(count).fill(NaN);
  for (let i = 0; i < count; i++) if (shares[i]! >= OPEN_SHARE) covered[i] = within[i]!;
  const chance = fill(lattice, { covered, detector });
  return { chance: { ...lattice, values: chance }, covered: { ...lattice, values: covered }, reachM, threshold: detector.threshold };
}

/** Lattice over an area's bounds, its edges on whole multiples of the cell. */
export function latticeOver(area: Area, cellM: number): Lattice {
  const bounds = areaBounds(area);
  if (!(bounds.east > bounds.west && bounds.north > bounds.south)) throw new Error('latticeOver: the area has no extent');
  const west = Math.floor(bounds.west / cellM) * cellM;
  const north = Math.ceil(bounds.north / cellM) * cellM;
  return { west, north, cellM, width: Math.ceil((bounds.east - west) / cellM), height: Math.ceil((north - bounds.south) / cellM) };
}

function fill(lattice: Lattice, { covered, detector }: { covered: Float32Array; detector: Detector }): Float32Array {
  const { width, height, west, north, cellM } = lattice;
  const known = new Float32Array(width * height).fill(-1);
  const at = (column: number, row: number): number => {
    const i = row * width + column;
    if (known[i] === -1) known[i] = covered[i] === 1 ? detector.chanceAt(west + (column + 0.5) * cellM, north - (row + 0.5) * cellM) : 0;
    return known[i]!;
  };
  const chance = Float32Array.from(covered, (value) => (value === value ? 0 : NaN));
  const step = 2 ** Math.max(0, Math.floor(Math.log2((COARSE_DISTANCES * detector.distanceM) / cellM)));
  for (let row = 0; row < height; row++) {
    for (let column = 0; column < width; column++) {
      const i = row * width + column;
      if (covered[i] !== 1) continue;
      chance[i] = Number.isFinite(step) && step > 1 ? between(column, row, { at, step, width, height }) : at(column, row);
    }
  }
  return chance;
}

interface Coarse {
  readonly at: (column: number, row: number) => number;
  readonly step: number;
  readonly width: number;
  readonly height: number;
}

/** Bilinear between the corners of the coarse square around a cell where they agree, else the cell's own chance. */
function between(column: number, row: number, { at, step, width, height }: Coarse): number {
  const west = Math.floor(column / step) * step;
  const top = Math.floor(row / step) * step;
  if (west + step >= width || top + step >= height) return at(column, row);
  const corners = [at(west, top), at(west + step, top), at(west, top + step), at(west + step, top + step)] as const;
  if (Math.max(...corners) - Math.min(...corners) > EVEN) return at(column, row);
  const u = (column - west) / step;
  const v = (row - top) / step;
  return (1 - v) * ((1 - u) * corners[0] + u * corners[1]) + v * ((1 - u) * corners[2] + u * corners[3]);
}
