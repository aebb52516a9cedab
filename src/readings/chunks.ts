import { median } from '../numerics/robust.js';
import type { Run } from './runs.js';

/** Stretches of a few metres along the runs, each by its middle: what slow things are estimated from. */
export interface Chunks {
  readonly count: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly timeS: Float64Array;
  /** Median of the readings, nT. */
  readonly field: Float64Array;
  /** Middle course as a unit vector, east and north; NaN where none. */
  readonly courseX: Float64Array;
  readonly courseY: Float64Array;
  /** First reading of each, and the run that it belongs to. */
  readonly run: Int32Array;
}

interface Columns {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly timeS: Float64Array;
  readonly courseDeg: Float64Array;
  readonly flag: Uint8Array;
}

/** Cuts runs into stretches of about `lengthM`; flagged readings are left out. */
export function makeChunks(field: Float64Array, { x, y, timeS, courseDeg, flag }: Columns, { runs, lengthM }: { runs: readonly Run[]; lengthM: number }): Chunks {
  const rows: number[][] = [];
  let members: number[] = [];
  const close = (run: number): void => {
    if (members.length > 0) rows.push(middle(members, run));
    members = [];
  };
  const middle = (indices: number[], run: number): number[] => {
    const mean = (value: (i: number) => number): number => indices.reduce((sum, i) => sum + value(i), 0) / indices.length;
    const cx = mean((i) => Math.sin(courseDeg[i]! * Math.PI / 180));
    const cy = mean((i) => Math.cos(courseDeg[i]! * Math.PI / 180));
    const norm = Math.hypot(cx, cy);
    return [mean((i) => x[i]!), mean((i) => y[i]!), mean((i) => timeS[i]!), median(indices.map((i) => field[i]!)), cx / norm, cy / norm, run];
  };
  for (const [k, run] of runs.entries()) {
    let startX = NaN;
    let startY = NaN;
    for (let i = run.start; i < run.end; i++) {
      if (flag[i] !== 0 || Number.isNaN(field[i]!)) continue;
      if (members.length === 0 || Math.hypot(x[i]! - startX, y[i]! - startY) >= lengthM) {
        close(k);
        startX = x[i]!;
        startY = y[i]!;
      }
      members.push(i);
    }
    close(k);
  }
  const column = (c: number): Float64Array => Float64Array.from(rows, (row) => row[c]!);
  return {
    count: rows.length, x: column(0), y: column(1), timeS: column(2), field: column(3), courseX: column(4), courseY: column(5),
    run: Int32Array.from(rows, (row) => row[6]!),
  };
}
