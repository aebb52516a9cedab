import { cholesky, choleskySolve } from '../numerics/cholesky.js';
import { applyPlate, smoothBackward, smoothForward } from './plateKernels.js';
import { fillDiagonal, plateLevel, plateWeight, type PlateLevel } from './plateLevel.js';
import { coarsenPins, movePins, type Pins } from './pins.js';
import { prolong, restrict, transfer, type Transfer } from './transfer.js';

/**
 * The surface of least energy through the pins: full multigrid (each grid starts from the solution on the next coarser
 * one), on every grid conjugate gradients with a V-cycle as preconditioner, the pinned nodes moved between the rounds
 * until the surface meets the data where they were measured.
 *
 * Source: Briggs (1974), Geophysics 39 (minimum curvature); Smith & Wessel (1990), Geophysics 55 (tension, data off the
 * nodes); Trottenberg, Oosterlee & Schüller (2001), Multigrid (cycle, cubic transfer for fourth order, CG acceleration).
 */
export interface PlateProblem {
  readonly width: number;
  readonly height: number;
  /** Weights of curvature and slope in cell units (see plateLevel.ts). */
  readonly alpha: number;
  readonly tau: number;
  readonly pins: Pins;
}

export interface PlateSolution {
  readonly z: Float64Array;
  /** Conjugate-gradient steps on the finest grid. */
  readonly iterations: number;
  /** Estimate of the largest error that is left, in the data's unit (see `errorEstimate`). */
  readonly remaining: number;
  readonly converged: boolean;
}

/** Where both sides are this short or shorter, the equations are solved directly. */
const DIRECT_SIDE = 5;
/** Steps between two moves of the pins: enough to carry a move to the neighbours. */
const STEPS_PER_ROUND = 2;
/** Coarser grids only supply a start: an error below the next grid's own discretisation is enough. */
const COARSE_TOLERANCE = 1e-3;
const COARSE_STEPS = 12;
/**
 * A node that data hold on a finer grid is held on a coarser one by a penalty: the energy of the spike that a correction
 * would leave there, as a share of a lone spike's (neighbouring spikes share theirs). Affects speed only (measured).
 */
const SPIKE_SHARE = 0.4;

interface Hierarchy {
  readonly levels: readonly PlateLevel[];
  /** Between level l and l + 1. */
  readonly transfers: readonly Transfer[];
  /** Factor of the coarsest level's matrix. */
  readonly direct: Float64Array;
}

/** `tolerance` in the data's unit. */
export function solvePlate(problem: PlateProblem, { tolerance, maxSteps }: { tolerance: number; maxSteps: number }): PlateSolution {
  const hierarchy = buildHierarchy(problem);
  const { levels, transfers } = hierarchy;
  const pinsOf = [problem.pins];
  for (let l = 1; l < levels.length; l++) {
    pinsOf.push(coarsenPins(pinsOf[l - 1]!, [levels[l - 1]!.width, levels[l]!.width, levels[l]!.height]));
  }
  const range = spread(problem.pins.value);
  let z = new Float64Array(levels.at(-1)!.width * levels.at(-1)!.height);
  let solution: Omit<PlateSolution, 'z'> = { iterations: 0, remaining: 0, converged: true };
  for (let start = levels.length - 1; start >= 0; start--) {
    const level = levels[start]!;
    if (start < levels.length - 1) {
      const finer = new Float64Array(level.width * level.height);
      prolong(transfers[start]!, [z, finer], { add: false, mask: null });
      z = finer;
    }
    holdPins(hierarchy, start, pinsOf);
    const goal = start === 0 ? { tolerance, maxSteps } : { tolerance: COARSE_TOLERANCE * range, maxSteps: COARSE_STEPS };
    solution = solveOnGrid(hierarchy, { start, pins: pinsOf[start]!, z }, goal);
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

function buildHierarchy({ width, height, alpha, tau }: PlateProblem): Hierarchy {
  const levels = [plateLevel({ width, height, alpha, tau })];
  const transfers: Transfer[] = [];
  for (;;) {
    const fine = levels.at(-1)!;
    if (fine.width <= DIRECT_SIDE && fine.height <= DIRECT_SIDE) break;
    const down = transfer(fine.width, fine.height);
    transfers.push(down);
    // Twice the cell: curvature counts a quarter, slope the same, in the units of the finer grid.
    levels.push(plateLevel({ width: down.x.coarse, height: down.y.coarse, alpha: fine.alpha / 4, tau: fine.tau }));
  }
  const coarsest = levels.at(-1)!;
  return { levels, transfers, direct: new Float64Array((coarsest.width * coarsest.height) ** 2) };
}

/** Holds the pinned nodes of grid `start` and lays their penalties on all coarser ones. */
function holdPins({ levels, transfers, direct }: Hierarchy, start: number, pinsOf: readonly Pins[]): void {
  const top = levels[start]!;
  top.penalty.fill(0);
  fillDiagonal(top, pinsOf[start]!.node);
  const spike = SPIKE_SHARE * (20 * top.alpha + 4 * top.tau);
  for (let l = start; l < transfers.length; l++) {
    const fine = levels[l]!;
    const coarse = levels[l + 1]!;
    coarse.penalty.fill(0);
    for (let j = 0, k = 0; j < fine.height; j++) {
      for (let i = 0; i < fine.width; i++, k++) {
        const weight = l > start ? fine.penalty[k]! : fine.inverseDiagonal[k] === 0 ? spike : 0;
        if (weight === 0) continue;
        // To the one, two or four coarse nodes around, by halves.
        const at = (j >> 1) * coarse.width + (i >> 1);
        const share = weight / ((1 + (i & 1)) * (1 + (j & 1)));
        coarse.penalty[at]! += share;
        if (i & 1) coarse.penalty[at + 1]! += share;
        if (j & 1) coarse.penalty[at + coarse.width]! += share;
        if (i & j & 1) coarse.penalty[at + coarse.width + 1]! += share;
      }
    }
    fillDiagonal(coarse, new Int32Array(0));
  }
  factorDirect(levels.at(-1)!, direct);
}

/** Keeps the direct solution finite where few pins leave a tilt free; far below any weight that matters. */
const RIDGE = 1e-9;

function factorDirect(level: PlateLevel, matrix: Float64Array): void {
  const { width, height, penalty, inverseDiagonal } = level;
  const n = width * height;
  matrix.fill(0);
  for (let k = 0; k < n; k++) {
    if (inverseDiagonal[k] === 0) {
      matrix[k * n + k] = 1;
      continue;
    }
    const j = Math.floor(k / width);
    const i = k - j * width;
    for (let dy = Math.max(-2, -j); dy <= Math.min(2, height - 1 - j); dy++) {
      for (let dx = Math.max(-2, -i); dx <= Math.min(2, width - 1 - i); dx++) {
        const other = k + dy * width + dx;
        if (inverseDiagonal[other] !== 0) matrix[k * n + other] = plateWeight(level, [i, j], [dx, dy]);
      }
    }
    matrix[k * n + k]! += penalty[k]! + RIDGE * (level.alpha + level.tau);
  }
  cholesky(matrix, n);
}

interface GridTask {
  readonly start: number;
  readonly pins: Pins;
  readonly z: Float64Array;
}

function solveOnGrid(hierarchy: Hierarchy, { start, pins, z }: GridTask, { tolerance, maxSteps }: { tolerance: number; maxSteps: number }): Omit<PlateSolution, 'z'> {
  const level = hierarchy.levels[start]!;
  const { width, height } = level;
  const moves = new Float64Array(pins.node.length);
  // The right side of the top level is the residual that the cycle works on.
  const residual = level.right;
  const direction = new Float64Array(z.length);
  const sizes: number[] = [];
  let steps = 0;
  let remaining = Infinity;
  while (steps < maxSteps) {
    const moved = movePins(z, pins, { width, height, moves });
    applyPlate(level, z, { out: residual, from: null });
    for (let k = 0; k < residual.length; k++) residual[k] = -residual[k]!;
    let product = 0;
    for (let step = 0; step < STEPS_PER_ROUND && steps < maxSteps; step++, steps++) {
      cycle(hierarchy, start);
      const { correction } = level;
      const { dot, size } = dotAndSize(residual, correction);
      sizes.push(Math.max(moved, size));
      remaining = errorEstimate(sizes);
      // Rounding alone makes the product vanish or turn negative.
      if (remaining <= tolerance || !(dot > 0)) return { iterations: steps, remaining, converged: remaining <= tolerance };
      const beta = step === 0 ? 0 : dot / product;
      product = dot;
      for (let k = 0; k < direction.length; k++) direction[k] = correction[k]! + beta * direction[k]!;
      applyPlate(level, direction, { out: level.scratch, from: null });
      advance({ z, residual, direction, image: level.scratch }, dot);
    }
  }
  return { iterations: steps, remaining, converged: false };
}

/** Steps over which the rate of convergence is taken, and the bounds that it is believed within. */
const RATE_STEPS = 4;
const BEST_RATE = 0.3;
const WORST_RATE = 0.98;

/**
 * The corrections fall about geometrically, so what is still to come is the last one's size over 1 − rate. Size: the
 * largest correction of a node or move of a pin.
 */
function errorEstimate(sizes: readonly number[]): number {
  const last = sizes.at(-1)!;
  const back = Math.min(RATE_STEPS, sizes.length - 1);
  const rate = back > 0 ? (last / sizes[sizes.length - 1 - back]!) ** (1 / back) : 1 / 2;
  return last / (1 - Math.min(WORST_RATE, Math.max(BEST_RATE, rate || 0)));
}

function dotAndSize(a: Float64Array, b: Float64Array): { dot: number; size: number } {
  let dot = 0;
  let size = 0;
  for (let k = 0; k < a.length; k++) {
    const value = b[k]!;
    dot += a[k]! * value;
    const magnitude = Math.abs(value);
    if (magnitude > size) size = magnitude;
  }
  return { dot, size };
}

function advance({ z, residual, direction, image }: Record<'z' | 'residual' | 'direction' | 'image', Float64Array>, dot: number): void {
  let curvature = 0;
  for (let k = 0; k < z.length; k++) curvature += direction[k]! * image[k]!;
  const length = dot / curvature;
  for (let k = 0; k < z.length; k++) {
    z[k]! += length * direction[k]!;
    residual[k]! -= length * image[k]!;
  }
}

/** One symmetric V-cycle: level.correction ≈ A⁻¹ level.right, zero at held nodes. */
function cycle({ levels, transfers, direct }: Hierarchy, start: number): void {
  const last = levels.length - 1;
  for (let l = start; l < last; l++) {
    const level = levels[l]!;
    level.correction.fill(0);
    smoothForward(level, level.correction, level.right);
    applyPlate(level, level.correction, { out: level.scratch, from: level.right });
    restrict(transfers[l]!, [level.scratch, levels[l + 1]!.right]);
  }
  const coarsest = levels[last]!;
  coarsest.correction.set(choleskySolve(direct, coarsest.correction.length, coarsest.right));
  for (let l = last - 1; l >= start; l--) {
    const level = levels[l]!;
    prolong(transfers[l]!, [levels[l + 1]!.correction, level.correction], { add: true, mask: level.inverseDiagonal });
    smoothBackward(level, level.correction, level.right);
  }
}
