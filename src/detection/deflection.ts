/**
 * Deflection of a signal in noise, d = √(sᵀ C⁻¹ s), after the part of it that a background could explain is taken out.
 *
 * @param a Work space of (n + k) rows of `stride` ≥ n values, k ≥ 1; overwritten. Rows 0 … n − 1 hold the lower triangle
 *   of the covariance C, row n the signal, further rows the background's columns (a constant, a plane).
 * @returns d ≥ 0. A background column that adds nothing to the ones before it (readings along one line cannot tell a
 *   cross slope from a constant) is passed over. Throws where C is not positive definite.
 *
 * Source: Kay (1998), Fundamentals of Statistical Signal Processing II, sections 4.4 and 7.7 (deflection in coloured
 * noise with linear nuisance parameters).
 */
export function deflection(a: Float64Array, { n, rows, stride }: { readonly n: number; readonly rows: number; readonly stride: number }): number {
  // One Cholesky pass down all rows: those under the covariance come out whitened, L⁻¹ times what they held.
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
      if (!(pivot > 0)) throw new Error('deflection: the covariance is not positive definite');
      // The diagonal keeps the reciprocal: it is only ever divided by.
      a[rowI + i] = 1 / Math.sqrt(pivot);
    }
  }
  return Math.sqrt(Math.max(0, outsideOf(a, { n, rows, stride })));
}

/** A column whose square falls below this share when the earlier ones are taken out adds nothing but rounding. */
const DEPENDENT = 1e-10;

/** Square of row n's part that is orthogonal to the rows after it (modified Gram–Schmidt). */
function outsideOf(a: Float64Array, { n, rows, stride }: { readonly n: number; readonly rows: number; readonly stride: number }): number {
  const signal = n * stride;
  for (let r = n + 1; r < rows; r++) {
    const base = r * stride;
    const before = dot(a, base, base, n);
    for (let q = n + 1; q < r; q++) {
      const other = q * stride;
      const size = dot(a, other, other, n);
      if (size > 0) subtract(a, { from: base, what: other, times: dot(a, base, other, n) / size }, n);
    }
    const size = dot(a, base, base, n);
    if (size <= DEPENDENT * before) a.fill(0, base, base + n);
    else subtract(a, { from: signal, what: base, times: dot(a, signal, base, n) / size }, n);
  }
  return dot(a, signal, signal, n);
}

function dot(a: Float64Array, p: number, q: number, n: number): number {
  let sum = 0;
  for (let k = 0; k < n; k++) sum += a[p + k]! * a[q + k]!;
  return sum;
}

function subtract(a: Float64Array, { from, what, times }: { from: number; what: number; times: number }, n: number): void {
  for (let k = 0; k < n; k++) a[from + k]! -= times * a[what + k]!;
}
