import { choleskyInverse, choleskySolve, tryCholesky } from './cholesky.js';

/** Residuals of a least-squares problem, already divided by their standard errors (or whitened) by the caller. */
export interface LeastSquaresProblem {
  /** Number of residuals. */
  readonly count: number;
  /**
   * Fills `r` (count) and, unless null, `jacobian` (count × parameters, row-major: ∂r_i/∂p_j at i · parameters + j).
   * Every entry has to be written. A residual that is not finite counts as a step too far.
   */
  residuals(p: Float64Array, r: Float64Array, jacobian: Float64Array | null): void;
}

export interface LevenbergMarquardtOptions {
  /** Lowest and highest value of each parameter; infinite where free. */
  readonly lower?: ArrayLike<number>;
  readonly upper?: ArrayLike<number>;
  /** Evaluations of the Jacobian at most. */
  readonly maxIterations?: number;
  /** Converged when a step changes no parameter by more than this share of its size, or by more than a millionth of its standard error. */
  readonly tolerance?: number;
}

export const LEVENBERG_MARQUARDT_DEFAULTS = Object.freeze({
  maxIterations: 100,
  /** Far below any parameter's standard error, far above rounding. */
  tolerance: 1e-9,
});

export interface LevenbergMarquardtResult {
  readonly parameters: Float64Array;
  /**
   * (JᵀJ)⁻¹ at the solution, parameters × parameters, for residuals of unit variance; the caller scales it if they are
   * not. Bounds are left out of it, so a parameter at its bound keeps the width that the data give. All NaN where the
   * data do not determine the parameters.
   */
  readonly covariance: Float64Array;
  /** Sum of squared residuals. */
  readonly chi2: number;
  readonly iterations: number;
  readonly converged: boolean;
  /** 1 where a parameter ended on its bound. */
  readonly atBound: Uint8Array;
}

/** A step of this share of the standard errors is of no account to anybody. */
const STEP_IN_SD = 1e-6;
/** First damping as a share of the (scaled) normal matrix's diagonal: small, since starts are good as a rule. */
const FIRST_DAMPING = 1e-3;
/** Below the rounding of the scaled diagonal, which is 1. */
const LEAST_DAMPING = 1e-18;
/** A damping beyond this moves nothing any more. */
const LAST_DAMPING = 1e16;

/**
 * Minimises Σ r_i(p)² from `start`. The damping follows the gain of each step; columns are scaled by the largest norm
 * seen, so the units of the parameters do not matter; a parameter held at its bound by the gradient is left out of the step.
 * Throws where the residuals at `start` are not finite.
 *
 * Source: Marquardt (1963), J. SIAM 11(2); Moré (1978), LNM 630 (scaling);
 * Nielsen (1999), IMM-REP-1999-05 (damping by gain ratio).
 */
export function levenbergMarquardt(
  problem: LeastSquaresProblem,
  start: ArrayLike<number>,
  options: LevenbergMarquardtOptions = {},
): LevenbergMarquardtResult {
  const { maxIterations, tolerance } = { ...LEVENBERG_MARQUARDT_DEFAULTS, ...options };
  const n = start.length;
  const m = problem.count;
  const lower = bounds(options.lower, n, -Infinity);
  const upper = bounds(options.upper, n, Infinity);
  let p: Float64Array = clamp(Float64Array.from(start), lower, upper);
  let trial: Float64Array = new Float64Array(n);
  let r: Float64Array = new Float64Array(m);
  let rTrial: Float64Array = new Float64Array(m);
  const jacobian = new Float64Array(m * n);
  const normal = new Float64Array(n * n);
  const gradient = new Float64Array(n);
  const scale = new Float64Array(n);

  problem.residuals(p, r, jacobian);
  let chi2 = sumOfSquares(r);
  if (!Number.isFinite(chi2)) throw new Error('levenbergMarquardt: residuals at the start are not finite');
  let damping = FIRST_DAMPING;
  let growth = 2;
  let iterations = 0;
  let converged = chi2 === 0;
  const degrees = Math.max(1, m - n);

  while (!converged && iterations < maxIterations) {
    iterations++;
    normalEquations({ jacobian, r, n }, normal, gradient);
    for (let j = 0; j < n; j++) scale[j] = Math.max(scale[j]!, Math.sqrt(normal[j * n + j]!));
    const free = freeParameters({ p, lower, upper, gradient, scale });
    if (free.length === 0) {
      converged = true;
      break;
    }
    let accepted = false;
    while (!accepted && !converged && damping < LAST_DAMPING) {
      const step = dampedStep({ normal, gradient, scale, n }, free, damping);
      if (step) {
        trial.set(p);
        for (let j = 0; j < n; j++) trial[j]! += step[j]!;
        clamp(trial, lower, upper);
        for (let j = 0; j < n; j++) step[j] = trial[j]! - p[j]!;
        problem.residuals(trial, rTrial, null);
        const next = sumOfSquares(rTrial);
        const predicted = predictedDecrease(normal, gradient, step);
        // A strongly damped step is short however far the minimum is, so it proves nothing by its length.
        const still = predicted <= (STEP_IN_SD * STEP_IN_SD * chi2) / degrees || (damping < 1 && isSmall(step, p, tolerance));
        converged = still;
        if (next <= chi2) {
          const gain = predicted > 0 ? (chi2 - next) / predicted : 1;
          damping = Math.max(damping * Math.max(1 / 3, 1 - (2 * gain - 1) ** 3), LEAST_DAMPING);
          growth = 2;
          [p, trial] = [trial, p];
          [r, rTrial] = [rTrial, r];
          chi2 = next;
          accepted = true;
          continue;
        }
        // Not accepted and yet converged: rounding alone keeps the sum from falling.
        if (still) continue;
      }
      damping *= growth;
      growth *= 2;
    }
    if (!accepted) break;
    problem.residuals(p, r, jacobian);
  }

  return {
    parameters: p, covariance: covarianceOf({ jacobian, r, n }), chi2, iterations, converged,
    atBound: Uint8Array.from(p, (value, j) => (value <= lower[j]! || value >= upper[j]! ? 1 : 0)),
  };
}

function bounds(given: ArrayLike<number> | undefined, n: number, fallback: number): Float64Array {
  if (!given) return new Float64Array(n).fill(fallback);
  if (given.length !== n) throw new Error(`levenbergMarquardt: ${given.length} bounds for ${n} parameters`);
  return Float64Array.from(given);
}

function clamp(p: Float64Array, lower: Float64Array, upper: Float64Array): Float64Array {
  for (let j = 0; j < p.length; j++) p[j] = Math.min(upper[j]!, Math.max(lower[j]!, p[j]!));
  return p;
}

function sumOfSquares(r: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < r.length; i++) sum += r[i]! * r[i]!;
  return sum;
}

interface Linearised {
  readonly jacobian: Float64Array;
  readonly r: Float64Array;
  readonly n: number;
}

/** JᵀJ and Jᵀr. */
function normalEquations({ jacobian, r, n }: Linearised, normal: Float64Array, gradient: Float64Array): void {
  normal.fill(0);
  gradient.fill(0);
  for (let i = 0, at = 0; i < r.length; i++, at += n) {
    for (let j = 0; j < n; j++) {
      const value = jacobian[at + j]!;
      if (value === 0) continue;
      gradient[j]! += value * r[i]!;
      for (let k = 0; k <= j; k++) normal[j * n + k]! += value * jacobian[at + k]!;
    }
  }
  for (let j = 0; j < n; j++) for (let k = 0; k < j; k++) normal[k * n + j] = normal[j * n + k]!;
}

/** Parameters that matter and are not pressed against a bound. */
function freeParameters({ p, lower, upper, gradient, scale }: Record<'p' | 'lower' | 'upper' | 'gradient' | 'scale', Float64Array>): number[] {
  const free: number[] = [];
  for (let j = 0; j < p.length; j++) {
    const pressed = (p[j]! <= lower[j]! && gradient[j]! > 0) || (p[j]! >= upper[j]! && gradient[j]! < 0);
    if (!pressed && scale[j]! > 0) free.push(j);
  }
  return free;
}

interface NormalSystem {
  readonly normal: Float64Array;
  readonly gradient: Float64Array;
  readonly scale: Float64Array;
  readonly n: number;
}

/** Step of all parameters, zero for those not free; null where the damped system cannot be solved. */
function dampedStep({ normal, gradient, scale, n }: NormalSystem, free: readonly number[], damping: number): Float64Array | null {
  const size = free.length;
  const a = new Float64Array(size * size);
  const b = new Float64Array(size);
  for (let s = 0; s < size; s++) {
    const j = free[s]!;
    b[s] = -gradient[j]! / scale[j]!;
    for (let t = 0; t <= s; t++) a[s * size + t] = normal[j * n + free[t]!]! / (scale[j]! * scale[free[t]!]!);
    a[s * size + s]! += damping;
  }
  if (!tryCholesky(a, size)) return null;
  const scaled = choleskySolve(a, size, b);
  const step = new Float64Array(n);
  for (let s = 0; s < size; s++) step[free[s]!] = scaled[s]! / scale[free[s]!]!;
  return step;
}

function isSmall(step: Float64Array, p: Float64Array, tolerance: number): boolean {
  for (let j = 0; j < p.length; j++) if (Math.abs(step[j]!) > tolerance * (Math.abs(p[j]!) + tolerance)) return false;
  return true;
}

/** By how much the sum should fall if the residuals were linear: −2 gᵀs − sᵀJᵀJ s. */
function predictedDecrease(normal: Float64Array, gradient: Float64Array, step: Float64Array): number {
  const n = step.length;
  let sum = 0;
  for (let j = 0; j < n; j++) {
    let row = 2 * gradient[j]!;
    for (let k = 0; k < n; k++) row += normal[j * n + k]! * step[k]!;
    sum -= row * step[j]!;
  }
  return sum;
}

function covarianceOf(linearised: Linearised): Float64Array {
  const { n } = linearised;
  const normal = new Float64Array(n * n);
  normalEquations(linearised, normal, new Float64Array(n));
  const scale = Float64Array.from({ length: n }, (_, j) => Math.sqrt(normal[j * n + j]!));
  for (let j = 0; j < n; j++) for (let k = 0; k < n; k++) normal[j * n + k]! /= scale[j]! * scale[k]!;
  if (!tryCholesky(normal, n)) return new Float64Array(n * n).fill(NaN);
  const inverse = choleskyInverse(normal, n);
  for (let j = 0; j < n; j++) for (let k = 0; k < n; k++) inverse[j * n + k]! /= scale[j]! * scale[k]!;
  return inverse;
}
