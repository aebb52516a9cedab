import { fftPass, type FftPass } from './fftPass.js';
import type { FftPlan } from './fftPlan.js';

/**
 * `lanes`/2 complex transforms side by side: number k of all of them lies at `offset + k·unit` of `data`, as re, im, re,
 * im, … of one after the other. Distances are counted in numbers.
 */
export interface FftLanes {
  readonly data: Float64Array;
  readonly offset: number;
  readonly unit: number;
  readonly lanes: number;
}

/** Two work spaces of at least n·lanes numbers each. */
export type FftWork = readonly [Float64Array, Float64Array];

export function fftWork(plan: FftPlan, lanes: number): FftWork {
  return [new Float64Array(plan.n * lanes), new Float64Array(plan.n * lanes)];
}

/**
 * Forward transform, Z_k = Σ z_j e^(−2πi jk/n), unscaled, from `src` to `dst` (which may be the same place). The first
 * pass reads where the data lie and the last writes where they go, so that a block of columns costs no extra copy.
 */
export function fftLanes(plan: FftPlan, src: FftLanes, { dst, work }: { readonly dst: FftLanes; readonly work: FftWork }): void {
  const { stages } = plan;
  const { lanes } = src;
  if (stages.length === 0) {
    for (let lane = 0; lane < lanes; lane++) dst.data[dst.offset + lane] = src.data[src.offset + lane]!;
    return;
  }
  const pass: FftPass = { src: src.data, from: src.offset, step: 0, leg: 0, dst: work[0], to: 0, outStep: 0, outLeg: 0, count: 0, lanes };
  let sorted = 1;
  for (let s = 0; s < stages.length; s++) {
    const stage = stages[s]!;
    const { radix, rest } = stage;
    const last = s === stages.length - 1;
    const unitIn = s === 0 ? src.unit : lanes;
    const unitOut = last ? dst.unit : lanes;
    pass.leg = rest * sorted * unitIn;
    pass.dst = last ? dst.data : work[s % 2]!;
    pass.to = last ? dst.offset : 0;
    pass.outLeg = sorted * unitOut;
    if (unitIn === lanes && unitOut === lanes) {
      // All numbers that share a twiddle are neighbours: one long inner loop.
      pass.count = rest;
      pass.lanes = sorted * lanes;
      pass.step = sorted * lanes;
      pass.outStep = radix * sorted * lanes;
    } else {
      // The first pass has one number a twiddle (sorted = 1), the last one has no twiddles (rest = 1).
      pass.count = last ? sorted : rest;
      pass.lanes = lanes;
      pass.step = unitIn;
      pass.outStep = last ? unitOut : radix * unitOut;
    }
    fftPass(stage, pass, !last);
    pass.src = pass.dst;
    pass.from = 0;
    sorted *= radix;
  }
}
