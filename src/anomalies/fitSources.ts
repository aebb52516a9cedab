import { choleskyInverse, choleskySolve, tryCholesky } from '../numerics/cholesky.js';
import { fieldOfSources, type FieldOfSources } from './sourceField.js';
import { withValues, type Source } from './sources.js';
import { STATES, smooth, whiten, type Walk } from './wander.js';

/** Blocks around some sources, as the fit sees them. */
export interface Window {
  readonly count: number;
  /** Index of each block among all blocks. */
  readonly index: Int32Array;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
  /** Residual less what sources far outside make, nT. */
  readonly value: Float64Array;
  readonly walk: Walk;
  /** Variance of each place that is gone at the next one, m². */
  readonly jitterVar: Float64Array;
  /** Main field, nT, and its direction: east, north, up. */
  readonly field: readonly [number, number, number];
  readonly unit: readonly [number, number, number];
  /** Sources in the window that are taken as known: they make field and slope but are not moved. */
  readonly fixed: readonly Source[];
  readonly centreX: number;
  readonly centreY: number;
  readonly radiusM: number;
  /** Survey's own lengths: sensor to source, and line to line. */
  readonly reachM: number;
  readonly spacingM: number;
  /** Height that no source lies above, metres. */
  readonly ceilingM: number;
  /** Where the middle of a casing's possible tops lies, metres (below 0). */
  readonly expectedZM: number;
}

export interface Fit {
  readonly sources: readonly Source[];
  /** Constant, slope east, slope north (nT; slopes per window radius). */
  readonly plane: readonly [number, number, number];
  /** Covariance of plane and sources' parameters, in that order, before any scaling by the misfit. */
  readonly covariance: Float64Array;
  readonly parameters: number;
  /** Sum of squared whitened residuals, and the number of blocks it is over. */
  readonly chi2: number;
  readonly count: number;
  /** Bayesian information criterion (Schwarz 1978) with the spread of collars integrated out. */
  readonly bic: number;
  /** Most likely states of the walk, 4 a block. */
  readonly states: Float64Array;
  /** Column by column, derivative by each parameter, whitened. */
  readonly jacobian: Float64Array;
  readonly model: FieldOfSources;
  readonly iterations: number;
  readonly converged: boolean;
}

export interface FitOptions {
  readonly maxIterations: number;
}
export const FIT_DEFAULTS: FitOptions = Object.freeze({ maxIterations: 25 });

const PLANE = 3;
/** A step that lowers the cost by less than this is the last one: a tenth of what one standard error makes. */
const LITTLE = 0.01;
/** A collar's pole as a share of the top's: joints of one string differ by some tenths (from memory of published casing models). */
const COLLAR_SHARE = 0.3;
/** The loose prior on height: this many sensor–source distances about the expected top. */
const HEIGHT_PRIOR = 1;
/** Averaging over a block and simplifying a casing to poles leave this share of the model as error, independent from block to block. */
const MODEL_SHARE = 0.003;
/** A lone line may strike any way. */
const LINE_TURN = 100;
const MAX_LAMBDA = 1e8;

/** Standard deviation and mean of the prior on every parameter. */
function priors(window: Window, sources: readonly Source[], size: number): { mean: Float64Array; precision: Float64Array; random: Uint8Array } {
  const mean = new Float64Array(size);
  const precision = new Float64Array(size);
  const random = new Uint8Array(size);
  let at = PLANE;
  const set = (k: number, centre: number, sd: number) => {
    mean[at + k] = centre;
    precision[at + k] = 1 / (sd * sd);
  };
  for (const source of sources) {
    const { kind, values, strengthSd } = source;
    if (kind === 'pole' || kind === 'dipole') {
      set(0, source.anchorX, window.spacingM);
      set(1, source.anchorY, window.spacingM);
    } else {
      set(0, 0, window.spacingM);
      set(1, values[1]!, LINE_TURN);
    }
    set(2, window.expectedZM, HEIGHT_PRIOR * window.reachM);
    for (let k = 3; k < values.length; k++) set(k, 0, strengthSd);
    if (kind === 'pole') {
      const sd = COLLAR_SHARE * Math.abs(values[3]!) + 1e-3 * strengthSd;
      for (let k = 4; k < values.length; k++) {
        set(k, 0, sd);
        random[at + k] = 1;
      }
    }
    at += values.length;
  }
  return { mean, precision, random };
}

/**
 * Fits all sources and a plane to the window at once: Gauss–Newton with Levenberg–Marquardt damping on the sources, the
 * walk's states (position errors, geology) being re-estimated at every step, so the position error acts through the
 * model itself and not only through its slope at the stated place. The covariance is that of the sources with the states
 * integrated out.
 *
 * Source: errors in variables by Gauss–Newton, Britt & Luecke (1973), Technometrics 15; Marquardt (1963); whitening see
 * wander.ts.
 */
export function fitSources(window: Window, start: readonly Source[], options: FitOptions = FIT_DEFAULTS): Fit {
  const n = window.count;
  let sources = start;
  const size = PLANE + sources.reduce((sum, source) => sum + source.values.length, 0);
  let plane: Float64Array = Float64Array.of(0, 0, 0);
  let states: Float64Array = new Float64Array(n * STATES);
  let model = evaluate(window, sources, states);
  let lambda = 1e-3;
  let iterations = 0;
  let converged = false;
  for (;;) {
    const linear = linearise(window, { sources, plane, states, model }, size);
    const { walk, whitened, normal, right, prior } = linear;
    const theta = flatten(plane, sources);
    const before = cost(window, { sources, plane, states, model }, { walk, prior });
    let gained = 0;
    let accepted = false;
    while (iterations < options.maxIterations && !converged) {
      iterations++;
      const damped = normal.slice();
      for (let k = 0; k < size; k++) damped[k * size + k]! += k < PLANE ? 0 : lambda * normal[k * size + k]!;
      const step = solveScaled(damped, size, right);
      if (!step) {
        lambda *= 10;
        converged = lambda > MAX_LAMBDA;
        continue;
      }
      const left = whitened.columns.slice(0, n);
      for (let k = 0; k < size; k++) {
        const column = (k + 1) * n;
        for (let i = 0; i < n; i++) left[i]! -= step[k]! * whitened.columns[column + i]!;
      }
      const target = smooth(walk, model, whitened, left);
      const values = theta.map((value, k) => value + step[k]!);
      const trial = unflatten(window, sources, values);
      const trialModel = evaluate(window, trial.sources, target);
      const after = cost(window, { ...trial, states: target, model: trialModel }, { walk, prior });
      gained = before - after;
      if (gained > -LITTLE / 10 && Number.isFinite(after)) {
        ({ sources, plane } = trial);
        states = target;
        model = trialModel;
        accepted = true;
        converged = gained < LITTLE;
        lambda = Math.max(1e-9, lambda / 10);
        break;
      }
      lambda *= 10;
      if (lambda > MAX_LAMBDA) converged = true;
    }
    if (accepted && !converged && iterations < options.maxIterations) continue;
    return finish(window, { sources, plane, states, model, iterations, converged }, size);
  }
}

interface State {
  readonly sources: readonly Source[];
  readonly plane: Float64Array;
  readonly states: Float64Array;
  readonly model: FieldOfSources;
}

function evaluate(window: Window, sources: readonly Source[], states: Float64Array): FieldOfSources {
  const shifted = (values: Float64Array, k: number) => values.map((value, i) => value + states[i * STATES + k]!);
  return fieldOfSources(sources, window, { x: shifted(window.x, 0), y: shifted(window.y, 1), z: shifted(window.z, 2) });
}

function linearise(window: Window, { sources, plane, states, model }: State, size: number) {
  const n = window.count;
  const columns = new Float64Array((size + 1) * n);
  for (let i = 0; i < n; i++) {
    const px = (window.x[i]! - window.centreX) / window.radiusM;
    const py = (window.y[i]! - window.centreY) / window.radiusM;
    const s = i * STATES;
    columns[i] = window.value[i]! - model.value[i]! - plane[0]! - plane[1]! * px - plane[2]! * py
      + model.slopeX[i]! * states[s]! + model.slopeY[i]! * states[s + 1]! + model.slopeZ[i]! * states[s + 2]!;
    columns[n + i] = 1;
    columns[2 * n + i] = px;
    columns[3 * n + i] = py;
  }
  columns.set(model.columns, (1 + PLANE) * n);
  const { slopeX, slopeY } = model;
  const whiteVar = window.walk.whiteVar.map((variance, i) => variance + window.jitterVar[i]! * (slopeX[i]! ** 2 + slopeY[i]! ** 2) + (MODEL_SHARE * model.value[i]!) ** 2);
  const walk: Walk = { ...window.walk, whiteVar };
  const whitened = whiten(walk, model, columns);
  const prior = priors(window, sources, size);
  const theta = flatten(plane, sources);
  const normal = new Float64Array(size * size);
  const right = new Float64Array(size);
  const w = whitened.columns;
  for (let r = 0; r < size; r++) {
    const rowR = (r + 1) * n;
    let sum = 0;
    for (let i = 0; i < n; i++) sum += w[rowR + i]! * w[i]!;
    right[r] = sum + prior.precision[r]! * (prior.mean[r]! - theta[r]!);
    for (let c = 0; c <= r; c++) {
      const rowC = (c + 1) * n;
      let dot = 0;
      for (let i = 0; i < n; i++) dot += w[rowR + i]! * w[rowC + i]!;
      normal[r * size + c] = dot;
      normal[c * size + r] = dot;
    }
    normal[r * size + r]! += prior.precision[r]!;
  }
  // A plane that the window cannot see (all blocks on one straight line) must not stop the factor.
  for (let k = 0; k < PLANE; k++) normal[k * size + k]! += 1e-9 * (normal[0]! + normal[k * size + k]!);
  return { walk, whitened, normal, right, prior };
}

/** Minus twice the log of likelihood and priors, states and all, without constants. */
function cost(window: Window, { sources, plane, states, model }: State, { walk, prior }: { walk: Walk; prior: ReturnType<typeof priors> }): number {
  const { count } = window;
  let sum = 0;
  for (let i = 0; i < count; i++) {
    const s = i * STATES;
    const px = (window.x[i]! - window.centreX) / window.radiusM;
    const py = (window.y[i]! - window.centreY) / window.radiusM;
    const left = window.value[i]! - model.value[i]! - plane[0]! - plane[1]! * px - plane[2]! * py - states[s + 3]!;
    sum += (left * left) / walk.whiteVar[i]!;
    for (let k = 0; k < STATES; k++) {
      const variance = walk.stateVar[k]!;
      if (!(variance > 0)) continue;
      const keep = walk.keep[s + k]!;
      const fresh = states[s + k]! - (i > 0 ? keep * states[s - STATES + k]! : 0);
      sum += (fresh * fresh) / (variance * (i > 0 ? 1 - keep * keep : 1));
    }
  }
  const theta = flatten(plane, sources);
  for (let k = PLANE; k < theta.length; k++) sum += prior.precision[k]! * (theta[k]! - prior.mean[k]!) ** 2;
  return sum;
}

function finish(window: Window, state: State & { iterations: number; converged: boolean }, size: number): Fit {
  const n = window.count;
  const { whitened, normal, right, prior } = linearise(window, state, size);
  const step = solveScaled(normal, size, right) ?? new Float64Array(size);
  const covariance = inverseScaled(normal, size);
  let chi2 = 0;
  for (let i = 0; i < n; i++) {
    let left = whitened.columns[i]!;
    for (let k = 0; k < size; k++) left -= step[k]! * whitened.columns[(k + 1) * n + i]!;
    chi2 += left * left;
  }
  const theta = flatten(state.plane, state.sources);
  let penalty = 0;
  for (let k = PLANE; k < size; k++) penalty += prior.precision[k]! * (theta[k]! - prior.mean[k]!) ** 2;
  const random = [...prior.random.keys()].filter((k) => prior.random[k] === 1);
  const bic = chi2 + penalty + whitened.logDet + spread(normal, size, random, prior.precision) + (size - random.length) * Math.log(n);
  return {
    sources: state.sources, plane: [state.plane[0]!, state.plane[1]!, state.plane[2]!], covariance, parameters: size, chi2, count: n, bic,
    states: state.states, jacobian: whitened.columns.subarray(n), model: state.model, iterations: state.iterations, converged: state.converged,
  };
}

/** Log of (posterior precision ÷ prior precision) of the random strengths given the rest: what integrating them out costs. */
function spread(normal: Float64Array, size: number, random: readonly number[], precision: Float64Array): number {
  const m = random.length;
  if (m === 0) return 0;
  const part = new Float64Array(m * m);
  for (let r = 0; r < m; r++) for (let c = 0; c < m; c++) part[r * m + c] = normal[random[r]! * size + random[c]!]!;
  // The priors are part of it, so it is positive definite but for rounding; then the strengths tell nothing anyway.
  if (!tryCholesky(part, m)) return Infinity;
  let sum = 0;
  for (let r = 0; r < m; r++) sum += 2 * Math.log(part[r * m + r]!) - Math.log(precision[random[r]!]!);
  return sum;
}

/** Parameters differ by powers of ten (metres, A·m): each is scaled to a unit diagonal before the factor. */
function scaled(normal: Float64Array, size: number): { factor: Float64Array; scale: Float64Array } | null {
  const scale = new Float64Array(size);
  for (let k = 0; k < size; k++) scale[k] = 1 / Math.sqrt(normal[k * size + k]!);
  const factor = normal.slice();
  for (let r = 0; r < size; r++) for (let c = 0; c < size; c++) factor[r * size + c]! *= scale[r]! * scale[c]!;
  return tryCholesky(factor, size) ? { factor, scale } : null;
}

function solveScaled(normal: Float64Array, size: number, right: Float64Array): Float64Array | null {
  const done = scaled(normal, size);
  return done && choleskySolve(done.factor, size, right.map((value, k) => value * done.scale[k]!)).map((value, k) => value * done.scale[k]!);
}

/** NaN throughout where the parameters cannot be told apart at all. */
function inverseScaled(normal: Float64Array, size: number): Float64Array {
  const done = scaled(normal, size);
  if (!done) return new Float64Array(size * size).fill(NaN);
  return choleskyInverse(done.factor, size).map((value, k) => value * done.scale[Math.floor(k / size)]! * done.scale[k % size]!);
}

function flatten(plane: Float64Array, sources: readonly Source[]): Float64Array {
  const out = new Float64Array(PLANE + sources.reduce((sum, source) => sum + source.values.length, 0));
  out.set(plane);
  let at = PLANE;
  for (const source of sources) {
    out.set(source.values, at);
    at += source.values.length;
  }
  return out;
}

function unflatten(window: Window, sources: readonly Source[], values: Float64Array): { plane: Float64Array; sources: Source[] } {
  let at = PLANE;
  return {
    plane: values.slice(0, PLANE),
    sources: sources.map((source) => {
      const own = values.slice(at, at + source.values.length);
      at += source.values.length;
      own[2] = Math.min(own[2]!, window.ceilingM);
      return withValues(source, own);
    }),
  };
}

/** Rows of the fit's parameters that belong to source `which`: first and one past the last. */
export function parameterRange(sources: readonly Source[], which: number): [number, number] {
  let from = PLANE;
  for (let k = 0; k < which; k++) from += sources[k]!.values.length;
  return [from, from + sources[which]!.values.length];
}
