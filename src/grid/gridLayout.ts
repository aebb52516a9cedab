import { UserError } from '../errors.js';
import { gridFrame, samplesBounds } from './gridFrame.js';
import type { Bounds, GridFrame, Samples } from './types.js';

/** Cell from line spacing: five cells between lines (common practice is four to five). */
export const CELLS_PER_SPACING = 5;
/** Reaches over the middle between two lines, and a quarter of the spacing further, so that lines may wander. */
const REACH_PER_SPACING = 0.75;
/** Cells around the grid on all sides: the rim of the plate is free, and pins on it have no neighbours. */
const RIM = 2;

export interface GridLayout {
  readonly spacingM: number;
  readonly cellM: number;
  readonly reachM: number;
  /** What is asked for. */
  readonly frame: GridFrame;
  /** What has to be solved for it: readings beyond the frame that still reach a cell of it, and a rim. */
  readonly solved: GridFrame;
}

/** Sizes that are not stated (NaN) are judged by the readings. `maxCells` is the largest grid that is let through. */
export function gridLayout(samples: Samples, { bounds, maxCells, ...sizes }: {
  cellM: number; spacingM: number; reachM: number; bounds: Bounds | null; maxCells: number;
}): GridLayout {
  const dataBounds = samplesBounds(samples);
  const spacingM = sizes.spacingM > 0 ? sizes.spacingM : meanDistance(samples, dataBounds);
  const cellM = sizes.cellM > 0 ? sizes.cellM : roundCell(spacingM / CELLS_PER_SPACING);
  const reachM = sizes.reachM > 0 ? sizes.reachM : Math.max(REACH_PER_SPACING * spacingM, cellM);
  const frame = gridFrame(bounds ?? grow(dataBounds, reachM), cellM, maxCells);
  const solved = withRim(gridFrame(within(frameBounds(frame), dataBounds, reachM), cellM, maxCells));
  return { spacingM, cellM, reachM, frame, solved };
}

/** What is thrown where bounds leave all readings out. */
export function noneInside(): UserError {
  return new UserError({ code: 'no_data', where: 'grid', found: 'no reading inside the bounds of the grid', wanted: 'at least one', advice: 'check the bounds' });
}

function meanDistance({ x, y, value }: Samples, bounds: Bounds): number {
  let count = 0;
  for (let n = 0; n < x.length; n++) if (Number.isFinite(x[n]! + y[n]! + value[n]!)) count++;
  const wide = bounds.east - bounds.west;
  const high = bounds.north - bounds.south;
  // On one line the distance along it, on a single place any length.
  return Math.max(Math.sqrt((wide * high) / count), Math.max(wide, high) / count) || 1;
}

/** Nearest of 1, 1.5, 2, 2.5, 3, 4, 5, 6, 8 times a power of ten. */
export function roundCell(lengthM: number): number {
  const power = 10 ** Math.floor(Math.log10(lengthM));
  const steps = [1, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10];
  const nearest = steps.reduce((best, step) => (Math.abs(step - lengthM / power) < Math.abs(best - lengthM / power) ? step : best));
  return Number((nearest * power).toPrecision(6));
}

function grow({ west, south, east, north }: Bounds, byM: number): Bounds {
  return { west: west - byM, south: south - byM, east: east + byM, north: north + byM };
}

function frameBounds({ width, height, west, north, cellM }: GridFrame): Bounds {
  return { west, north, east: west + width * cellM, south: north - height * cellM };
}

/** The frame's bounds, and beyond them the readings that still reach a cell of it. */
function within(frame: Bounds, data: Bounds, reachM: number): Bounds {
  return {
    west: Math.min(frame.west, Math.max(data.west, frame.west - reachM)),
    south: Math.min(frame.south, Math.max(data.south, frame.south - reachM)),
    east: Math.max(frame.east, Math.min(data.east, frame.east + reachM)),
    north: Math.max(frame.north, Math.min(data.north, frame.north + reachM)),
  };
}

function withRim(frame: GridFrame): GridFrame {
  return {
    ...frame, width: frame.width + 2 * RIM, height: frame.height + 2 * RIM,
    west: frame.west - RIM * frame.cellM, north: frame.north + RIM * frame.cellM,
  };
}
