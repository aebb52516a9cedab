/**
 * Cholesky factors of small dense symmetric matrices, row-major Float64Array of n × n.
 * Source: Golub & Van Loan (2013), Matrix Computations, section 4.2.
 */

/**
 * Replaces `a` by its lower factor L with L Lᵀ = a; the strict upper triangle is set to zero. Only the lower triangle is
 * read. Throws where `a` is not positive definite (or holds NaN).
 */
export function cholesky(a: Float64Array, n: number): void {
  if (!tryCholesky(a, n)) throw new Error('cholesky: the matrix is not positive definite');
}

/** As `cholesky`, but answers false instead of throwing; `a` is spoilt then. */
export function tryCholesky(a: Float64Array, n: number): boolean {
  if (a.length < n * n) throw new Error(`cholesky: ${a.length} values for a ${n} × ${n} matrix`);
  for (let j = 0; j < n; j++) {
    const rowJ = j * n;
    let pivot = a[rowJ + j]!;
    for (let k = 0; k < j; k++) pivot -= a[rowJ + k]! * a[rowJ + k]!;
    if (!(pivot > 0) || pivot === Infinity) return false;
    const root = Math.sqrt(pivot);
    a[rowJ + j] = root;
    for (let i = j + 1; i < n; i++) {
      const rowI = i * n;
      let sum = a[rowI + j]!;
      for (let k = 0; k < j; k++) sum -= a[rowI + k]! * a[rowJ + k]!;
      a[rowI + j] = sum / root;
      a[rowJ + i] = 0;
    }
  }
  return true;
}

/** x with L x = b; `b` is kept. Its squared length is bᵀ(L Lᵀ)⁻¹b. */
export function forwardSubstitute(l: Float64Array, n: number, b: ArrayLike<number>): Float64Array {
  const x = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let sum = b[i]!;
    for (let k = 0; k < i; k++) sum -= l[i * n + k]! * x[k]!;
    x[i] = sum / l[i * n + i]!;
  }
  return x;
}

/** x with L Lᵀ x = b; `b` is kept. */
export function choleskySolve(l: Float64Array, n: number, b: ArrayLike<number>): Float64Array {
  const x = forwardSubstitute(l, n, b);
  for (let i = n - 1; i >= 0; i--) {
    let sum = x[i]!;
    for (let k = i + 1; k < n; k++) sum -= l[k * n + i]! * x[k]!;
    x[i] = sum / l[i * n + i]!;
  }
  return x;
}

/** (L Lᵀ)⁻¹, full and symmetric. */
export function choleskyInverse(l: Float64Array, n: number): Float64Array {
  const inverse = new Float64Array(n * n);
  const unit = new Float64Array(n);
  for (let j = 0; j < n; j++) {
    unit.fill(0);
    unit[j] = 1;
    const column = choleskySolve(l, n, unit);
    for (let i = j; i < n; i++) {
      inverse[i * n + j] = column[i]!;
      inverse[j * n + i] = column[i]!;
    }
  }
  return inverse;
}
