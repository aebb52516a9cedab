import type { CellMeans } from './cellMeans.js';
import { distanceToOccupied } from './reachMask.js';
import { runningSum } from './runningSum.js';
import type { GridFrame } from './types.js';

/** Wide cells of the whole ground; 1 where no reading reaches. */
export interface Gaps {
  readonly frame: GridFrame;
  readonly gap: Uint8Array;
}

/** From the middle of a wide cell to a corner, and from a reading to the middle of its own, no further than this each. */
const DIAGONALS = Math.SQRT2;

/** Marks the wide cells that lie beyond the reach as a whole, and perhaps some less: cells without readings between lines are none. */
export function gapsOf(means: CellMeans, frame: GridFrame, reachM: number): Gaps {
  const start = new Int32Array(frame.width * frame.height + 1);
  for (const cell of means.cell) start[cell + 1] = 1;
  runningSum(start);
  const far = reachM / frame.cellM + DIAGONALS;
  return { frame, gap: Uint8Array.from(distanceToOccupied({ start }, frame), (squared) => (squared > far * far ? 1 : 0)) };
}

/** Whether any wide cell in a rectangle is a gap: left, top, right and bottom in cells of `cellM` from the same corner. */
export function anyGap({ frame, gap }: Gaps, [left, top, right, bottom]: readonly [number, number, number, number], cellM: number): boolean {
  const step = frame.cellM / cellM;
  for (let j = Math.max(0, Math.floor(top / step)); j < Math.min(frame.height, bottom / step); j++) {
    for (let i = Math.max(0, Math.floor(left / step)); i < Math.min(frame.width, right / step); i++) {
      if (gap[j * frame.width + i] === 1) return true;
    }
  }
  return false;
}
