import { UserError } from '../errors.js';
import { symmetricEigen2 } from '../numerics/eigen2.js';
import { binSamples, indexByCell } from './binSamples.js';
import { MAX_CELLS } from './gridFrame.js';
import { CELLS_PER_SPACING, gridLayout } from './gridLayout.js';
import type { Pins } from './pins.js';
import { reachMask } from './reachMask.js';
import { solvePlate } from './solvePlate.js';
import type { Bounds, GridResult, Samples } from './types.js';

export interface GridOptions {
  /** Side of a cell, metres; NaN: a fifth of the spacing, rounded. */
  readonly cellM?: number;
  /** Distance between lines, metres; NaN: the mean distance between readings that fill their rectangle evenly. */
  readonly spacingM?: number;
  /** 0 is a plain plate (minimum curvature), 1 a membrane. */
  readonly tension?: number;
  /** Distance from readings beyond which no cell is filled, metres; NaN: from the spacing. */
  readonly reachM?: number;
  /** Largest error that the solver may leave, as a share of the data's range. */
  readonly tolerance?: number;
  /** Steps of the solver on the finest grid. */
  readonly maxSteps?: number;
  /** What the grid has to cover; null: the readings and the reach around them. */
  readonly bounds?: Bounds | null;
}

export const GRID_DEFAULTS = Object.freeze({
  cellM: NaN,
  spacingM: NaN,
  /** Smith & Wessel (1990) advise about 0.25 for potential fields. */
  tension: 0.25,
  reachM: NaN,
  /** A tenth of a nanotesla where the readings span 5,000 nT: below the noise of any magnetometer in the field. */
  tolerance: 2e-5,
  maxSteps: 200,
  bounds: null,
});

/** Finer than this the cells between lines are invention, coarser than that the readings are wasted (common practice). */
const FINEST = 1 / 8;
const COARSEST = 1 / 2;
/** Readings on one line leave a plate free to tilt about it; a membrane is not. */
export const TENSION_ON_LINE = 0.25;
/** Readings whose standard deviation across is below a cell lie on one line. */
const LINE_WIDTH_CELLS = 1;

/**
 * Grids readings by minimum curvature in tension: the surface z with (1 − T) L² ∇⁴z = T ∇²z between the readings that
 * takes their values (cell means, each at its own place in the cell). L is the line spacing, so tension does not
 * depend on the cell: with T = 0.25 slopes matter more than curvature over lengths beyond about 11 L (2π L √3).
 * A plane is taken off by least squares before and put back after. Cells beyond the reach are NaN. The grid's edges are
 * multiples of the cell in frame metres.
 *
 * Source: Briggs (1974), Geophysics 39, 39-48; Smith & Wessel (1990), Geophysics 55, 293-305 (there L is the cell).
 */
export function gridReadings(samples: Samples, options: GridOptions = {}): GridResult {
  const { tension, tolerance, maxSteps, bounds: wanted, ...sizes } = { ...GRID_DEFAULTS, ...options };
  if (!(tension >= 0 && tension <= 1)) {
    throw new UserError({ code: 'value_invalid', where: 'grid, tension', found: String(tension), wanted: 'a number from 0 to 1' });
  }
  const { spacingM, cellM, reachM, frame, solved } = gridLayout(samples, { ...sizes, bounds: wanted, maxCells: MAX_CELLS });
  const index = indexByCell(samples, solved);
  const pins = binSamples(index, samples.value, solved.width);
  if (pins.node.length === 0) {
    throw new UserError({ code: 'no_data', where: 'grid', found: 'no reading inside the bounds of the grid', wanted: 'at least one', advice: 'check the bounds' });
  }
  const plane = fitPlane(pins, solved.width);
  const range = takePlane(pins, plane, solved.width);
  const mask = reachMask(index, solved, reachM);
  const used = plane.onLine ? Math.max(tension, TENSION_ON_LINE) : tension;
  const { z, iterations, remaining, converged } = solvePlate(
    { width: solved.width, height: solved.height, alpha: 1 - used, tau: used * (cellM / spacingM) ** 2, pins, watch: mask },
    // Readings that lie in a plane have no range; any tolerance is met at once.
    { tolerance: tolerance * Math.max(range, plane.rounding), maxSteps },
  );

  const values = new Float32Array(frame.width * frame.height).fill(NaN);
  const shift = Math.round((frame.west - solved.west) / cellM);
  const down = Math.round((solved.north - frame.north) / cellM);
  let filled = 0;
  for (let j = 0, to = 0; j < frame.height; j++) {
    for (let i = 0; i < frame.width; i++, to++) {
      const from = (j + down) * solved.width + i + shift;
      if (mask[from] === 0) continue;
      values[to] = z[from]! + plane.level + plane.perColumn * (i + shift) + plane.perRow * (j + down);
      filled++;
    }
  }
  const remainingShare = range > 0 ? remaining / range : 0;
  const result = { ...frame, values, reachM, spacingM, tension: used, filled, pinned: pins.node.length, iterations, remaining, remainingShare, converged };
  return { ...result, notes: notesOf(result), warnings: warningsOf(result, tolerance) };
}

interface Plane {
  readonly level: number;
  readonly perColumn: number;
  readonly perRow: number;
  /** Size of the rounding error of the values. */
  readonly rounding: number;
  /** Whether the readings lie on one line (or in one place). */
  readonly onLine: boolean;
}

/** Least-squares plane through the pins; their mean where they lie on one line. */
function fitPlane({ value, node, dx, dy }: Pins, width: number): Plane {
  const n = node.length;
  let mx = 0;
  let my = 0;
  let mz = 0;
  let largest = 0;
  for (let s = 0; s < n; s++) {
    const j = Math.floor(node[s]! / width);
    mx += (node[s]! - j * width + dx[s]!) / n;
    my += (j + dy[s]!) / n;
    mz += value[s]! / n;
    largest = Math.max(largest, Math.abs(value[s]!));
  }
  let xx = 0;
  let xy = 0;
  let yy = 0;
  let xz = 0;
  let yz = 0;
  for (let s = 0; s < n; s++) {
    const j = Math.floor(node[s]! / width);
    const x = node[s]! - j * width + dx[s]! - mx;
    const y = j + dy[s]! - my;
    const z = value[s]! - mz;
    xx += x * x;
    xy += x * y;
    yy += y * y;
    xz += x * z;
    yz += y * z;
  }
  const rounding = largest * 1e-12 || 1e-300;
  if (symmetricEigen2([xx / n, xy / n, yy / n]).minorVariance < LINE_WIDTH_CELLS ** 2) {
    return { perColumn: 0, perRow: 0, level: mz, rounding, onLine: true };
  }
  const determinant = xx * yy - xy * xy;
  const perColumn = (xz * yy - yz * xy) / determinant;
  const perRow = (yz * xx - xz * xy) / determinant;
  return { perColumn, perRow, level: mz - perColumn * mx - perRow * my, rounding, onLine: false };
}

/** Takes the plane off the pins' values, in place; returns the range of the values before. */
function takePlane({ value, node, dx, dy }: Pins, { level, perColumn, perRow }: Plane, width: number): number {
  let low = Infinity;
  let high = -Infinity;
  for (let s = 0; s < node.length; s++) {
    low = Math.min(low, value[s]!);
    high = Math.max(high, value[s]!);
    const j = Math.floor(node[s]! / width);
    value[s]! -= level + perColumn * (node[s]! - j * width + dx[s]!) + perRow * (j + dy[s]!);
  }
  return high - low;
}

type Bare = Omit<GridResult, 'notes' | 'warnings'>;

function notesOf({ width, height, cellM, spacingM, reachM, tension, filled, pinned, iterations, remainingShare }: Bare): string[] {
  return [
    `Grid of ${width} × ${height} cells of ${short(cellM)} m, by minimum curvature in tension ${short(tension)} (line spacing taken as ${short(spacingM)} m).`,
    `${filled} cells are filled, all within ${short(reachM)} m of a reading; ${pinned} of them hold readings.`,
    `The surface was solved in ${iterations} steps to about ${remainingShare.toExponential(1)} of the readings' range.`,
  ];
}

function warningsOf({ cellM, spacingM, converged, iterations, remainingShare }: Bare, tolerance: number): string[] {
  const warnings: string[] = [];
  const share = cellM / spacingM;
  if (share < FINEST) warnings.push(`Cells of ${short(cellM)} m are finer than the readings bear: lines ${short(spacingM)} m apart support ${short(spacingM / CELLS_PER_SPACING)} m; what stands between lines is interpolation.`);
  if (share > COARSEST) warnings.push(`Cells of ${short(cellM)} m are coarse for lines ${short(spacingM)} m apart: ${short(spacingM / CELLS_PER_SPACING)} m would keep narrow anomalies.`);
  if (!converged) warnings.push(`The grid's solver stopped after ${iterations} steps at about ${remainingShare.toExponential(1)} of the readings' range; ${tolerance.toExponential(0)} was wanted.`);
  return warnings;
}

function short(value: number): string {
  return String(Number(value.toPrecision(3)));
}
