import { holdPins } from './hold.js';
import { heldResidualRow, heldSmoothRow } from './heldKernels.js';
import { Moves, type Window } from './moves.js';
import { coarsenPins, joinPins, meetPins, movePinsOfRow, nodePins, pinRows, pinsWithin, rimNodes, type PinRows, type Pins } from './pins.js';
import { plateResidual, plateResidualRow, smoothRow } from './plateKernels.js';
import { fillRelaxation, plateLevel, type PlateLevel } from './plateLevel.js';
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
 * Sweeps on the surface before and after each coarse correction, and on each coarser correction: with these numbers a cycle
 * leaves a sixth to a third of the error, however far apart the readings are (measured). With one sweep on corrections
 * cycles diverge.
 */
const SWEEPS = 3;
const HELD_SWEEPS = 2;
/** Pins move in every second sweep: in each it costs more than it gains (measured). */
const PIN_EVERY = 2;
/**
 * Share of a correction that is taken: the hold lets corrections grow a little too large near pins. Where cycles leave more
 * than the slow rate, the share is found anew in each, which costs a quarter of a cycle and pays where pins are sparse
 * (measured).
 */
const SHARE = 0.8;
const SLOW_RATE = 0.3;
/** Spots that still move are solved by themselves where they take no more than this share of the nodes. */
const SPOTS_SHARE = 0.25;
/** Share of the tolerance that what lies outside them may use up: inside, one cycle more costs little. */
const OUTSIDE_SHARE = 0.8;

interface Grids {
  readonly levels: readonly PlateLevel[];
  readonly pins: readonly PinRows[];
  /** Between level l and l + 1. */
  readonly transfers: readonly Transfer[];
}

interface Goal {
  /** In the data's unit. */
  readonly tolerance: number;
  readonly maxSteps: number;
}

export function solvePlate(problem: PlateProblem, goal: Goal): PlateSolution {
  const grids = buildGrids(problem);
  const { levels, transfers } = grids;
  const last = levels.length - 1;
  let z = new Float64Array(levels[last]!.width * levels[last]!.height);
  for (let l = last; l > 0; l--) {
    cycle(grids, { l, z }, null);
    const finer = new Float64Array(levels[l - 1]!.width * levels[l - 1]!.height);
    prolong(transfers[l - 1]!, [z, finer], null);
    z = finer;
    // From here on only corrections are sought on this grid.
    fillRelaxation(levels[l]!, null);
  }
  return { z, ...improve(problem, { grids, z }, { ...goal, spots: true }) };
}

function buildGrids({ width, height, alpha, tau, pins }: PlateProblem): Grids {
  const levels = [plateLevel({ width, height, alpha, tau }, { finest: true })];
  const pinsOf = [pins];
  const transfers: Transfer[] = [];
  for (;;) {
    const fine = levels.at(-1)!;
    const own = pinsOf.at(-1)!;
    fillRelaxation(fine, own.node);
    if (fine.width <= LAST_SIDE && fine.height <= LAST_SIDE) break;
    const down = transfer(fine.width, fine.height);
    transfers.push(down);
    // Twice the cell: curvature counts a quarter, slope the same, in the units of the finer grid.
    const coarse = plateLevel({ width: down.x.coarse, height: down.y.coarse, alpha: fine.alpha / 4, tau: fine.tau });
    holdPins(coarse, { pins: own, weights: spikeWeights(fine, own.node), finer: fine });
    levels.push(coarse);
    pinsOf.push(coarsenPins(own, [fine.width, coarse.width, coarse.height]));
  }
  return { levels, transfers, pins: pinsOf.map((each, l) => pinRows(each, levels[l]!.width, levels[l]!.height)) };
}

/** Cycles on the finest grid, in place, until the goal is reached; `spots`: the last of them only where they are needed. */
function improve(problem: PlateProblem, { grids, z }: { grids: Grids; z: Float64Array }, { tolerance, maxSteps, spots }: Goal & { spots: boolean }): Omit<PlateSolution, 'z'> {
  const moves = new Moves(z, problem);
  let path: Path | null = null;
  for (let step = 1; step <= maxSteps; step++) {
    cycle(grids, { l: 0, z }, path);
    moves.note(z);
    const { remaining } = moves;
    if (remaining <= tolerance) return { iterations: step, remaining, converged: true };
    if (moves.rate > SLOW_RATE) path ??= newPath(z.length);
    if (!spots || step === maxSteps) continue;
    // What is left outside adds to what is left inside.
    const outside = OUTSIDE_SHARE * tolerance;
    const windows = moves.unsettled(outside);
    if (windows.reduce((sum, { width, height }) => sum + width * height, 0) > SPOTS_SHARE * z.length) continue;
    const solved = windows.map((window) => improveWindow(problem, { z, pins: grids.pins[0]!, window }, { tolerance: tolerance - outside, maxSteps: maxSteps - step }));
    return {
      iterations: step + Math.max(...solved.map(({ iterations }) => iterations)),
      remaining: outside + Math.max(...solved.map((each) => each.remaining)),
      converged: solved.every(({ converged }) => converged),
    };
  }
  return { iterations: maxSteps, remaining: moves.remaining, converged: false };
}

/** Goes on with the cycles in a window of the surface alone, whose rim rests on the surface around. */
function improveWindow(problem: PlateProblem, { z, pins, window }: { z: Float64Array; pins: PinRows; window: Window }, goal: Goal): Omit<PlateSolution, 'z'> {
  const { left, top, width, height } = window;
  const cut = <T extends Float64Array | Uint8Array>(whole: T, part: T): T => {
    for (let j = 0; j < height; j++) part.set(whole.subarray((top + j) * problem.width + left, (top + j) * problem.width + left + width), j * width);
    return part;
  };
  const own = cut(z, new Float64Array(width * height));
  const node = rimNodes(window, { west: left > 0, east: left + width < problem.width, north: top > 0, south: top + height < problem.height });
  const rim = nodePins(node, Float64Array.from(node, (k) => own[k]!));
  const part = {
    ...problem, width, height, pins: joinPins(rim, pinsWithin(pins, problem.width, window)),
    watch: problem.watch && cut(problem.watch, new Uint8Array(width * height)),
  };
  const grids = buildGrids(part);
  for (const level of grids.levels.slice(1)) fillRelaxation(level, null);
  const solved = improve(part, { grids, z: own }, { ...goal, spots: false });
  for (let j = 0; j < height; j++) z.set(own.subarray(j * width, (j + 1) * width), (top + j) * problem.width + left);
  return solved;
}

/** One V-cycle on the surface of level `l` itself, by a fixed share where `path` is null. */
function cycle({ levels, transfers, pins }: Grids, { l, z }: { l: number; z: Float64Array }, path: Path | null): void {
  const level = levels[l]!;
  const last = l === levels.length - 1;
  sweeps(level, pins[l]!, { z, count: last ? LAST_SWEEPS : SWEEPS, residual: !last });
  if (last) return;
  const coarse = levels[l + 1]!;
  restrict(transfers[l]!, [level.scratch, coarse.right]);
  correct({ levels, transfers }, l + 1);
  const { width, height } = level;
  if (path) {
    prolong(transfers[l]!, [coarse.correction, path.correction], null);
    meetPins(path.correction, pins[l]!.pins, { width, height, values: false });
    advance(level, z, path);
  } else {
    prolong(transfers[l]!, [coarse.correction, z], SHARE);
    meetPins(z, pins[l]!.pins, { width, height, values: true });
  }
  sweeps(level, pins[l]!, { z, count: SWEEPS, residual: false });
}

/** A coarse correction, the last coarse step and what the operator makes of that; step and image are zero before the first. */
interface Path {
  readonly correction: Float64Array;
  readonly step: Float32Array;
  readonly image: Float32Array;
}

function newPath(nodes: number): Path {
  return { correction: new Float64Array(nodes), step: new Float32Array(nodes), image: new Float32Array(nodes) };
}

/**
 * Moves the surface along the correction and along the last step as far as lowers the energy most (conjugate directions:
 * what the hold only estimates is made good here). level.scratch holds the residual and is spoilt.
 */
function advance(level: PlateLevel, z: Float64Array, { correction, step, image }: Path): void {
  const { scratch } = level;
  let gain = 0;
  let gainStep = 0;
  for (let k = 0; k < z.length; k++) {
    gain += correction[k]! * scratch[k]!;
    gainStep += step[k]! * scratch[k]!;
  }
  // −A correction.
  plateResidual(level, correction, scratch);
  let cost = 0;
  let cross = 0;
  let costStep = 0;
  for (let k = 0; k < z.length; k++) {
    cost -= correction[k]! * scratch[k]!;
    cross += correction[k]! * image[k]!;
    costStep += step[k]! * image[k]!;
  }
  if (!(cost > 0)) return;
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
}

/** Relative determinant below which two directions are taken for one: rounding of 32-bit work space. */
const PARALLEL = 1e-5;

interface Sweeps {
  readonly z: Float64Array;
  readonly count: number;
  /** Leaves the residual in level.scratch. */
  readonly residual: boolean;
}

function sweeps(level: PlateLevel, pins: PinRows, { z, count, residual }: Sweeps): void {
  const { height, scratch } = level;
  wavefront(height, count + (residual ? 1 : 0), (pass, j) => {
    if (pass === count) plateResidualRow(level, z, { out: scratch, j });
    else {
      if (pass % PIN_EVERY === 0) movePinsOfRow(z, pins, level, j);
      smoothRow(level, z, j);
    }
  });
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
  prolong(transfers[l]!, [levels[l + 1]!.correction, correction], 1);
  heldSweeps(level, { count: HELD_SWEEPS, residual: false });
}

function heldSweeps(level: PlateLevel, { count, residual }: Pick<Sweeps, 'count' | 'residual'>): void {
  const { height, correction, scratch } = level;
  wavefront(height, count + (residual ? 1 : 0), (pass, j) => {
    if (pass === count) heldResidualRow(level, correction, { out: scratch, j });
    else heldSmoothRow(level, correction, j);
  });
}
