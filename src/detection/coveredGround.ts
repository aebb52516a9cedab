import type { Lattice } from '../density/coverage.js';
import { isHeard, type Heard } from './heard.js';

/**
 * How far a reading reaches in sensor–source distances z: at √(10^(2/3) − 1) z the anomaly of a pole under a vertical
 * field has fallen to a tenth of what is heard right above it.
 */
export const REACH_DISTANCES = Math.sqrt(10 ** (2 / 3) - 1);

/** 1 for each cell whose middle lies within `reachM` of a good reading, else 0; row by row from the north-west. */
export function withinReach(heard: Heard, lattice: Lattice, reachM: number): Uint8Array {
  const { width, height, west, north, cellM } = lattice;
  const within = new Uint8Array(width * height);
  const cells = reachM / cellM;
  for (let i = 0; i < heard.x.length; i++) {
    if (!isHeard(heard, i)) continue;
    // In units of cells, middles at whole numbers.
    const column = (heard.x[i]! - west) / cellM - 0.5;
    const row = (north - heard.y[i]!) / cellM - 0.5;
    const rowLast = Math.min(height - 1, Math.floor(row + cells));
    for (let r = Math.max(0, Math.ceil(row - cells)); r <= rowLast; r++) {
      const half = Math.sqrt(Math.max(0, cells * cells - (r - row) ** 2));
      const columnLast = Math.min(width - 1, Math.floor(column + half));
      const first = Math.max(0, Math.ceil(column - half));
      if (columnLast >= first) within.fill(1, r * width + first, r * width + columnLast + 1);
    }
  }
  return within;
}
