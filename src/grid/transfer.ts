/**
 * Cubic interpolation from a coarse grid of nodes to one of half the spacing, and its transpose. Coarse node I lies on
 * fine node 2 I; nodes between come from four neighbours (−1, 9, 9, −1)/16, three or two at the rim. The order has to
 * be this high: a correction with kinks costs a plate more energy than it saves (Trottenberg et al. 2001, section 2.7).
 */
export interface AxisTransfer {
  readonly fine: number;
  readonly coarse: number;
  /** For each fine node: first coarse node it reads, and four weights from there on. */
  readonly from: Int32Array;
  readonly weights: Float64Array;
}

/** Coarse nodes that cover `fine` nodes: the last may lie one fine step outside. */
export function coarseCount(fine: number): number {
  return Math.ceil((fine - 1) / 2) + 1;
}

export function axisTransfer(fine: number): AxisTransfer {
  const coarse = coarseCount(fine);
  const from = new Int32Array(fine);
  const weights = new Float64Array(fine * 4);
  for (let i = 0; i < fine; i++) {
    const below = i >> 1;
    const stencil = i % 2 === 0 ? ON_NODE : stencilBetween(below, coarse);
    const first = below + stencil.first;
    // Four weights from a start that keeps all four inside where the axis is long enough.
    from[i] = Math.max(0, Math.min(first, coarse - 4));
    weights.set(stencil.weights, i * 4 + first - from[i]!);
  }
  return { fine, coarse, from, weights };
}

/** Weights of neighbouring coarse nodes, the first of them so many from the node below or at the fine one. */
interface Stencil {
  readonly first: number;
  readonly weights: readonly number[];
}

const ON_NODE: Stencil = { first: 0, weights: [1] };
const BETWEEN: Stencil = { first: -1, weights: [-1 / 16, 9 / 16, 9 / 16, -1 / 16] };
const NEAR_START: Stencil = { first: 0, weights: [3 / 8, 6 / 8, -1 / 8] };
const NEAR_END: Stencil = { first: -1, weights: [-1 / 8, 6 / 8, 3 / 8] };
const BETWEEN_TWO: Stencil = { first: 0, weights: [1 / 2, 1 / 2] };

function stencilBetween(below: number, coarse: number): Stencil {
  if (below + 2 < coarse) return below >= 1 ? BETWEEN : NEAR_START;
  return below >= 1 ? NEAR_END : BETWEEN_TWO;
}

export interface Transfer {
  readonly x: AxisTransfer;
  readonly y: AxisTransfer;
  /** Coarse rows of fine columns, between the two directions. */
  readonly half: Float64Array;
}

export function transfer(width: number, height: number): Transfer {
  const x = axisTransfer(width);
  const y = axisTransfer(height);
  return { x, y, half: new Float64Array(width * y.coarse) };
}

/** fine += share × P coarse, or fine = P coarse where `share` is null. */
export function prolong({ x, y, half }: Transfer, [coarse, fine]: readonly [Float64Array, Float64Array], share: number | null): void {
  for (let row = 0; row < y.coarse; row++) prolongAcross(x, half, coarse, row);
  for (let row = 0; row < y.fine; row++) prolongDown([x.fine, y], half, fine, { row, add: share !== null, share: share ?? 1 });
}

function prolongAcross(x: AxisTransfer, half: Float64Array, coarse: Float64Array, row: number): void {
  const c = row * x.coarse;
  const h = row * x.fine;
  const reads = Math.min(4, x.coarse);
  for (let i = 0; i < x.fine; i++) {
    if (i % 2 === 0) {
      half[h + i] = coarse[c + (i >> 1)]!;
    } else if (i >= 3 && (i >> 1) + 2 < x.coarse) {
      const at = c + (i >> 1);
      half[h + i] = 0.5625 * (coarse[at]! + coarse[at + 1]!) - 0.0625 * (coarse[at - 1]! + coarse[at + 2]!);
    } else {
      let sum = 0;
      for (let n = 0; n < reads; n++) sum += x.weights[i * 4 + n]! * coarse[c + x.from[i]! + n]!;
      half[h + i] = sum;
    }
  }
}

function prolongDown([width, y]: readonly [number, AxisTransfer], half: Float64Array, fine: Float64Array, { row, add, share }: { row: number; add: boolean; share: number }): void {
  const f = row * width;
  const rows = Math.min(4, y.coarse - y.from[row]!);
  const w0 = y.weights[row * 4]!;
  const w1 = y.weights[row * 4 + 1]!;
  const w2 = y.weights[row * 4 + 2]!;
  const w3 = y.weights[row * 4 + 3]!;
  const h0 = y.from[row]! * width;
  // A weight of a row that does not exist is zero: read the first row in its place.
  const h1 = rows > 1 ? h0 + width : h0;
  const h2 = rows > 2 ? h0 + 2 * width : h0;
  const h3 = rows > 3 ? h0 + 3 * width : h0;
  for (let i = 0; i < width; i++) {
    const value = w0 * half[h0 + i]! + w1 * half[h1 + i]! + w2 * half[h2 + i]! + w3 * half[h3 + i]!;
    fine[f + i] = add ? fine[f + i]! + share * value : value;
  }
}

/** Fine rows on either side that read a coarse row, at most: one-sided weights at the rim reach the furthest. */
const RIM_SPAN = 5;

/** coarse = Pᵀ fine. */
export function restrict({ x, y, half }: Transfer, [fine, coarse]: readonly [Float32Array, Float32Array]): void {
  for (let row = 0; row < y.coarse; row++) restrictUp([x.fine, y], half, fine, row);
  coarse.fill(0);
  for (let row = 0; row < y.coarse; row++) restrictAcross(x, half, coarse, row);
}

/** A coarse row's own fine row, the two beside it and the two beyond, or what the rim makes of them. */
function restrictUp([width, y]: readonly [number, AxisTransfer], half: Float64Array, fine: Float32Array, row: number): void {
  const h = row * width;
  const f = 2 * row * width;
  if (row >= 3 && 2 * row + 7 < y.fine) {
    for (let i = 0; i < width; i++) {
      half[h + i] = fine[f + i]! + 0.5625 * (fine[f + i - width]! + fine[f + i + width]!)
        - 0.0625 * (fine[f + i - 3 * width]! + fine[f + i + 3 * width]!);
    }
    return;
  }
  half.fill(0, h, h + width);
  for (let from = Math.max(0, 2 * row - RIM_SPAN); from <= Math.min(y.fine - 1, 2 * row + RIM_SPAN); from++) {
    const n = row - y.from[from]!;
    const weight = n >= 0 && n < 4 ? y.weights[from * 4 + n]! : 0;
    if (weight === 0) continue;
    for (let i = 0; i < width; i++) half[h + i]! += weight * fine[from * width + i]!;
  }
}

function restrictAcross(x: AxisTransfer, half: Float64Array, coarse: Float32Array, row: number): void {
  const c = row * x.coarse;
  const h = row * x.fine;
  for (let i = 0; i < x.fine; i++) {
    const value = half[h + i]!;
    if (i % 2 === 0) {
      coarse[c + (i >> 1)]! += value;
    } else if (i >= 3 && (i >> 1) + 2 < x.coarse) {
      const at = c + (i >> 1);
      const near = 0.5625 * value;
      const far = -0.0625 * value;
      coarse[at - 1]! += far;
      coarse[at]! += near;
      coarse[at + 1]! += near;
      coarse[at + 2]! += far;
    } else {
      for (let n = 0; n < 4; n++) {
        const weight = x.weights[i * 4 + n]!;
        if (weight !== 0) coarse[c + x.from[i]! + n]! += weight * value;
      }
    }
  }
}
