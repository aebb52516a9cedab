import { UserError } from '../errors.js';
import type { Bounds, GridFrame, Samples } from './types.js';

/** A grid in memory beyond this is a mistake in the cell size or a stray reading: it would need gigabytes. */
export const MAX_CELLS = 64_000_000;
/** Share of a cell by which bounds may miss a multiple and still count as one: rounding of metres from feet. */
const SNAP_SLACK = 1e-6;

/** The smallest grid of whole cells that covers `bounds`; its edges are multiples of the cell in frame metres. */
export function gridFrame(bounds: Bounds, cellM: number, maxCells: number = MAX_CELLS): GridFrame {
  const left = Math.floor(bounds.west / cellM + SNAP_SLACK);
  const bottom = Math.floor(bounds.south / cellM + SNAP_SLACK);
  const width = Math.max(1, Math.ceil(bounds.east / cellM - SNAP_SLACK) - left);
  const height = Math.max(1, Math.ceil(bounds.north / cellM - SNAP_SLACK) - bottom);
  if (width * height > maxCells) {
    throw new UserError({
      code: 'value_invalid', where: 'grid',
      found: `${width} × ${height} cells of ${cellM} m over ${format(bounds.east - bounds.west)} by ${format(bounds.north - bounds.south)} m`,
      wanted: `at most ${maxCells / 1e6} million cells`,
      advice: 'state a larger cell_m, or look for readings with a wrong position',
    });
  }
  return { width, height, west: left * cellM, north: (bottom + height) * cellM, cellM };
}

/** Bounds of all samples with a place and a value. Throws UserError `no_data` where there is none. */
export function samplesBounds({ x, y, value }: Samples): Bounds {
  let west = Infinity;
  let south = Infinity;
  let east = -Infinity;
  let north = -Infinity;
  for (let n = 0; n < x.length; n++) {
    // NaN spoils the sum, and so does an infinity.
    if (!Number.isFinite(x[n]! + y[n]! + value[n]!)) continue;
    if (x[n]! < west) west = x[n]!;
    if (x[n]! > east) east = x[n]!;
    if (y[n]! < south) south = y[n]!;
    if (y[n]! > north) north = y[n]!;
  }
  if (west > east) {
    throw new UserError({ code: 'no_data', where: 'grid', found: 'no reading with a position and a value', wanted: 'at least one' });
  }
  return { west, south, east, north };
}

function format(metres: number): string {
  return metres.toFixed(0);
}
