import type { Run } from './runs.js';

/** A course that turns by more than this from the line's own is a turn. */
const TURN_DEG = 50;
/** A line is at least this long; shorter stretches between turns belong to the turn. */
const LEAST_LINE_M = 5;

/**
 * Lines where no column names them: each run is cut where its course turns away from the line's own. Stretches too
 * short for a line (the turns themselves) stay with the line before them.
 *
 * @returns index of the line of each reading, and the names `1`, `2`, …
 */
export function findLines({ x, y, courseDeg }: { readonly x: Float64Array; readonly y: Float64Array; readonly courseDeg: Float64Array }, runs: readonly Run[]): { line: Int32Array; lineNames: string[] } {
  const line = new Int32Array(x.length).fill(-1);
  const starts: number[] = [];
  for (const run of runs) {
    const cuts = cutsOf(run, courseDeg);
    for (const [k, start] of cuts.entries()) {
      const end = cuts[k + 1] ?? run.end;
      const lengthM = Math.hypot(x[end - 1]! - x[start]!, y[end - 1]! - y[start]!);
      if (starts.length === 0 || k === 0 || lengthM >= LEAST_LINE_M) starts.push(start);
      line.fill(starts.length - 1, start, end);
    }
  }
  return { line, lineNames: starts.map((_, k) => String(k + 1)) };
}

function cutsOf(run: Run, courseDeg: Float64Array): number[] {
  const cuts = [run.start];
  let sin = 0;
  let cos = 0;
  for (let i = run.start; i < run.end; i++) {
    if (Number.isNaN(courseDeg[i]!)) continue;
    const angle = courseDeg[i]! * Math.PI / 180;
    const norm = Math.hypot(sin, cos);
    if (norm > 0 && (Math.sin(angle) * sin + Math.cos(angle) * cos) / norm < Math.cos(TURN_DEG * Math.PI / 180)) {
      cuts.push(i);
      sin = 0;
      cos = 0;
    }
    sin += Math.sin(angle);
    cos += Math.cos(angle);
  }
  return cuts;
}
