import { median } from '../numerics/robust.js';

/** What a line spacing is estimated from: columns of `Readings`. */
export interface LineSamples {
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  /** Line of each reading. */
  readonly line: ArrayLike<number>;
  /** Readings with a flag other than 0 are left out. */
  readonly flag?: ArrayLike<number>;
}

/** Readings that are kept to stand for the lines, and those of them at which the spacing is measured: enough for a median. */
const KEPT = 20_000;
const MEASURED = 600;
/** Lines within this of each other's direction are neighbours; others (ties) cross. */
const PARALLEL_COS = Math.cos((25 * Math.PI) / 180);
/** A line on the other side that is this much further lies beyond a gap, so it is no neighbour. */
const GAP_RATIO = 2;

/**
 * Distance between neighbouring lines, metres: the median, over places along the lines, of the distance across to the
 * next line of about the same direction on either side. Tie lines do not disturb it. NaN where no line has a neighbour
 * (a single line, or readings without lines).
 */
export function estimateLineSpacing(samples: LineSamples): number {
  const kept = keep(samples);
  const { x, y, line, ux, uy } = kept;
  const count = x.length;
  if (count < 4) return NaN;
  const window = alongWindow(kept);
  const distances: number[] = [];
  const stride = Math.max(1, Math.floor(count / MEASURED));
  for (let p = 0; p < count; p += stride) {
    if (ux[p] === 0 && uy[p] === 0) continue;
    let left = Infinity;
    let right = Infinity;
    for (let q = 0; q < count; q++) {
      if (line[q] === line[p]) continue;
      const dx = x[q]! - x[p]!;
      const dy = y[q]! - y[p]!;
      const along = dx * ux[p]! + dy * uy[p]!;
      if (along > window || along < -window) continue;
      const across = dx * uy[p]! - dy * ux[p]!;
      if (across >= right || across <= -left) continue;
      if (Math.abs(ux[p]! * ux[q]! + uy[p]! * uy[q]!) < PARALLEL_COS) continue;
      if (across >= 0) right = across;
      else left = -across;
    }
    const near = Math.min(left, right);
    if (left <= GAP_RATIO * near) distances.push(left);
    if (right <= GAP_RATIO * near) distances.push(right);
  }
  return median(distances.filter(Number.isFinite));
}

interface Kept {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly line: Int32Array;
  /** Direction of the line, 0 where it stands still or ends. */
  readonly ux: Float64Array;
  readonly uy: Float64Array;
}

function keep({ x, y, line, flag }: LineSamples): Kept {
  const good: number[] = [];
  for (let n = 0; n < x.length; n++) if (!flag?.[n] && Number.isFinite(x[n]! + y[n]!) && line[n]! >= 0) good.push(n);
  const stride = Math.max(1, Math.floor(good.length / KEPT));
  const chosen = good.filter((_, n) => n % stride === 0);
  const kept = {
    x: Float64Array.from(chosen, (n) => x[n]!), y: Float64Array.from(chosen, (n) => y[n]!), line: Int32Array.from(chosen, (n) => line[n]!),
    ux: new Float64Array(chosen.length), uy: new Float64Array(chosen.length),
  };
  for (let n = 0; n < chosen.length; n++) {
    const before = n > 0 && kept.line[n - 1] === kept.line[n] ? n - 1 : n;
    const after = n + 1 < chosen.length && kept.line[n + 1] === kept.line[n] ? n + 1 : n;
    const dx = kept.x[after]! - kept.x[before]!;
    const dy = kept.y[after]! - kept.y[before]!;
    const length = Math.hypot(dx, dy);
    if (length > 0) {
      kept.ux[n] = dx / length;
      kept.uy[n] = dy / length;
    }
  }
  return kept;
}

/** How far along its line a kept reading stands for: one and a half steps. */
function alongWindow({ x, y, line }: Kept): number {
  const steps: number[] = [];
  for (let n = 1; n < x.length; n++) if (line[n] === line[n - 1]) steps.push(Math.hypot(x[n]! - x[n - 1]!, y[n]! - y[n - 1]!));
  return 1.5 * median(steps);
}
