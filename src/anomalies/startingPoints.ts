import { choleskySolve, tryCholesky } from '../numerics/cholesky.js';
import { addDipole } from '../field/dipole.js';
import { NT_PER_POLE } from '../field/pole.js';
import type { Window } from './fitSources.js';
import { dipole, line, pole, type Source, type Suspicion } from './sources.js';

export type Kind = 'pole' | 'dipole' | 'line';

/** Places that are tried lie this share of the reach, or of the line spacing, apart, out to so many spacings. */
const STEP_REACHES = 0.35;
const STEP_SPACINGS = 0.125;
const OUT_SPACINGS = 0.8;
/** Distances below the sensor that are tried, in reaches. */
const DISTANCES = [0.6, 0.85, 1.15, 1.6, 2.3] as const;
/** Strikes that are tried for a line. */
const STRIKES = 12;
/** Blocks that a trial looks at, at most. */
const TRIAL_BLOCKS = 90;
/** Two starts of one kind are taken: a source between two lines may look the same from either side of the nearer one. */
const STARTS = 2;
/** A strength beyond this many times what the peak would need at the reach is not believed. */
const STRENGTH_PRIOR = 30;

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
  const step = Math.max(STEP_REACHES * reachM, STEP_SPACINGS * spacingM);
  const out = Math.max(reachM, OUT_SPACINGS * spacingM);
  const half = Math.floor(out / step);
  const top = window.ceilingM;
  let mean = 0;
  for (const i of rows) mean += window.z[i]! / rows.length;
  const solve = leastSquares(window, rows);
  const trials: Trial[] = [];
  for (const distance of DISTANCES) {
    const z = Math.min(top, mean - distance * reachM);
    if (kind === 'line') {
      for (let s = 0; s < STRIKES; s++) {
        const azimuth = (s * Math.PI) / STRIKES;
        for (let k = -half; k <= half; k++) {
          const offset = k * step;
          const { misfit, strengths } = solve((columns, j, i) => lineColumns(columns, j, [window.x[i]! - peak.x, window.y[i]! - peak.y, window.z[i]! - z], { offset, azimuth, u: window.unit }), 2);
          trials.push({ misfit, x: offset * Math.cos(azimuth), y: -offset * Math.sin(azimuth), source: line([offset, azimuth, z], [strengths[0]!, strengths[1]!], suspicion) });
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
          const { misfit, strengths } = solve((columns, j, i) => poleColumn(columns, j, [window.x[i]! - x, window.y[i]! - y, window.z[i]! - z], window.unit), 1);
          trials.push({ misfit, x, y, source: pole(at, strengths[0]!, suspicion) });
        } else {
          const { misfit, strengths } = solve((columns, j, i) => dipoleColumns(columns, j, [window.x[i]! - x, window.y[i]! - y, window.z[i]! - z], window.unit), 3);
          trials.push({ misfit, x, y, source: dipole(at, [strengths[0]!, strengths[1]!, strengths[2]!], suspicion) });
        }
      }
    }
  }
  trials.sort((p, q) => p.misfit - q.misfit);
  const chosen = trials.slice(0, 1);
  for (const trial of trials) {
    if (chosen.length >= STARTS) break;
    if (chosen.every((other) => Math.hypot(other.x - trial.x, other.y - trial.y) > reachM || other.source.values[2] !== trial.source.values[2])) chosen.push(trial);
  }
  return chosen.map((trial) => trial.source);
}

type Unit = readonly [number, number, number];
const PLANE = 3;
const MOST = 6;

/** Solves the strengths of unit columns along with a plane; the misfit is the sum of squares that is left. */
function leastSquares(window: Window, rows: readonly number[]) {
  const m = rows.length;
  const columns = new Float64Array(MOST * m);
  const values = Float64Array.from(rows, (i) => window.value[i]!);
  // The plane is taken off everything first, so that a trial solves its strengths alone.
  const plane = new Float64Array(PLANE * m);
  rows.forEach((i, j) => {
    plane[j] = 1;
    plane[m + j] = (window.x[i]! - window.centreX) / window.radiusM;
    plane[2 * m + j] = (window.y[i]! - window.centreY) / window.radiusM;
  });
  orthonormal(plane, m);
  project(plane, values, 0, m);
  let total = 0;
  for (const value of values) total += value * value;
  return (fill: (columns: Float64Array, j: number, i: number) => void, count: number): { misfit: number; strengths: Float64Array } => {
    rows.forEach((i, j) => fill(columns.subarray(0, count * m), j, i));
    const normal = new Float64Array(count * count);
    const right = new Float64Array(count);
    for (let r = 0; r < count; r++) {
      project(plane, columns, r * m, m);
      for (let j = 0; j < m; j++) right[r]! += columns[r * m + j]! * values[j]!;
      for (let c = 0; c <= r; c++) {
        let dot = 0;
        for (let j = 0; j < m; j++) dot += columns[r * m + j]! * columns[c * m + j]!;
        normal[r * count + c] = dot;
        normal[c * count + r] = dot;
      }
    }
    let trace = 0;
    for (let r = 0; r < count; r++) trace += normal[r * count + r]!;
    for (let r = 0; r < count; r++) normal[r * count + r]! += 1e-6 * trace;
    const factor = normal;
    if (!tryCholesky(factor, count)) return { misfit: total, strengths: new Float64Array(count) };
    const strengths = choleskySolve(factor, count, right);
    let explained = 0;
    for (let r = 0; r < count; r++) explained += strengths[r]! * right[r]!;
    return { misfit: total - explained, strengths };
  };
}

function orthonormal(plane: Float64Array, m: number): void {
  for (let r = 0; r < PLANE; r++) {
    for (let c = 0; c < r; c++) subtract(plane, r * m, plane, c * m, m);
    let norm = 0;
    for (let j = 0; j < m; j++) norm += plane[r * m + j]! ** 2;
    // A column that the others hold already (all blocks on a line) counts for nothing.
    const scale = norm > 1e-12 * m ? 1 / Math.sqrt(norm) : 0;
    for (let j = 0; j < m; j++) plane[r * m + j]! *= scale;
  }
}
function project(plane: Float64Array, column: Float64Array, from: number, m: number): void {
  for (let c = 0; c < PLANE; c++) subtract(column, from, plane, c * m, m);
}
function subtract(target: Float64Array, from: number, unit: Float64Array, at: number, m: number): void {
  let dot = 0;
  for (let j = 0; j < m; j++) dot += target[from + j]! * unit[at + j]!;
  for (let j = 0; j < m; j++) target[from + j]! -= dot * unit[at + j]!;
}

function poleColumn(columns: Float64Array, j: number, r: Unit, u: Unit): void {
  const r2 = r[0] * r[0] + r[1] * r[1] + r[2] * r[2];
  columns[j] = (-NT_PER_POLE * (u[0] * r[0] + u[1] * r[1] + u[2] * r[2])) / (r2 * Math.sqrt(r2));
}
const B = new Float64Array(3);
function dipoleColumns(columns: Float64Array, j: number, r: Unit, u: Unit): void {
  const m = columns.length / 3;
  for (let k = 0; k < 3; k++) {
    B.fill(0);
    addDipole(B, k === 0 ? 1 : 0, k === 1 ? 1 : 0, k === 2 ? 1 : 0, r[0], r[1], r[2]);
    columns[k * m + j] = B[0]! * u[0] + B[1]! * u[1] + B[2]! * u[2];
  }
}
function lineColumns(columns: Float64Array, j: number, r: Unit, shape: { readonly offset: number; readonly azimuth: number; readonly u: Unit }): void {
  const m = columns.length / 2;
  const { offset, azimuth, u } = shape;
  const c = Math.cos(azimuth);
  const s = Math.sin(azimuth);
  const q = r[0] * c - r[1] * s - offset;
  const w = r[2];
  const p2 = q * q + w * w;
  const uq = u[0] * c - u[1] * s;
  const up = uq * q + u[2] * w;
  columns[j] = ((2 * NT_PER_POLE) / p2) * ((2 * q * up) / p2 - uq);
  columns[m + j] = ((2 * NT_PER_POLE) / p2) * ((2 * w * up) / p2 - u[2]);
}
