import { UserError } from '../errors.js';
import { MAX_CELLS } from './gridFrame.js';
import { gridLayout } from './gridLayout.js';
import { GRID_DEFAULTS, type GridOptions } from './gridOptions.js';
import { short } from './gridRemarks.js';
import { onTriangles, triangulate } from './linearOnTriangles.js';
import { reachedCells, unsolvedGrid } from './reachedCells.js';
import type { GridResult, Samples } from './types.js';

/**
 * Grids readings linearly on Delaunay triangles: frame, cells and reach are those of `gridReadings`, and cells outside the
 * readings' convex hull are NaN too. Triangles are those of all readings, so the grid's bounds change no value.
 *
 * Throws UserError `no_data` where the readings make no triangle, and where gridReadings does for the layout.
 */
export function gridByTriangles(samples: Samples, options: GridOptions & { readonly maxCells?: number } = {}): GridResult {
  const layout = gridLayout(samples, { ...GRID_DEFAULTS, maxCells: MAX_CELLS, ...options });
  const { frame } = layout;
  const { reached, occupied } = reachedCells(samples, layout);
  const triangles = triangulate(samples, frame.cellM);
  if (triangles.corners.length === 0) {
    throw new UserError({ code: 'no_data', where: 'grid, method "linear"', found: 'readings on one line or in one place', wanted: 'three that make a triangle', advice: 'take "tension"' });
  }
  const linear = onTriangles(triangles, frame);
  return unsolvedGrid(Float32Array.from(linear, (value, k) => (reached[k] === 1 ? value : NaN)), {
    layout, occupied, how: `Grid of ${frame.width} × ${frame.height} cells of ${short(frame.cellM)} m, linear on ${triangles.corners.length / 3} Delaunay triangles between ${triangles.x.length} places.`,
  });
}
