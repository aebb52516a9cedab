import { indexByCell } from './binSamples.js';
import { noneInside, type GridLayout } from './gridLayout.js';
import { cellWarnings, filledNote } from './gridRemarks.js';
import { reachMask } from './reachMask.js';
import type { GridResult, Samples } from './types.js';

/** Cells of a layout's frame, row-major. */
export interface ReachedCells {
  /** 1 where the centre lies within reach of a reading. */
  readonly reached: Uint8Array;
  /** 1 where the cell holds readings. */
  readonly occupied: Uint8Array;
}

/** The cells that a plate would fill and pin, without solving one. Throws UserError `no_data` where no reading is near the frame. */
export function reachedCells(samples: Samples, { frame, solved, cellM, reachM }: GridLayout): ReachedCells {
  const index = indexByCell(samples, solved);
  if (index.order.length === 0) throw noneInside();
  const mask = reachMask(index, solved, reachM);
  const left = Math.round((frame.west - solved.west) / cellM);
  const top = Math.round((solved.north - frame.north) / cellM);
  const reached = new Uint8Array(frame.width * frame.height);
  const occupied = new Uint8Array(reached.length);
  for (let j = 0; j < frame.height; j++) {
    const from = (top + j) * solved.width + left;
    reached.set(mask.subarray(from, from + frame.width), j * frame.width);
    markOccupied(occupied.subarray(j * frame.width, (j + 1) * frame.width), index.start, from);
  }
  return { reached, occupied };
}

function markOccupied(row: Uint8Array, start: Int32Array, from: number): void {
  for (let i = 0; i < row.length; i++) row[i] = start[from + i + 1]! > start[from + i]! ? 1 : 0;
}

/** A grid for which no plate was solved; `how` says what made it, and what is filled comes second, as in every grid's notes. */
export function unsolvedGrid(values: Float32Array, { layout: { frame, spacingM, reachM }, occupied, how }: { layout: GridLayout; occupied: Uint8Array; how: string }): GridResult {
  let filled = 0;
  let pinned = 0;
  for (let k = 0; k < values.length; k++) {
    if (Number.isNaN(values[k]!)) continue;
    filled++;
    pinned += occupied[k]!;
  }
  return {
    ...frame, values, spacingM, reachM, tension: NaN, filled, pinned, iterations: 0, remaining: 0, remainingShare: 0, converged: true,
    notes: [how, filledNote({ filled, pinned, reachM })], warnings: cellWarnings(frame.cellM, spacingM),
  };
}
