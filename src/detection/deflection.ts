/** Rows that are whitened in one pass: n rows of a covariance, then background columns, then signals. */
export interface Whitening {
  /** Readings (or pools of them). */
  readonly n: number;
  /** Rows after the covariance that hold the background: a constant, a plane. */
  readonly background: number;
  /** Rows after those that hold signals. */
  readonly signals: number;
  /** Values from one row to the next, at least n. */
  readonly stride: number;
}

/**
 * Whitens signals in noise of covariance C and takes out of them what the background could explain. Afterwards the
 * length of signal row k is its deflection, d = √(sᵀ C⁻¹ s) for a signal without background.
 *
 * @param a Rows of `stride` values, changed in place. Rows 0 … n − 1 hold the lower triangle of C and become its
 *   Cholesky factor L with the reciprocals of its diagonal; a row x below them becomes L⁻¹x, background rows orthogonal
 *   to one another, signal rows orthogonal to them. A background row that adds nothing to the ones before it (readings
 *   along one line cannot tell a cross slope from a constant) becomes zero. Throws where C is not positive definite.
 *
 * Source: Kay (1998), Fundamentals of Statistical Signal Processing II, sections 4.4 and 7.7 (deflection in coloured
 * noise with linear nuisance parameters).
 */
export function whitenSignals(a: Float64Array, { n, background, signals, stride }: Whitening): void {
  const rows = n + background + signals;
  for (let i = 0; i < rows; i++) {
    const rowI = i * stride;
    const last = Math.min(i, n);
    for (let j = 0; j < last; j++) {
      const rowJ = j * stride;
      let sum = a[rowI + j]!;
      for (let k = 0; k < j; k++) sum -= a[rowI + k]! * a[rowJ + k]!;
      a[rowI + j] = sum * a[rowJ + j]!;
    }
    if (i < n) {
      let pivot = a[rowI + i]!;
      for (let k = 0; k < i; k++) pivot -= a[rowI + k]! * a[rowI + k]!;
      if (!(pivot > 0)) throw new Error('whitenSignals: the covariance is not positive definite');
      // The diagonal keeps the reciprocal: it is only ever divided by.
      a[rowI + i] = 1 / Math.sqrt(pivot);
    }
  }
  for (let r = n; r < rows; r++) {
    const base = r * stride;
    const before = dot(a, base, base, n);
    for (let q = n; q < Math.min(r, n + background); q++) {
      const other = q * stride;
      const size = dot(a, other, other, n);
      if (size > 0) subtract(a, { from: base, what: other, times: dot(a, base, other, n) / size }, n);
    }
    if (r < n + background && dot(a, base, base, n) <= DEPENDENT * before) a.fill(0, base, base + n);
  }
}

/** A column whose square falls below this share when the earlier ones are taken out adds nothing but rounding. */
const DEPENDENT = 1e-10;

/** Length of a whitened row: the deflection of the signal that stood there. */
export function rowLength(a: Float64Array, row: number, { n, stride }: Pick<Whitening, 'n' | 'stride'>): number {
  return Math.sqrt(dot(a, row * stride, row * stride, n));
}

/** Turns a whitened row x into L⁻ᵀx, the matched filter's weights, in place of the row. */
export function filterWeights(a: Float64Array, row: number, { n, stride }: Pick<Whitening, 'n' | 'stride'>): void {
  const base = row * stride;
  for (let i = n - 1; i >= 0; i--) {
    const value = a[base + i]! * a[i * stride + i]!;
    a[base + i] = value;
    for (let k = 0; k < i; k++) a[base + k]! -= value * a[i * stride + k]!;
  }
}

function dot(a: Float64Array, p: number, q: number, n: number): number {
  let sum = 0;
  for (let k = 0; k < n; k++) sum += a[p + k]! * a[q + k]!;
  return sum;
}

function subtract(a: Float64Array, { from, what, times }: { from: number; what: number; times: number }, n: number): void {
  for (let k = 0; k < n; k++) a[from + k]! -= times * a[what + k]!;
}
