import type { ShiftGrid } from './types.js';

/** A regular table of offsets in degrees, positive east and north. Row 0 lies in the south, column 0 in the west; NaN has no value. */
export interface OffsetTable {
  readonly west: number;
  readonly south: number;
  readonly stepLonDeg: number;
  readonly stepLatDeg: number;
  readonly width: number;
  readonly height: number;
  readonly dLonDeg: ArrayLike<number>;
  readonly dLatDeg: ArrayLike<number>;
}

export type GridIdentity = Omit<ShiftGrid, 'offsetAt'>;

/** A place this far outside its edge, in parts of a cell, still counts as on it: corners are stored in radians or rounded arc-seconds. */
const EDGE_CELLS = 1e-6;

/** One grid of one or more tables; where several hold a place the one with the smallest step counts. */
export function shiftGrid(identity: GridIdentity, tables: readonly OffsetTable[]): ShiftGrid {
  const finestFirst = tables.toSorted((a, b) => a.stepLonDeg * a.stepLatDeg - b.stepLonDeg * b.stepLatDeg);
  return {
    ...identity,
    offsetAt(lonDeg, latDeg) {
      for (const table of finestFirst) {
        const offset = interpolate(table, lonDeg, latDeg);
        if (offset !== null) return offset;
      }
      return null;
    },
  };
}

/** Bilinear; null outside the table and beside a node without a value. */
function interpolate(table: OffsetTable, lonDeg: number, latDeg: number): [number, number] | null {
  const { width, height, dLonDeg, dLatDeg } = table;
  // A table may be counted from -194° or in degrees east of Greenwich: bring the place into its turn.
  const turned = lonDeg - 360 * Math.floor((lonDeg - table.west) / 360 + EDGE_CELLS);
  const x = (turned - table.west) / table.stepLonDeg;
  const y = (latDeg - table.south) / table.stepLatDeg;
  if (!(x >= -EDGE_CELLS && x <= width - 1 + EDGE_CELLS && y >= -EDGE_CELLS && y <= height - 1 + EDGE_CELLS)) return null;
  const column = Math.min(Math.max(Math.floor(x), 0), width - 2);
  const row = Math.min(Math.max(Math.floor(y), 0), height - 2);
  const fx = x - column;
  const fy = y - row;
  const sw = row * width + column;
  const nw = sw + width;
  const at = (values: ArrayLike<number>): number =>
    (values[sw]! * (1 - fx) + values[sw + 1]! * fx) * (1 - fy) + (values[nw]! * (1 - fx) + values[nw + 1]! * fx) * fy;
  const dLon = at(dLonDeg);
  const dLat = at(dLatDeg);
  return Number.isFinite(dLon) && Number.isFinite(dLat) ? [dLon, dLat] : null;
}

/** 1e-12° is a tenth of a micrometre; offsets change by under 1e-4 of the way, so four rounds are usual. */
const REVERSE_TOLERANCE_DEG = 1e-12;
const REVERSE_ROUNDS = 20;

/** What to add at a place on the grid's `to` to come back to its `from`; null outside. Source: fixed-point iteration, EPSG Guidance Note 7-2, NTv2 (9615). */
export function reverseOffsetAt(grid: ShiftGrid, lonDeg: number, latDeg: number): readonly [number, number] | null {
  let offset = grid.offsetAt(lonDeg, latDeg);
  for (let round = 0; round < REVERSE_ROUNDS; round++) {
    if (offset === null) return null;
    const next = grid.offsetAt(lonDeg - offset[0], latDeg - offset[1]);
    if (next === null) return null;
    const step = Math.max(Math.abs(next[0] - offset[0]), Math.abs(next[1] - offset[1]));
    offset = next;
    if (step < REVERSE_TOLERANCE_DEG) return [-offset[0], -offset[1]];
  }
  return null;
}
