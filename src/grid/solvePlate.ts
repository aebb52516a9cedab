import { clearHold, coarsenHold, holdNode } from './hold.js';
import { heldResidual, heldSmooth } from './heldKernels.js';
import { coarsenPins, movePinsOfRow, pinRows, type PinRows, type Pins } from './pins.js';
import { plateResidual, smoothRow } from './plateKernels.js';
import { fillDiagonal, plateLevel, plateWeight, type PlateLevel } from './plateLevel.js';
import { prolong, restrict, transfer, type Transfer } from './transfer.js';

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
/** Coarser grids only supply a start: an error below the next grid's own discretisation is enough. */
const COARSE_TOLERANCE = 1e-3;
const COARSE_CYCLES = 5;
/**
 * Weight of a pin's hold on corrections: half the energy of the spike that it leaves, as far as neighbouring pins do not
 * share it, and no less than of a pin in a field of pins. Affects speed only (measured).
 */
const SPIKE_SHARE = 0.5;
const LEAST_SPIKE = 4;
/** Bounds within which the rate of convergence is believed. */
const BEST_RATE = 0.3;
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
      prolong(transfers[l]!, [z, finer], { add: false, mask: null, watch: null });
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
  const levels = [plateLevel({ width, height, alpha, tau })];
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
  let before = NaN;
  let remaining = Infinity;
  for (let step = 1; step <= maxSteps; step++) {
    const size = cycle(grids, { l, z, watch });
    const rate = Math.min(WORST_RATE, Math.max(BEST_RATE, size / before || 0));
    // The changes fall about geometrically: what is still to come is their sum.
    remaining = (size * rate) / (1 - rate);
    if (remaining <= tolerance) return { iterations: step, remaining, converged: true };
    before = size;
  }
  return { iterations: maxSteps, remaining, converged: false };
}

/** Pins the nodes of grid `start`, whose surface is sought, and lays their hold on all coarser grids. */
function layHolds({ levels, pins }: Grids, start: number): void {
  const top = levels[start]!;
  const { node } = pins[start]!.pins;
  fillDiagonal(top, node);
  for (let l = start; l + 1 < levels.length; l++) {
    const fine = levels[l]!;
    const coarse = levels[l + 1]!;
    clearHold(coarse.hold);
    if (l > start) {
      coarsenHold(fine, coarse);
    } else {
      for (let n = 0; n < node.length; n++) {
        const j = Math.floor(node[n]! / fine.width);
        holdNode(coarse.hold, { i: node[n]! - j * fine.width, j, weight: spikeWeight(top, node[n]!), coarseWidth: coarse.width });
      }
    }
    fillDiagonal(coarse, null);
  }
}

/** Energy of a spike of height 1 on a pinned node and on all pinned nodes around it, as far as this node's row shows it. */
function spikeWeight(level: PlateLevel, k: number): number {
  const { width, height, inverseDiagonal, alpha, tau } = level;
  const j = Math.floor(k / width);
  const i = k - j * width;
  let sum = 0;
  for (let dy = Math.max(-2, -j); dy <= Math.min(2, height - 1 - j); dy++) {
    const reach = 2 - Math.abs(dy);
    for (let dx = Math.max(-reach, -i); dx <= Math.min(reach, width - 1 - i); dx++) {
      if (inverseDiagonal[k + dy * width + dx] === 0) sum += plateWeight(level, [i, j], [dx, dy]);
    }
  }
  return SPIKE_SHARE * Math.max(sum, LEAST_SPIKE * (alpha + tau));
}

/** One V-cycle on the surface itself; returns the size of the largest change. */
function cycle({ levels, transfers, pins }: Grids, { l, z, watch }: Work): number {
  const level = levels[l]!;
  const last = l === levels.length - 1;
  let size = sweep(level, pins[l]!, { z, watch });
  if (last) {
    for (let n = 1; n < LAST_SWEEPS; n++) sweep(level, pins[l]!, { z, watch });
    return size;
  }
  const coarse = levels[l + 1]!;
  const { correction, scratch } = level;
  plateResidual(level, z, scratch);
  restrict(transfers[l]!, [scratch, coarse.right]);
  correct({ levels, transfers }, l + 1);
  correction.fill(0);
  const most = prolong(transfers[l]!, [coarse.correction, correction], { add: false, mask: level.inverseDiagonal, watch });
  // The correction goes as far as lowers the energy most: the hold only estimates what it costs.
  const gain = dot(correction, scratch);
  plateResidual(level, correction, scratch);
  const cost = -dot(correction, scratch);
  if (cost > 0) {
    const length = gain / cost;
    for (let k = 0; k < z.length; k++) z[k]! += length * correction[k]!;
    size = Math.max(size, length * most);
  }
  sweep(level, pins[l]!, { z, watch });
  return size;
}

function sweep(level: PlateLevel, pins: PinRows, { z, watch }: Pick<Work, 'z' | 'watch'>): number {
  const { width, height } = level;
  let largest = 0;
  for (let j = 0; j < height; j++) {
    largest = movePinsOfRow(z, pins, { width, height, j, largest });
    largest = smoothRow(level, z, { j, largest, watch });
  }
  return largest;
}

/** One V-cycle from zero on a correction: level.correction ≈ (A + H)⁻¹ level.right. */
function correct({ levels, transfers }: Pick<Grids, 'levels' | 'transfers'>, l: number): void {
  const level = levels[l]!;
  const { correction, scratch } = level;
  correction.fill(0);
  heldSmooth(level, correction);
  if (l === levels.length - 1) {
    for (let n = 1; n < LAST_SWEEPS; n++) heldSmooth(level, correction);
    return;
  }
  heldResidual(level, correction, scratch);
  restrict(transfers[l]!, [scratch, levels[l + 1]!.right]);
  correct({ levels, transfers }, l + 1);
  prolong(transfers[l]!, [levels[l + 1]!.correction, correction], { add: true, mask: null, watch: null });
  heldSmooth(level, correction);
}

function dot(a: Float64Array, b: Float32Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k]! * b[k]!;
  return sum;
}
