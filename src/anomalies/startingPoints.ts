import { choleskySolve, tryCholesky } from '../numerics/cholesky.js';
import { NT_PER_POLE } from '../field/pole.js';
import type { Window } from './fitSources.js';
import { dipole, line, pole, type Source, type Suspicion } from './sources.js';

export type Kind = 'pole' | 'dipole' | 'line';

/**
 * Places that are tried lie this share of the reach, or of the line spacing, apart, out to so many spacings; for dipoles
 * and lines, which have more strengths to adapt, farther apart by `COARSER`.
 */
const STEP_REACHES = 0.35;
const STEP_SPACINGS = 0.125;
const OUT_SPACINGS = 0.8;
const COARSER = 1.6;
/** Distances below the sensor that are tried, in reaches. */
const DISTANCES: Readonly<Record<Kind, readonly number[]>> = { pole: [0.6, 0.85, 1.2, 1.8], dipole: [0.6, 0.9, 1.4], line: [0.6, 0.9, 1.4] };
/** Strikes that are tried for a line. */
const STRIKES = 9;
/** Blocks that a trial looks at, at most. */
const TRIAL_BLOCKS = 80;
/** Two starts of one kind are taken: a source between two lines may look the same from either side of the nearer one. */
const STARTS = 2;
/** A strength beyond this many times what the peak would need at the reach is not believed. */
const STRENGTH_PRIOR = 10;

interface Trial {
  readonly misfit: number;
  readonly x: number;
  readonly y: number;
  readonly source: Source;
}

/**
 * Where a fit begins: on a net of places, depths (and strikes) around a suspected source the strengths and a plane are
 * solved by plain least squares on the total field's projection (good enough to start from); the best trial of each kind
 * is returned, with a second one from elsewhere.
 */
export function startingPoints(window: Window, kind: Kind, peak: { readonly x: number; readonly y: number; readonly heightNT: number }): Source[] {
  const { reachM, spacingM } = window;
  const power = kind === 'dipole' ? 3 : 2;
  const suspicion: Suspicion = {
    anchorX: peak.x, anchorY: peak.y, strengthSd: (STRENGTH_PRIOR * Math.abs(peak.heightNT) * reachM ** power) / NT_PER_POLE,
  };
  const stride = Math.max(1, Math.floor(window.count / TRIAL_BLOCKS));
  const rows: number[] = [];
  for (let i = 0; i < window.count; i += stride) rows.push(i);
  const step = Math.max(STEP_REACHES * reachM, STEP_SPACINGS * spacingM) * (kind === 'pole' ? 1 : COARSER);
  const out = Math.max(reachM, OUT_SPACINGS * spacingM);
  const half = Math.floor(out / step);
  const top = window.ceilingM;
  let mean = 0;
  for (const i of rows) mean += window.z[i]! / rows.length;
  const solve = leastSquares(window, rows);
  const unit = window.unit;
  const r = new Float64Array(3);
  const from = (i: number, x: number, y: number, z: number) => {
    r[0] = window.x[i]! - x;
    r[1] = window.y[i]! - y;
    r[2] = window.z[i]! - z;
    return r;
  };
  const trials: Trial[] = [];
  for (const distance of DISTANCES[kind]) {
    const z = Math.min(top, mean - distance * reachM);
    if (kind === 'line') {
      for (let strike = 0; strike < STRIKES; strike++) {
        const azimuth = (strike * Math.PI) / STRIKES;
        const c = Math.cos(azimuth);
        const s = Math.sin(azimuth);
        for (let k = -half; k <= half; k++) {
          const offset = k * step;
          const { misfit, strengths } = solve((row, i) => lineRow(row, from(i, peak.x + offset * c, peak.y - offset * s, z), { c, s, unit }), 2);
          trials.push({ misfit, x: offset * c, y: -offset * s, source: line([offset, azimuth, z], [strengths[0]!, strengths[1]!], suspicion) });
        }
      }
      continue;
    }
    for (let a = -half; a <= half; a++) {
      for (let b = -half; b <= half; b++) {
        if (Math.hypot(a, b) * step > out) continue;
        const x = peak.x + a * step;
        const y = peak.y + b * step;
        const at = [x, y, z] as const;
        if (kind === 'pole') {
          const { misfit, strengths } = solve((row, i) => poleRow(row, from(i, x, y, z), unit), 1);
          trials.push({ misfit, x, y, source: pole(at, strengths[0]!, suspicion) });
        } else {
          const { misfit, strengths } = solve((row, i) => dipoleRow(row, from(i, x, y, z), unit), 3);
          trials.push({ misfit, x, y, source: dipole(at, [strengths[0]!, strengths[1]!, strengths[2]!], suspicion) });
        }
      }
    }
  }
  const best = trials.toSorted((p, q) => p.misfit - q.misfit);
  const chosen = best.slice(0, 1);
  for (const trial of best) {
    if (chosen.length >= STARTS) break;
    if (chosen.every((other) => Math.hypot(other.x - trial.x, other.y - trial.y) > reachM || other.source.values[2] !== trial.source.values[2])) chosen.push(trial);
  }
  return chosen.map((trial) => trial.source);
}

type Unit = readonly [number, number, number];
type Fill = (row: Float64Array, i: number) => void;
const PLANE = 3;
const MOST = 3;
/** Keeps the strengths finite where the blocks cannot tell them apart. */
const RIDGE = 1e-6;

/** Solves the strengths of unit fields along with a plane; the misfit is the sum of squares that is left. */
function leastSquares(window: Window, rows: readonly number[]): (fill: Fill, count: number) => { misfit: number; strengths: Float64Array } {
  const m = rows.length;
  const plane = orthonormalPlane(window, rows);
  const values = Float64Array.from(rows, (i) => window.value[i]!);
  let total = 0;
  for (const value of values) total += value * value;
  const onPlane = new Float64Array(PLANE);
  for (let p = 0; p < PLANE; p++) {
    for (let j = 0; j < m; j++) onPlane[p]! += plane[PLANE * j + p]! * values[j]!;
    total -= onPlane[p]! ** 2;
  }
  const row = new Float64Array(MOST);
  const cross = new Float64Array(MOST * PLANE);
  return (fill, count) => {
    const normal = new Float64Array(count * count);
    const right = new Float64Array(count);
    cross.fill(0);
    for (let j = 0; j < m; j++) {
      fill(row, rows[j]!);
      for (let r = 0; r < count; r++) {
        const value = row[r]!;
        right[r]! += value * values[j]!;
        for (let p = 0; p < PLANE; p++) cross[r * PLANE + p]! += value * plane[PLANE * j + p]!;
        for (let c = 0; c <= r; c++) normal[r * count + c]! += value * row[c]!;
      }
    }
    // What the plane explains is taken out of the sums afterwards, instead of out of every column.
    let trace = 0;
    for (let r = 0; r < count; r++) {
      for (let p = 0; p < PLANE; p++) right[r]! -= cross[r * PLANE + p]! * onPlane[p]!;
      for (let c = 0; c <= r; c++) for (let p = 0; p < PLANE; p++) normal[r * count + c]! -= cross[r * PLANE + p]! * cross[c * PLANE + p]!;
      trace += normal[r * count + r]!;
    }
    for (let r = 0; r < count; r++) normal[r * count + r]! += RIDGE * trace;
    if (!tryCholesky(normal, count)) return { misfit: total, strengths: new Float64Array(count) };
    const strengths = choleskySolve(normal, count, right);
    let explained = 0;
    for (let r = 0; r < count; r++) explained += strengths[r]! * right[r]!;
    return { misfit: total - explained, strengths };
  };
}

/** Constant and slopes at the rows, made orthonormal; 3 values a row. One that the others hold already is zero. */
export function orthonormalPlane(window: Window, rows: readonly number[]): Float64Array {
  const m = rows.length;
  const plane = new Float64Array(PLANE * m);
  rows.forEach((i, j) => {
    plane[PLANE * j] = 1;
    plane[PLANE * j + 1] = (window.x[i]! - window.centreX) / window.radiusM;
    plane[PLANE * j + 2] = (window.y[i]! - window.centreY) / window.radiusM;
  });
  const dot = (p: number, q: number) => {
    let sum = 0;
    for (let j = 0; j < m; j++) sum += plane[PLANE * j + p]! * plane[PLANE * j + q]!;
    return sum;
  };
  for (let p = 0; p < PLANE; p++) {
    for (let q = 0; q < p; q++) {
      const share = dot(p, q);
      for (let j = 0; j < m; j++) plane[PLANE * j + p]! -= share * plane[PLANE * j + q]!;
    }
    const norm = dot(p, p);
    const scale = norm > 1e-12 * m ? 1 / Math.sqrt(norm) : 0;
    for (let j = 0; j < m; j++) plane[PLANE * j + p]! *= scale;
  }
  return plane;
}

/** Total field of a unit pole (attracting) by its projection; `r` from the source to the sensor, metres. */
export function poleRow(row: Float64Array, r: Float64Array, u: Unit): void {
  const r2 = r[0]! * r[0]! + r[1]! * r[1]! + r[2]! * r[2]!;
  row[0] = (-NT_PER_POLE * (u[0] * r[0]! + u[1] * r[1]! + u[2] * r[2]!)) / (r2 * Math.sqrt(r2));
}

/** The same of unit moments east, north and up. */
export function dipoleRow(row: Float64Array, r: Float64Array, u: Unit): void {
  const r2 = r[0]! * r[0]! + r[1]! * r[1]! + r[2]! * r[2]!;
  const k = NT_PER_POLE / (r2 * Math.sqrt(r2));
  const along = (3 * (u[0] * r[0]! + u[1] * r[1]! + u[2] * r[2]!)) / r2;
  for (let axis = 0; axis < 3; axis++) row[axis] = k * (along * r[axis]! - u[axis]!);
}

/** Unit moments per metre across and up, of a line through the point that `r` counts from; (c, −s) points across it. */
function lineRow(row: Float64Array, r: Float64Array, { c, s, unit: u }: { readonly c: number; readonly s: number; readonly unit: Unit }): void {
  const q = r[0]! * c - r[1]! * s;
  const w = r[2]!;
  const p2 = q * q + w * w;
  const uq = u[0] * c - u[1] * s;
  const k = (2 * NT_PER_POLE) / p2;
  const along = (2 * (uq * q + u[2] * w)) / p2;
  row[0] = k * (along * q - uq);
  row[1] = k * (along * w - u[2]);
}
