import { CELLS_PER_SPACING } from './gridLayout.js';
import type { GridRemarks, GridResult } from './types.js';

/** Finer than this the cells between lines are invention, coarser than that the readings are wasted (common practice). */
const FINEST = 1 / 8;
const COARSEST = 1 / 2;

/** What there is to say of a grid in tension, in words; `tolerance` is the share of the range that the solver was to reach. */
export function gridRemarks(grid: Omit<GridResult, 'values' | keyof GridRemarks>, tolerance: number): GridRemarks {
  const { width, height, cellM, spacingM, reachM, tension, filled, pinned, iterations, remainingShare, converged } = grid;
  const left = `${remainingShare.toExponential(1)} of the readings' range`;
  const advised = short(spacingM / CELLS_PER_SPACING);
  const share = cellM / spacingM;
  const warnings: string[] = [];
  if (share < FINEST) warnings.push(`Cells of ${short(cellM)} m are finer than the readings bear: lines ${short(spacingM)} m apart support ${advised} m; what stands between lines is interpolation.`);
  if (share > COARSEST) warnings.push(`Cells of ${short(cellM)} m are coarse for lines ${short(spacingM)} m apart: ${advised} m would keep narrow anomalies.`);
  if (!converged) warnings.push(`The grid's solver stopped after ${iterations} steps at about ${left}; ${tolerance.toExponential(0)} was wanted.`);
  return {
    warnings,
    notes: [
      `Grid of ${width} × ${height} cells of ${short(cellM)} m, by minimum curvature in tension ${short(tension)} (line spacing taken as ${short(spacingM)} m).`,
      `${filled} cells are filled, all within ${short(reachM)} m of a reading; ${pinned} of them hold readings.`,
      `The surface was solved in ${iterations} steps to about ${left}.`,
    ],
  };
}

function short(value: number): string {
  return String(Number(value.toPrecision(3)));
}
