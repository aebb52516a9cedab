import { CELLS_PER_SPACING } from './gridLayout.js';
import type { GridRemarks, GridResult } from './types.js';

/** Finer than this the cells between lines are invention, coarser than that the readings are wasted (common practice). */
const FINEST = 1 / 8;
const COARSEST = 1 / 2;

/** What there is to say of a grid in tension, in words; `tolerance` is the share of the range that the solver was to reach. */
export function gridRemarks(grid: Omit<GridResult, 'values' | keyof GridRemarks>, tolerance: number): GridRemarks {
  const { width, height, cellM, spacingM, tension, iterations, remainingShare, converged } = grid;
  const left = `${remainingShare.toExponential(1)} of the readings' range`;
  const warnings = cellWarnings(cellM, spacingM);
  if (!converged) warnings.push(`The grid's solver stopped after ${iterations} steps at about ${left}; ${tolerance.toExponential(1)} was wanted.`);
  return {
    warnings,
    notes: [
      `Grid of ${width} × ${height} cells of ${short(cellM)} m, by minimum curvature in tension ${short(tension)} (line spacing taken as ${short(spacingM)} m).`,
      filledNote(grid),
      `The surface was solved in ${iterations} steps to about ${left}.`,
    ],
  };
}

/** What the user has to know of the size of the cells. */
export function cellWarnings(cellM: number, spacingM: number): string[] {
  const advised = short(spacingM / CELLS_PER_SPACING);
  const share = cellM / spacingM;
  if (share < FINEST) return [`Cells of ${short(cellM)} m are finer than the readings bear: lines ${short(spacingM)} m apart support ${advised} m; what stands between lines is interpolation.`];
  if (share > COARSEST) return [`Cells of ${short(cellM)} m are coarse for lines ${short(spacingM)} m apart: ${advised} m would keep narrow anomalies.`];
  return [];
}

export function filledNote({ filled, reachM, pinned }: Pick<GridResult, 'filled' | 'reachM' | 'pinned'>): string {
  return `${filled} cells are filled, all within ${short(reachM)} m of a reading; ${pinned} of them hold readings.`;
}

/** Three digits are enough for a sentence. */
export function short(value: number): string {
  return String(Number(value.toPrecision(3)));
}

/** Lowest to highest, or the one number that both are. */
export function range([least, most]: readonly [number, number]): string {
  return short(least) === short(most) ? short(least) : `${short(least)} to ${short(most)}`;
}
