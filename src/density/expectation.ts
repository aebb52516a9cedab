import type { Grid } from '../raster/types.js';
import { normalCdf } from '../numerics/special.js';
import { areaBounds, areaM2 } from './area.js';
import { blurShifts } from './blurShifts.js';
import { coverage, type Lattice } from './coverage.js';
import { discArea } from './discArea.js';
import { coreCovariance, localFrame } from './localFrame.js';
import { steadyCovariance } from './parts.js';
import type { Area, Covariance, Density, GaussianPart } from './types.js';

/** A Gaussian is followed this many σ out; what lies beyond weighs less than 1e−9. */
const REACH_SIGMAS = 6.5;
/** A step of the outer integral is at most this share of what the integrand varies over: error below 1e−5. */
const STEP_SHARE = 1;
/** Steps across a Gaussian's reach at most: a sliver thinner than about a millimetre a metre is sampled, not resolved. */
const MOST_STEPS = 4000;
/** 3-point Gauss–Legendre on [−1, 1]. Source: Abramowitz & Stegun, table 25.4. */
const NODES = [-Math.sqrt(0.6), 0, Math.sqrt(0.6)];
const WEIGHTS = [5 / 18, 8 / 18, 5 / 18];

/**
 * ∫ density × grid over the plane, blunders included. A cell's value holds all over the cell; a cell with NaN and all
 * ground outside the grid count 0. Discs and areas are cut exactly at the cells' edges; a Gaussian is integrated over
 * each cell, so one that is smaller than a cell comes out right. A rounded Gaussian is a rectangle with blurred edges;
 * blur is a sum over shifts, within about 3e−3 where the grid does not change from cell to cell.
 */
export function expectation(density: Density, grid: Grid): number {
  let sum = 0;
  for (const part of density.parts) {
    if (part.weight === 0) continue;
    if (part.kind === 'disc') sum += part.weight * overDisc(grid, part);
    else if (part.kind === 'area') sum += part.weight * overBlurredArea(grid, part.area, part.cov);
    else if (part.rounding) sum += part.weight * overBlurredArea(grid, roundingArea(part), coreCovariance(part.cov, part.rounding));
    else sum += part.weight * overGaussian(grid, part);
  }
  return sum;
}

/** The rectangle that a part's digits leave open. */
function roundingArea(part: GaussianPart): Area {
  const { x, y, matrix: [a, b, c, d], halfWidths: [first, second] } = localFrame(part);
  const corners = [[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]] as const;
  return [[corners.map(([u, v]) => [x + a * first * u + b * second * v, y + c * first * u + d * second * v] as const)]];
}

function overBlurredArea(grid: Grid, area: Area, cov: Covariance | undefined): number {
  if (!cov) return overArea(grid, area);
  return blurShifts(area, cov).reduce((sum, { weight, area: shifted }) => sum + weight * overArea(grid, shifted), 0);
}

function overArea(grid: Grid, area: Area): number {
  const part = cropped(grid, area);
  if (!part) return 0;
  const shares = coverage(area, part.lattice);
  let sum = 0;
  for (let row = 0; row < part.lattice.height; row++) {
    for (let column = 0; column < part.lattice.width; column++) {
      const value = grid.values[(part.row + row) * grid.width + part.column + column]!;
      if (value === value) sum += shares[row * part.lattice.width + column]! * value;
    }
  }
  return (sum * grid.cellM * grid.cellM) / areaM2(area);
}

/** A disc that holds the whole grid, as a blunder's usually does, needs no cutting. */
function overDisc(grid: Grid, disc: { x: number; y: number; radiusM: number }): number {
  const { west, north, width, height, cellM, values } = grid;
  const farX = Math.max(Math.abs(west - disc.x), Math.abs(west + width * cellM - disc.x));
  const farY = Math.max(Math.abs(north - disc.y), Math.abs(north - height * cellM - disc.y));
  if (Math.hypot(farX, farY) > disc.radiusM) return overArea(grid, discArea(disc));
  let sum = 0;
  for (let i = 0; i < values.length; i++) if (values[i] === values[i]) sum += values[i]!;
  return (sum * cellM * cellM) / (Math.PI * disc.radiusM ** 2);
}

/** The part of the grid within an area's bounds, and where it begins; null where they do not meet. */
function cropped({ west, north, width, height, cellM }: Grid, area: Area): { lattice: Lattice; column: number; row: number } | null {
  const bounds = areaBounds(area);
  const column = Math.max(0, Math.floor((bounds.west - west) / cellM));
  const row = Math.max(0, Math.floor((north - bounds.north) / cellM));
  const columns = Math.min(width, Math.ceil((bounds.east - west) / cellM)) - column;
  const rows = Math.min(height, Math.ceil((north - bounds.south) / cellM)) - row;
  if (!(columns > 0 && rows > 0)) return null;
  return { column, row, lattice: { width: columns, height: rows, west: west + column * cellM, north: north - row * cellM, cellM } };
}

/**
 * Along the axis of the larger variance by quadrature, cell by cell; across it in closed form, for there the conditional
 * density is a Gaussian whose mean moves linearly.
 */
function overGaussian(grid: Grid, part: { x: number; y: number; cov: Covariance }): number {
  const { width, height, cellM, values } = grid;
  const [ee, en, nn] = steadyCovariance(part.cov);
  const eastward = ee >= nn;
  // `u` is the outer axis, `v` the inner one, both in metres from the grid's north-west corner, v = row or column downwards.
  const east = part.x - grid.west;
  const south = grid.north - part.y;
  const [u0, v0] = eastward ? [east, south] : [south, east];
  const [uCells, vCells] = eastward ? [width, height] : [height, width];
  const [uStride, vStride] = eastward ? [1, width] : [width, 1];
  const varU = eastward ? ee : nn;
  const slope = -en / varU;
  const sdU = Math.sqrt(varU);
  const sdV = Math.sqrt(Math.max((ee * nn - en * en) / varU, 0));
  const scale = Math.min(sdU, slope === 0 ? Infinity : sdV / Math.abs(slope));
  const step = Math.max(STEP_SHARE * scale, (2 * REACH_SIGMAS * sdU) / MOST_STEPS);

  const first = Math.max(0, Math.floor((u0 - REACH_SIGMAS * sdU) / cellM));
  const last = Math.min(uCells - 1, Math.floor((u0 + REACH_SIGMAS * sdU) / cellM));
  let sum = 0;
  for (let cell = first; cell <= last; cell++) {
    const low = Math.max(cell * cellM, u0 - REACH_SIGMAS * sdU);
    const high = Math.min((cell + 1) * cellM, u0 + REACH_SIGMAS * sdU);
    if (high <= low) continue;
    const steps = Math.ceil((high - low) / step);
    const h = (high - low) / steps;
    for (let k = 0; k < steps; k++) {
      for (let node = 0; node < NODES.length; node++) {
        const u = low + h * (k + 0.5 + 0.5 * NODES[node]!);
        const t = (u - u0) / sdU;
        const mass = (WEIGHTS[node]! * h * Math.exp(-0.5 * t * t)) / (sdU * Math.sqrt(2 * Math.PI));
        sum += mass * acrossCells(values, { start: cell * uStride, stride: vStride, count: vCells, cellM, mean: v0 + slope * (u - u0), sd: sdV });
      }
    }
  }
  return sum;
}

interface Column {
  readonly start: number;
  readonly stride: number;
  readonly count: number;
  readonly cellM: number;
  readonly mean: number;
  readonly sd: number;
}

/** Expected value along one line of cells under a one-dimensional Gaussian. */
function acrossCells(values: Grid['values'], { start, stride, count, cellM, mean, sd }: Column): number {
  const first = Math.max(0, Math.floor((mean - REACH_SIGMAS * sd) / cellM));
  const last = Math.min(count - 1, Math.floor((mean + REACH_SIGMAS * sd) / cellM));
  if (last < first) return 0;
  let sum = 0;
  let below = normalCdf((first * cellM - mean) / sd);
  for (let cell = first; cell <= last; cell++) {
    const above = normalCdf(((cell + 1) * cellM - mean) / sd);
    const value = values[start + cell * stride]!;
    if (value === value) sum += (above - below) * value;
    below = above;
  }
  return sum;
}
