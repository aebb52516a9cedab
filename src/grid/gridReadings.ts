import { MAX_CELLS } from './gridFrame.js';
import { gridTiled, type TiledOptions } from './gridTiled.js';
import type { GridResult, Samples } from './types.js';

/**
 * Grids readings by minimum curvature in tension: the surface z with (1 − T) L² ∇⁴z = T ∇²z between the readings that
 * takes their values (cell means, each at its own place in the cell). L is the line spacing, so tension does not
 * depend on the cell: with T = 0.25 slopes matter more than curvature over lengths beyond about 11 L (2π L √3).
 * A plane is taken off by least squares before and put back after. Cells beyond the reach are NaN. The grid's edges are
 * multiples of the cell in frame metres. The grid is that of `gridTiled`, held in memory as a whole, up to MAX_CELLS
 * unless told otherwise.
 *
 * Throws UserError `value_invalid` for a tension outside 0 … 1 or a grid of too many cells, `no_data` where no reading counts.
 *
 * Source: Briggs (1974), Geophysics 39, 39-48; Smith & Wessel (1990), Geophysics 55, 293-305 (there L is the cell).
 */
export async function gridReadings(samples: Samples, options: TiledOptions = {}): Promise<GridResult> {
  const tiled = gridTiled(samples, { maxCells: MAX_CELLS, ...options });
  const { width, height, west, north, cellM, reachM, spacingM, tension, tileCells } = tiled;
  const values = new Float32Array(width * height);
  for (let first = 0; first < height; first += tileCells) {
    values.set(await tiled.readRows(first, Math.min(tileCells, height - first)), first * width);
  }
  return { width, height, west, north, cellM, values, reachM, spacingM, tension, ...tiled.summary(), ...tiled.remarks() };
}
