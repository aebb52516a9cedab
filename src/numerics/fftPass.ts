import type { FftStage } from './fftPlan.js';

/**
 * Where a pass reads and writes: complex numbers as neighbours (re, im), all distances counted in numbers of the array.
 * Butterfly p starts at `from + p·step`, its legs lie `leg` apart; it runs over `lanes` numbers side by side, which share
 * their twiddles. The results go to `to + p·outStep`, `outLeg` apart.
 */
export interface FftPass {
  src: Float64Array;
  from: number;
  step: number;
  leg: number;
  dst: Float64Array;
  to: number;
  outStep: number;
  outLeg: number;
  count: number;
  lanes: number;
}

/**
 * One pass, forward sign. With `turned` false all twiddles are 1 (the last pass). The plain loops over typed arrays are
 * written out by radix: that is where the time goes.
 *
 * Source: Stockham's self-sorting form in Van Loan (1992), Computational Frameworks for the Fast Fourier Transform, 1.7.
 */
export function fftPass(stage: FftStage, pass: FftPass, turned: boolean): void {
  switch (stage.radix) {
    case 4: return radix4(stage.twiddles, pass, turned);
    case 2: return radix2(stage.twiddles, pass, turned);
    case 3: return radix3(stage.twiddles, pass, turned);
    case 5: return radix5(stage.twiddles, pass, turned);
    default: return anyRadix(stage, pass, turned);
  }
}

function radix4(t: Float64Array, pass: FftPass, turned: boolean): void {
  const { src, from, step, leg, dst, to, outStep, outLeg, count, lanes } = pass;
  for (let p = 0; p < count; p++) {
    let a = from + p * step;
    let y = to + p * outStep;
    const end = a + lanes;
    // Butterfly 0 has no turn either; a loop of its own saves the multiplications.
    if (!turned || p === 0) {
      for (; a < end; a += 2, y += 2) {
        const b = a + leg, c = b + leg, d = c + leg;
        const ar = src[a]!, ai = src[a + 1]!, br = src[b]!, bi = src[b + 1]!, cr = src[c]!, ci = src[c + 1]!, dr = src[d]!, di = src[d + 1]!;
        const s0r = ar + cr, s0i = ai + ci, d0r = ar - cr, d0i = ai - ci, s1r = br + dr, s1i = bi + di, d1r = br - dr, d1i = bi - di;
        const y1 = y + outLeg, y2 = y1 + outLeg, y3 = y2 + outLeg;
        dst[y] = s0r + s1r;
        dst[y + 1] = s0i + s1i;
        dst[y1] = d0r + d1i;
        dst[y1 + 1] = d0i - d1r;
        dst[y2] = s0r - s1r;
        dst[y2 + 1] = s0i - s1i;
        dst[y3] = d0r - d1i;
        dst[y3 + 1] = d0i + d1r;
      }
      continue;
    }
    const at = 6 * p;
    const w1r = t[at]!, w1i = t[at + 1]!, w2r = t[at + 2]!, w2i = t[at + 3]!, w3r = t[at + 4]!, w3i = t[at + 5]!;
    for (; a < end; a += 2, y += 2) {
      const b = a + leg, c = b + leg, d = c + leg;
      const ar = src[a]!, ai = src[a + 1]!, br = src[b]!, bi = src[b + 1]!, cr = src[c]!, ci = src[c + 1]!, dr = src[d]!, di = src[d + 1]!;
      const s0r = ar + cr, s0i = ai + ci, d0r = ar - cr, d0i = ai - ci, s1r = br + dr, s1i = bi + di, d1r = br - dr, d1i = bi - di;
      const e1r = d0r + d1i, e1i = d0i - d1r, e2r = s0r - s1r, e2i = s0i - s1i, e3r = d0r - d1i, e3i = d0i + d1r;
      const y1 = y + outLeg, y2 = y1 + outLeg, y3 = y2 + outLeg;
      dst[y] = s0r + s1r;
      dst[y + 1] = s0i + s1i;
      dst[y1] = e1r * w1r - e1i * w1i;
      dst[y1 + 1] = e1r * w1i + e1i * w1r;
      dst[y2] = e2r * w2r - e2i * w2i;
      dst[y2 + 1] = e2r * w2i + e2i * w2r;
      dst[y3] = e3r * w3r - e3i * w3i;
      dst[y3 + 1] = e3r * w3i + e3i * w3r;
    }
  }
}

function radix2(t: Float64Array, pass: FftPass, turned: boolean): void {
  const { src, from, step, leg, dst, to, outStep, outLeg, count, lanes } = pass;
  for (let p = 0; p < count; p++) {
    let a = from + p * step;
    let y = to + p * outStep;
    const end = a + lanes;
    const wr = turned ? t[2 * p]! : 1, wi = turned ? t[2 * p + 1]! : 0;
    for (; a < end; a += 2, y += 2) {
      const b = a + leg, y1 = y + outLeg;
      const ar = src[a]!, ai = src[a + 1]!, br = src[b]!, bi = src[b + 1]!;
      const er = ar - br, ei = ai - bi;
      dst[y] = ar + br;
      dst[y + 1] = ai + bi;
      dst[y1] = er * wr - ei * wi;
      dst[y1 + 1] = er * wi + ei * wr;
    }
  }
}

const SIN_60 = Math.sqrt(3) / 2;

function radix3(t: Float64Array, pass: FftPass, turned: boolean): void {
  const { src, from, step, leg, dst, to, outStep, outLeg, count, lanes } = pass;
  for (let p = 0; p < count; p++) {
    let a = from + p * step;
    let y = to + p * outStep;
    const end = a + lanes;
    const at = 4 * p;
    const w1r = turned ? t[at]! : 1, w1i = turned ? t[at + 1]! : 0, w2r = turned ? t[at + 2]! : 1, w2i = turned ? t[at + 3]! : 0;
    for (; a < end; a += 2, y += 2) {
      const b = a + leg, c = b + leg, y1 = y + outLeg, y2 = y1 + outLeg;
      const ar = src[a]!, ai = src[a + 1]!, br = src[b]!, bi = src[b + 1]!, cr = src[c]!, ci = src[c + 1]!;
      const sr = br + cr, si = bi + ci, dr = SIN_60 * (br - cr), di = SIN_60 * (bi - ci);
      const mr = ar - 0.5 * sr, mi = ai - 0.5 * si;
      const e1r = mr + di, e1i = mi - dr, e2r = mr - di, e2i = mi + dr;
      dst[y] = ar + sr;
      dst[y + 1] = ai + si;
      dst[y1] = e1r * w1r - e1i * w1i;
      dst[y1 + 1] = e1r * w1i + e1i * w1r;
      dst[y2] = e2r * w2r - e2i * w2i;
      dst[y2 + 1] = e2r * w2i + e2i * w2r;
    }
  }
}

const COS_72 = (Math.sqrt(5) - 1) / 4;
const COS_144 = -(Math.sqrt(5) + 1) / 4;
const SIN_72 = Math.sqrt(10 + 2 * Math.sqrt(5)) / 4;
const SIN_144 = Math.sqrt(10 - 2 * Math.sqrt(5)) / 4;

function radix5(t: Float64Array, pass: FftPass, turned: boolean): void {
  const { src, from, step, leg, dst, to, outStep, outLeg, count, lanes } = pass;
  for (let p = 0; p < count; p++) {
    let a = from + p * step;
    let y = to + p * outStep;
    const end = a + lanes;
    const at = 8 * p;
    const plain = !turned;
    const w1r = plain ? 1 : t[at]!, w1i = plain ? 0 : t[at + 1]!, w2r = plain ? 1 : t[at + 2]!, w2i = plain ? 0 : t[at + 3]!;
    const w3r = plain ? 1 : t[at + 4]!, w3i = plain ? 0 : t[at + 5]!, w4r = plain ? 1 : t[at + 6]!, w4i = plain ? 0 : t[at + 7]!;
    for (; a < end; a += 2, y += 2) {
      const b = a + leg, c = b + leg, d = c + leg, e = d + leg;
      const ar = src[a]!, ai = src[a + 1]!;
      const s1r = src[b]! + src[e]!, s1i = src[b + 1]! + src[e + 1]!, d1r = src[b]! - src[e]!, d1i = src[b + 1]! - src[e + 1]!;
      const s2r = src[c]! + src[d]!, s2i = src[c + 1]! + src[d + 1]!, d2r = src[c]! - src[d]!, d2i = src[c + 1]! - src[d + 1]!;
      const m1r = ar + COS_72 * s1r + COS_144 * s2r, m1i = ai + COS_72 * s1i + COS_144 * s2i;
      const m2r = ar + COS_144 * s1r + COS_72 * s2r, m2i = ai + COS_144 * s1i + COS_72 * s2i;
      const n1r = SIN_72 * d1r + SIN_144 * d2r, n1i = SIN_72 * d1i + SIN_144 * d2i;
      const n2r = SIN_144 * d1r - SIN_72 * d2r, n2i = SIN_144 * d1i - SIN_72 * d2i;
      const e1r = m1r + n1i, e1i = m1i - n1r, e4r = m1r - n1i, e4i = m1i + n1r;
      const e2r = m2r + n2i, e2i = m2i - n2r, e3r = m2r - n2i, e3i = m2i + n2r;
      const y1 = y + outLeg, y2 = y1 + outLeg, y3 = y2 + outLeg, y4 = y3 + outLeg;
      dst[y] = ar + s1r + s2r;
      dst[y + 1] = ai + s1i + s2i;
      dst[y1] = e1r * w1r - e1i * w1i;
      dst[y1 + 1] = e1r * w1i + e1i * w1r;
      dst[y2] = e2r * w2r - e2i * w2i;
      dst[y2 + 1] = e2r * w2i + e2i * w2r;
      dst[y3] = e3r * w3r - e3i * w3i;
      dst[y3 + 1] = e3r * w3i + e3i * w3r;
      dst[y4] = e4r * w4r - e4i * w4i;
      dst[y4 + 1] = e4r * w4i + e4i * w4r;
    }
  }
}

/** A prime above 5, straight from the sum: n·radix operations. */
function anyRadix({ radix, twiddles, roots }: FftStage, pass: FftPass, turned: boolean): void {
  const { src, from, step, leg, dst, to, outStep, outLeg, count, lanes } = pass;
  // A copy of the legs, since a pass may write where it reads.
  const legs = new Float64Array(2 * radix);
  for (let p = 0; p < count; p++) {
    for (let lane = 0; lane < lanes; lane += 2) {
      const a = from + p * step + lane;
      const y = to + p * outStep + lane;
      for (let r = 0; r < radix; r++) {
        legs[2 * r] = src[a + r * leg]!;
        legs[2 * r + 1] = src[a + r * leg + 1]!;
      }
      for (let k = 0; k < radix; k++) {
        let er = 0, ei = 0;
        for (let r = 0, turn = 0; r < radix; r++, turn = (turn + k) % radix) {
          const cr = roots[2 * turn]!, ci = roots[2 * turn + 1]!;
          er += legs[2 * r]! * cr - legs[2 * r + 1]! * ci;
          ei += legs[2 * r]! * ci + legs[2 * r + 1]! * cr;
        }
        const at = 2 * ((radix - 1) * p + k - 1);
        const wr = turned && k > 0 ? twiddles[at]! : 1, wi = turned && k > 0 ? twiddles[at + 1]! : 0;
        dst[y + k * outLeg] = er * wr - ei * wi;
        dst[y + k * outLeg + 1] = er * wi + ei * wr;
      }
    }
  }
}
