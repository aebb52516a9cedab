import { clearHold, coarsenHold, holdPins } from './hold.js';
import { heldResidualRow, heldSmoothRow } from './heldKernels.js';
import { coarsenPins, movePinsOfRow, pinCorrection, pinRows, type PinRows, type Pins } from './pins.js';
import { plateResidual, plateResidualRow, smoothRow } from './plateKernels.js';
import { fillDiagonal, plateLevel, type PlateLevel } from './plateLevel.js';
import { spikeWeights } from './spikeWeights.js';
import { prolong, restrict, transfer, type Transfer } from './transfer.js';
import { wavefront } from './wavefront.js';

/**
 * The surface of least energy through the pins, by full multigrid: each grid starts from the solution on the next coarser
 * one, and V-cycles bring it to the tolerance. Every grid has pins of its own (those of the finer grid, merged); a pin's
 * node is moved within the sweeps until the surface meets the data where they were measured.
 *
 * Source: Briggs (1974), Geophysics 39 (minimum curvature); Smith & Wessel (1990), Geophysics 55 (tension, data off the
 * nodes); Trottenberg, Oosterlee & Schüller (2001), Multigrid (full multigrid, cubic transfer for fourth order).
 */
export interface PlateProblem {
  readonly width: number;
  readonly height: number;
  /** Weights of curvature and slope in cell units (see plateLevel.ts). */
  readonly alpha: number;
  readonly tau: number;
  readonly pins: Pins;
  /** 1 at nodes whose value is wanted; only their error counts. Null where all are wanted. */
  readonly watch: Uint8Array | null;
}

export interface PlateSolution {
  readonly z: Float64Array;
  /** Cycles on the finest grid. */
  readonly iterations: number;
  /** Estimate of the largest error that is left, in the data's unit. */
  readonly remaining: number;
  readonly converged: boolean;
}

/** Where both sides are this short or shorter, sweeps alone solve the equations. */
const LAST_SIDE = 5;
const LAST_SWEEPS = 20;
/**
 * Sweeps on the surface before and after each coarse correction, and on each coarser correction: few readings between
 * lines make sweeps the cheapest part, and with these numbers a cycle leaves about a sixth of the error between lines 4
 * to 8 cells apart, half between lines 20 apart (measured).
 */
const SWEEPS = 3;
const HELD_SWEEPS = 2;
/** Coarser grids only supply a start: an error below the next grid's own discretisation is enough. */
const COARSE_TOLERANCE = 1e-2;
const COARSE_CYCLES = 1;
/**
 * Share of a correction that is taken: the hold lets corrections grow a little too large near pins. Where cycles leave more
 * than the slow rate, the share is found anew in each, which costs a quarter of a cycle and pays where pins are sparse
 * (measured).
 */
const SHARE = 0.7;
const SLOW_RATE = 0.3;
/** Bounds within which the rate of convergence is believed. */
const BEST_RATE = 0.15;
const WORST_RATE = 0.95;

interface Grids {
  readonly levels: readonly PlateLevel[];
  readonly pins: readonly PinRows[];
  /** Between level l and l + 1. */
  readonly transfers: readonly Transfer[];
}

/** `tolerance` in the data's unit. */
export function solvePlate(problem: PlateProblem, { tolerance, maxSteps }: { tolerance: number; maxSteps: number }): PlateSolution {
  const grids = buildGrids(problem);
  const { levels, transfers } = grids;
  const range = spread(problem.pins.value);
  let z = new Float64Array(levels.at(-1)!.width * levels.at(-1)!.height);
  let solution: Omit<PlateSolution, 'z'> = { iterations: 0, remaining: 0, converged: true };
  for (let l = levels.length - 1; l >= 0; l--) {
    if (l < levels.length - 1) {
      const finer = new Float64Array(levels[l]!.width * levels[l]!.height);
      prolong(transfers[l]!, [z, finer], { add: false, watch: null });
      z = finer;
    }
    const goal = l === 0 ? { tolerance, maxSteps } : { tolerance: COARSE_TOLERANCE * range, maxSteps: COARSE_CYCLES };
    solution = solveOnGrid(grids, { l, z, watch: l === 0 ? problem.watch : null }, goal);
  }
  return { z, ...solution };
}

function spread(values: Float64Array): number {
  let low = Infinity;
  let high = -Infinity;
  for (let n = 0; n < values.length; n++) {
    low = Math.min(low, values[n]!);
    high = Math.max(high, values[n]!);
  }
  return values.length === 0 ? 0 : high - low;
}

function buildGrids({ width, height, alpha, tau, pins }: PlateProblem): Grids {
  const levels = [plateLevel({ width, height, alpha, tau }, { finest: true })];
  const pinsOf = [pins];
  const transfers: Transfer[] = [];
  for (;;) {
    const fine = levels.at(-1)!;
    if (fine.width <= LAST_SIDE && fine.height <= LAST_SIDE) break;
    const down = transfer(fine.width, fine.height);
    transfers.push(down);
    // Twice the cell: curvature counts a quarter, slope the same, in the units of the finer grid.
    levels.push(plateLevel({ width: down.x.coarse, height: down.y.coarse, alpha: fine.alpha / 4, tau: fine.tau }));
    pinsOf.push(coarsenPins(pinsOf.at(-1)!, [fine.width, down.x.coarse, down.y.coarse]));
  }
  return { levels, transfers, pins: pinsOf.map((each, l) => pinRows(each, levels[l]!.width, levels[l]!.height)) };
}

interface Work {
  /** Level. */
  readonly l: number;
  readonly z: Float64Array;
  readonly watch: Uint8Array | null;
}

function solveOnGrid(grids: Grids, { l, z, watch }: Work, { tolerance, maxSteps }: { tolerance: number; maxSteps: number }): Omit<PlateSolution, 'z'> {
  layHolds(grids, l);
  grids.levels[l]!.right.fill(0);
  let path: Path | null = null;
  let before = NaN;
  let remaining = Infinity;
  for (let step = 1; step <= maxSteps; step++) {
    const size = cycle(grids, { l, z, watch }, path);
    const rate = Math.min(WORST_RATE, Math.max(BEST_RATE, size / before || 0));
    // The changes fall about geometrically: what is still to come is their sum.
    remaining = (size * rate) / (1 - rate);
    if (remaining <= tolerance) return { iterations: step, remaining, converged: true };
    if (size > SLOW_RATE * before) path ??= { step: new Float32Array(z.length), image: new Float32Array(z.length) };
    before = size;
  }
  return { iterations: maxSteps, remaining, converged: false };
}

/** Grids next to the surface's own on which pins are laid one by one; further down the hold is coarsened from grid to grid. */
const LAID_GRIDS = 2;

/**
 * Pins the nodes of grid `start`, whose surface is sought, and lays their hold on all coarser grids. Both ways give the
 * same: bilinear interpolation nests.
 */
function layHolds({ levels, pins }: Grids, start: number): void {
  const top = levels[start]!;
  const own = pins[start]!.pins;
  fillDiagonal(top, own.node);
  const weights = spikeWeights(top, own.node);
  for (let l = start + 1; l < levels.length; l++) {
    const level = levels[l]!;
    clearHold(level.hold);
    if (l - start <= LAID_GRIDS) holdPins(level, { pins: own, weights, finer: top, step: 2 ** (l - start) });
    else coarsenHold(levels[l - 1]!, level);
    fillDiagonal(level, null);
  }
}

/** One V-cycle on the surface itself, by a fixed share where `path` is null; returns the size of the largest change. */
function cycle({ levels, transfers, pins }: Grids, { l, z, watch }: Work, path: Path | null): number {
  const level = levels[l]!;
  const last = l === levels.length - 1;
  let size = sweeps(level, pins[l]!, { z, watch, count: last ? LAST_SWEEPS : SWEEPS, residual: !last });
  if (last) return size;
  const coarse = levels[l + 1]!;
  const { correction, scratch } = level;
  restrict(transfers[l]!, [scratch, coarse.right]);
  correct({ levels, transfers }, l + 1);
  const most = prolong(transfers[l]!, [coarse.correction, correction], { add: false, watch });
  pinCorrection(correction, pins[l]!.pins, level);
  const length = path ? advance(level, z, path) : add(z, correction);
  size = Math.max(size, length * most);
  sweeps(level, pins[l]!, { z, watch, count: SWEEPS, residual: false });
  return size;
}

function add(z: Float64Array, correction: Float64Array): number {
  for (let k = 0; k < z.length; k++) z[k]! += SHARE * correction[k]!;
  return SHARE;
}

/** The last coarse step and what the operator makes of it; zero before the first. */
interface Path {
  readonly step: Float32Array;
  readonly image: Float32Array;
}

/**
 * Moves the surface along the correction and along the last step as far as lowers the energy most (conjugate directions:
 * what the hold only estimates is made good here). level.scratch holds the residual and is spoilt. Returns the share of
 * the correction that was taken.
 */
function advance(level: PlateLevel, z: Float64Array, { step, image }: Path): number {
  const { correction, scratch } = level;
  let gain = 0;
  let gainStep = 0;
  for (let k = 0; k < z.length; k++) {
    gain += correction[k]! * scratch[k]!;
    gainStep += step[k]! * scratch[k]!;
  }
  // The right side of the surface is zero, so this is −A correction.
  plateResidual(level, correction, scratch);
  let cost = 0;
  let cross = 0;
  let costStep = 0;
  for (let k = 0; k < z.length; k++) {
    cost -= correction[k]! * scratch[k]!;
    cross += correction[k]! * image[k]!;
    costStep += step[k]! * image[k]!;
  }
  if (!(cost > 0)) return 0;
  const determinant = cost * costStep - cross * cross;
  // Where both directions are one but for rounding, the correction alone is taken.
  const both = determinant > PARALLEL * cost * costStep;
  const length = both ? (gain * costStep - gainStep * cross) / determinant : gain / cost;
  const again = both ? (gainStep * cost - gain * cross) / determinant : 0;
  for (let k = 0; k < z.length; k++) {
    const move = length * correction[k]! + again * step[k]!;
    step[k] = move;
    image[k] = again * image[k]! - length * scratch[k]!;
    z[k]! += move;
  }
  return Math.abs(length);
}

/** Relative determinant below which two directions are taken for one: rounding of 32-bit work space. */
const PARALLEL = 1e-5;

interface Sweeps {
  readonly z: Float64Array;
  readonly watch: Uint8Array | null;
  readonly count: number;
  /** Leaves the residual in level.scratch. */
  readonly residual: boolean;
}

/** Sweeps over the surface; returns the size of the largest change in the first. */
function sweeps(level: PlateLevel, pins: PinRows, { z, watch, count, residual }: Sweeps): number {
  const { width, height, scratch } = level;
  let first = 0;
  wavefront(height, count + (residual ? 1 : 0), (pass, j) => {
    if (pass === count) {
      plateResidualRow(level, z, { out: scratch, j });
      return;
    }
    const before = pass === 0 ? first : 0;
    const moved = movePinsOfRow(z, pins, { width, height, j, largest: before });
    const largest = smoothRow(level, z, { j, largest: moved, watch });
    if (pass === 0) first = largest;
  });
  return first;
}

/** One V-cycle from zero on a correction: level.correction ≈ (A + H)⁻¹ level.right. */
function correct({ levels, transfers }: Pick<Grids, 'levels' | 'transfers'>, l: number): void {
  const level = levels[l]!;
  const { correction, scratch } = level;
  correction.fill(0);
  const last = l === levels.length - 1;
  heldSweeps(level, { count: last ? LAST_SWEEPS : HELD_SWEEPS, residual: !last });
  if (last) return;
  restrict(transfers[l]!, [scratch, levels[l + 1]!.right]);
  correct({ levels, transfers }, l + 1);
  prolong(transfers[l]!, [levels[l + 1]!.correction, correction], { add: true, watch: null });
  heldSweeps(level, { count: HELD_SWEEPS, residual: false });
}

function heldSweeps(level: PlateLevel, { count, residual }: Pick<Sweeps, 'count' | 'residual'>): void {
  const { height, correction, scratch } = level;
  wavefront(height, count + (residual ? 1 : 0), (pass, j) => {
    if (pass === count) heldResidualRow(level, correction, { out: scratch, j });
    else heldSmoothRow(level, correction, j);
  });
}
