import { describe, expect, it } from 'vitest';
import { STATES, smooth, whiten, type Walk } from '../../src/anomalies/wander.js';
import { cholesky, choleskySolve, forwardSubstitute } from '../../src/numerics/cholesky.js';
import { Random } from '../../src/numerics/random.js';

/** The covariance written out in full: white + exponential geology + slope · slope′ σ² e^(−|Δt|/τ) on each axis. */
const TAU = [60, 60, 4];
const LENGTH = 20;
const VARIANCE = [0.09, 0.09, 0.01, 4] as const;

function made(n: number) {
  const random = new Random(5);
  const time = Array.from({ length: n }, (_, i) => i * 0.4 + (i > n / 2 ? 150 : 0));
  const pass = Array.from({ length: n }, (_, i) => (i > n / 2 ? 1 : 0));
  const slopes = [0, 1, 2].map(() => Float64Array.from({ length: n }, () => 40 * random.normal()));
  const keep = new Float64Array(n * STATES);
  for (let i = 1; i < n; i++) {
    for (let axis = 0; axis < 3; axis++) keep[i * STATES + axis] = Math.exp(-(time[i]! - time[i - 1]!) / TAU[axis]!);
    keep[i * STATES + 3] = pass[i] === pass[i - 1] ? Math.exp(-0.5 / LENGTH) : 0;
  }
  const walk: Walk = { count: n, keep, whiteVar: new Float64Array(n).fill(0.3), stateVar: VARIANCE };
  const part = (i: number, j: number, state: number) => {
    if (state === 3) return pass[i] === pass[j] ? VARIANCE[3] * Math.exp((-Math.abs(i - j) * 0.5) / LENGTH) : 0;
    return VARIANCE[state]! * Math.exp(-Math.abs(time[i]! - time[j]!) / TAU[state]!);
  };
  const slope = (i: number, state: number) => (state === 3 ? 1 : slopes[state]![i]!);
  const covariance = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let sum = i === j ? 0.3 : 0;
      for (let state = 0; state < STATES; state++) sum += slope(i, state) * slope(j, state) * part(i, j, state);
      covariance[i * n + j] = sum;
    }
  }
  const values = Float64Array.from({ length: n }, () => 10 * random.normal());
  return { walk, slopes: { slopeX: slopes[0]!, slopeY: slopes[1]!, slopeZ: slopes[2]! }, covariance, values, part, slope };
}

describe('whiten', () => {
  const n = 40;
  const { walk, slopes, covariance, values, part, slope } = made(n);
  const factor = covariance.slice();
  cholesky(factor, n);

  it('gives what a dense factor of the covariance gives', () => {
    const whitened = whiten(walk, slopes, values.slice());
    const dense = forwardSubstitute(factor, n, values);
    for (let i = 0; i < n; i++) expect(whitened.columns[i]!).toBeCloseTo(dense[i]!, 8);
    let logDet = 0;
    for (let i = 0; i < n; i++) logDet += 2 * Math.log(factor[i * n + i]!);
    expect(whitened.logDet).toBeCloseTo(logDet, 8);
  });

  it('smooths to the conditional mean of every state', () => {
    const whitened = whiten(walk, slopes, values.slice());
    const states = smooth(walk, slopes, whitened, whitened.columns.slice());
    const weights = choleskySolve(factor, n, values);
    for (let i = 0; i < n; i++) {
      for (let state = 0; state < STATES; state++) {
        let expected = 0;
        for (let j = 0; j < n; j++) expected += part(i, j, state) * slope(j, state) * weights[j]!;
        expect(states[i * STATES + state]!).toBeCloseTo(expected, 7);
      }
    }
  });
});
