/**
 * Noise along a walk as a linear state: the error of the position on each axis, the sensor's height error and the geology
 * under the sensor each decay exponentially from one block to the next. So the covariance of the readings, white +
 * exponential + g·g′ σ_p² exp(−|Δt|/τ), is whitened by one pass of a Kalman filter instead of a dense factor: O(n) for
 * any window.
 *
 * Source: Kalman (1960); innovations as generalised least squares, Harvey (1989), Forecasting, Structural Time Series
 * Models and the Kalman Filter, section 3.4; smoother of de Jong (1989), JASA 84, as in Durbin & Koopman (2012), ch. 4.
 */
export interface Walk {
  readonly count: number;
  /** Correlation of each state with that of the block before (0 where it starts afresh), 4 values a block: east, north, height, geology. */
  readonly keep: Float64Array;
  /** White variance of each block, nT². */
  readonly whiteVar: Float64Array;
  /** Variance of each state: m², m², m², nT². */
  readonly stateVar: readonly [number, number, number, number];
}

/** What a metre of position error on each axis does to the readings, nT/m. */
export interface Slopes {
  readonly slopeX: Float64Array;
  readonly slopeY: Float64Array;
  readonly slopeZ: Float64Array;
}

export interface Whitened {
  /** Innovations of each column divided by their standard deviation, column by column. */
  readonly columns: Float64Array;
  /** Log of the determinant of the covariance. */
  readonly logDet: number;
  readonly gains: Float64Array;
  readonly predicted: Float64Array;
  readonly inverseSd: Float64Array;
}

/** States: east, north, height, geology. */
export const STATES = 4;

/** Whitens columns (n values each, one after another) by the covariance of the walk. The columns are overwritten. */
export function whiten(walk: Walk, { slopeX, slopeY, slopeZ }: Slopes, columns: Float64Array): Whitened {
  const n = walk.count;
  const count = n === 0 ? 0 : columns.length / n;
  const state = new Float64Array(count * STATES);
  const gains = new Float64Array(n * STATES);
  const predicted = new Float64Array(n * STATES * STATES);
  const inverseSd = new Float64Array(n);
  const p = new Float64Array(STATES * STATES);
  const ph = new Float64Array(STATES);
  let logDet = 0;
  for (let i = 0; i < n; i++) {
    const base = i * STATES;
    for (let r = 0; r < STATES; r++) {
      const kr = walk.keep[base + r]!;
      for (let c = 0; c < STATES; c++) p[r * STATES + c]! *= kr * walk.keep[base + c]!;
      p[r * STATES + r]! += walk.stateVar[r]! * (1 - kr * kr);
    }
    predicted.set(p, base * STATES);
    const gx = slopeX[i]!;
    const gy = slopeY[i]!;
    const gz = slopeZ[i]!;
    for (let r = 0; r < STATES; r++) ph[r] = p[r * STATES]! * gx + p[r * STATES + 1]! * gy + p[r * STATES + 2]! * gz + p[r * STATES + 3]!;
    const variance = gx * ph[0]! + gy * ph[1]! + gz * ph[2]! + ph[3]! + walk.whiteVar[i]!;
    const scale = 1 / Math.sqrt(variance);
    logDet += Math.log(variance);
    inverseSd[i] = scale;
    const g0 = ph[0]! / variance;
    const g1 = ph[1]! / variance;
    const g2 = ph[2]! / variance;
    const g3 = ph[3]! / variance;
    gains[base] = g0; gains[base + 1] = g1; gains[base + 2] = g2; gains[base + 3] = g3;
    const k0 = walk.keep[base]!;
    const k1 = walk.keep[base + 1]!;
    const k2 = walk.keep[base + 2]!;
    const k3 = walk.keep[base + 3]!;
    for (let c = 0; c < count; c++) {
      const s = c * STATES;
      const a0 = k0 * state[s]!;
      const a1 = k1 * state[s + 1]!;
      const a2 = k2 * state[s + 2]!;
      const a3 = k3 * state[s + 3]!;
      const innovation = columns[c * n + i]! - gx * a0 - gy * a1 - gz * a2 - a3;
      columns[c * n + i] = innovation * scale;
      state[s] = a0 + g0 * innovation;
      state[s + 1] = a1 + g1 * innovation;
      state[s + 2] = a2 + g2 * innovation;
      state[s + 3] = a3 + g3 * innovation;
    }
    for (let r = 0; r < STATES; r++) {
      const gain = gains[base + r]!;
      for (let c = 0; c < STATES; c++) p[r * STATES + c]! -= gain * ph[c]!;
    }
  }
  return { columns, logDet, gains, predicted, inverseSd };
}

/**
 * Most likely states given all blocks, 4 values a block, from the whitened residual `left` (n values) of the same pass:
 * true place less the stated one, metres, and geology, nT.
 */
export function smooth(walk: Walk, { slopeX, slopeY, slopeZ }: Slopes, whitened: Whitened, left: Float64Array): Float64Array {
  const n = walk.count;
  const out = new Float64Array(n * STATES);
  const { gains, predicted, inverseSd } = whitened;
  const a = new Float64Array(STATES);
  for (let i = 0; i < n; i++) {
    const innovation = left[i]! / inverseSd[i]!;
    for (let r = 0; r < STATES; r++) {
      const ahead = a[r]! * walk.keep[i * STATES + r]!;
      out[i * STATES + r] = ahead;
      a[r] = ahead + gains[i * STATES + r]! * innovation;
    }
  }
  // Backwards: r_{i−1} = h ν/S + (I − h kᵀ) Tᵀ r_i, then â = a + P r.
  const back = new Float64Array(STATES);
  for (let i = n - 1; i >= 0; i--) {
    const base = i * STATES;
    let pull = 0;
    for (let r = 0; r < STATES; r++) {
      back[r]! *= i < n - 1 ? walk.keep[base + STATES + r]! : 0;
      pull += gains[base + r]! * back[r]!;
    }
    const push = left[i]! * inverseSd[i]! - pull;
    back[0]! += slopeX[i]! * push;
    back[1]! += slopeY[i]! * push;
    back[2]! += slopeZ[i]! * push;
    back[3]! += push;
    for (let r = 0; r < STATES; r++) {
      const q = (base + r) * STATES;
      out[base + r]! += predicted[q]! * back[0]! + predicted[q + 1]! * back[1]! + predicted[q + 2]! * back[2]! + predicted[q + 3]! * back[3]!;
    }
  }
  return out;
}
