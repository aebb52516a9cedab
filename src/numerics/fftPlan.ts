/** One pass of a transform: butterflies of `radix` legs, `legs` apart, each leg then turned by its twiddle. */
export interface FftStage {
  readonly radix: number;
  /** Length that is left after this pass. */
  readonly rest: number;
  /** Cosine and sine of −2π p r/length for p = 0 … rest − 1 and, within each p, r = 1 … radix − 1. */
  readonly twiddles: Float64Array;
  /** Cosine and sine of −2π r/radix for r = 0 … radix − 1. */
  readonly roots: Float64Array;
}

/** The passes of a transform of length `n`; made once, used for any number of rows. */
export interface FftPlan {
  readonly n: number;
  readonly stages: readonly FftStage[];
}

/** Fours first, since they do the most with each load, then what is left. A prime above 5 costs its own size in every pass. */
const RADICES = [4, 2, 3, 5];

/** The plan for complex transforms of length `n` ≥ 1. Source: Cooley & Tukey (1965), Mathematics of Computation 19, 297-301. */
export function fftPlan(n: number): FftPlan {
  if (!Number.isInteger(n) || n < 1) throw new Error(`an FFT of length ${n}`);
  const stages: FftStage[] = [];
  let length = n;
  for (const radix of factors(n)) {
    const rest = length / radix;
    const twiddles = new Float64Array(2 * (radix - 1) * rest);
    for (let p = 0, at = 0; p < rest; p++) {
      for (let r = 1; r < radix; r++, at += 2) setRoot(twiddles, at, (p * r) / length);
    }
    const roots = new Float64Array(2 * radix);
    for (let r = 0; r < radix; r++) setRoot(roots, 2 * r, r / radix);
    stages.push({ radix, rest, twiddles, roots });
    length = rest;
  }
  return { n, stages };
}

/** e^(−2πi turn) for k = 0 … count − 1 of `n`: what takes apart the transform of two real halves. */
export function rootsOfUnity(n: number, count: number): Float64Array {
  const roots = new Float64Array(2 * count);
  for (let k = 0; k < count; k++) setRoot(roots, 2 * k, k / n);
  return roots;
}

function setRoot(table: Float64Array, at: number, turn: number): void {
  const angle = -2 * Math.PI * (turn - Math.floor(turn));
  table[at] = Math.cos(angle);
  table[at + 1] = Math.sin(angle);
}

function factors(n: number): number[] {
  const found: number[] = [];
  let left = n;
  for (const radix of RADICES) {
    for (; left % radix === 0; left /= radix) found.push(radix);
  }
  for (let odd = 7; left > 1; odd += 2) {
    const prime = odd * odd > left ? left : odd;
    for (; left % prime === 0; left /= prime) found.push(prime);
  }
  return found;
}
