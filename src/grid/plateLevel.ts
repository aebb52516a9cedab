import { emptyHold, type Hold } from './hold.js';

/**
 * One level of the multigrid solver: an elastic plate under tension on a rectangle of nodes with free edges.
 *
 * The plate's energy, per cell of size h and times h⁴, is
 *   α (δxx² + 2 δxy² + δyy²) + τ (δx² + δy²)
 * with plain differences δ, summed only where all nodes of a difference exist. Its gradient is the 13-point operator in the
 * middle (20, −8, 2, 1 for α = 1, τ = 0) and the free edge of a plate at the rim, without any further condition.
 */
export interface PlateLevel {
  readonly width: number;
  readonly height: number;
  /** Weight of curvature. */
  readonly alpha: number;
  /** Weight of slope. */
  readonly tau: number;
  readonly xAxis: AxisTables;
  readonly yAxis: AxisTables;
  /** By what share of its residual a sweep moves a node: ω over the diagonal; 0 where a pin holds the node. Row-major like all that follows. */
  readonly relaxation: Float32Array;
  /** What the pins of a finer grid add to the operator when a correction is sought here. */
  readonly hold: Hold;
  /**
   * Correction that is sought and its right side (none on the finest grid), work space. 32 bits do for what is added to a
   * solution in 64.
   */
  readonly correction: Float64Array;
  readonly right: Float32Array;
  readonly scratch: Float32Array;
}

/** Rows of the one-dimensional matrices δᵀδ (first differences) and δ²ᵀδ² (second differences), five entries a node. */
export interface AxisTables {
  readonly first: Float64Array;
  readonly second: Float64Array;
}

/** Entries of a table row: offsets −2 … 2. */
const BAND = 5;

export function axisTables(count: number): AxisTables {
  return { first: gram(count, [-1, 1]), second: gram(count, [1, -2, 1]) };
}

/** Band of DᵀD, where D takes the difference `stencil` at every place where it fits. */
function gram(count: number, stencil: readonly number[]): Float64Array {
  const band = new Float64Array(count * BAND);
  for (let start = 0; start + stencil.length <= count; start++) {
    for (let a = 0; a < stencil.length; a++) {
      for (let b = 0; b < stencil.length; b++) band[(start + a) * BAND + (b - a) + 2]! += stencil[a]! * stencil[b]!;
    }
  }
  return band;
}

/** One entry of the operator's row of node (i, j): its weight on node (i + dx, j + dy). */
export function plateWeight({ alpha, tau, xAxis, yAxis }: PlateLevel, [i, j]: readonly [number, number], [dx, dy]: readonly [number, number]): number {
  const x = i * BAND + dx + 2;
  const y = j * BAND + dy + 2;
  let weight = 2 * alpha * xAxis.first[x]! * yAxis.first[y]!;
  if (dy === 0) weight += alpha * xAxis.second[x]! + tau * xAxis.first[x]!;
  if (dx === 0) weight += alpha * yAxis.second[y]! + tau * yAxis.first[y]!;
  return weight;
}

/** The operator at one node, by its tables: for the rim, where the 13 points are not all there. */
export function plateAtRim(level: PlateLevel, z: Float64Array, k: number): number {
  const { width, height, alpha, tau, xAxis, yAxis } = level;
  const j = (k / width) | 0;
  const i = k - j * width;
  let sum = 0;
  const top = Math.max(-2, -j);
  const bottom = Math.min(2, height - 1 - j);
  const left = Math.max(-2, -i);
  const right = Math.min(2, width - 1 - i);
  for (let d = left; d <= right; d++) {
    const x = i * BAND + d + 2;
    sum += (alpha * xAxis.second[x]! + tau * xAxis.first[x]!) * z[k + d]!;
  }
  for (let d = top; d <= bottom; d++) {
    const y = j * BAND + d + 2;
    sum += (alpha * yAxis.second[y]! + tau * yAxis.first[y]!) * z[k + d * width]!;
    const across = 2 * alpha * yAxis.first[y]!;
    if (across === 0) continue;
    for (let e = left; e <= right; e++) sum += across * xAxis.first[i * BAND + e + 2]! * z[k + d * width + e]!;
  }
  return sum;
}

/** `finest`: no finer grid's pins will ever be held here. */
export function plateLevel(size: { width: number; height: number; alpha: number; tau: number }, { finest = false } = {}): PlateLevel {
  const { width, height, alpha, tau } = size;
  const count = width * height;
  // Field by field, so that all levels have one shape: the sweeps are compiled once.
  return {
    width, height, alpha, tau,
    xAxis: axisTables(width),
    yAxis: axisTables(height),
    relaxation: new Float32Array(count),
    hold: emptyHold(finest ? 0 : count),
    correction: new Float64Array(finest ? 0 : count),
    right: new Float32Array(finest ? 0 : count),
    scratch: new Float32Array(count),
  };
}

/** Over-relaxation of the smoother: damps the short waves of the 13-point operator faster than 1 does (measured: 1.2 to 1.4 about alike, worse beyond). */
const OMEGA = 1.3;

/** Fills the relaxation: with the level's hold in it, or, for the surface itself, with 0 at the pinned nodes. */
export function fillRelaxation(level: PlateLevel, pinned: Int32Array | null): void {
  const { width, height, alpha, tau, relaxation, hold } = level;
  const inner = 20 * alpha + 4 * tau;
  if (pinned) relaxation.fill(OMEGA / inner);
  else fillHeld(relaxation, hold.self, inner);
  for (let j = 0; j < height; j++) {
    const rimRow = j < 2 || j >= height - 2 || width < 5;
    for (let i = 0; i < width; i++) {
      if (i === 2 && !rimRow) i = width - 2;
      const k = j * width + i;
      const diagonal = plateWeight(level, [i, j], [0, 0]) + (pinned ? 0 : hold.self[k]!);
      // A lone node has no energy at all; any number will do, since its right side is zero.
      relaxation[k] = diagonal > 0 ? OMEGA / diagonal : 1;
    }
  }
  if (pinned) zeroAt(relaxation, pinned);
}

function fillHeld(relaxation: Float32Array, held: Float32Array, inner: number): void {
  for (let k = 0; k < relaxation.length; k++) relaxation[k] = OMEGA / (inner + held[k]!);
}

function zeroAt(values: Float32Array, nodes: Int32Array): void {
  for (let n = 0; n < nodes.length; n++) values[nodes[n]!] = 0;
}
