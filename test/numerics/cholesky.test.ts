import { describe, expect, it } from 'vitest';
import { cholesky, choleskyInverse, choleskySolve, forwardSubstitute } from '../../src/numerics/cholesky.js';
import { symmetricEigen2 } from '../../src/numerics/eigen2.js';
import { Random } from '../../src/numerics/random.js';

describe('cholesky', () => {
  it('factors a matrix with a factor in whole numbers', () => {
    // L = [[2,0,0],[6,1,0],[-8,5,3]], multiplied out.
    const a = Float64Array.of(4, 12, -16, 12, 37, -43, -16, -43, 98);
    cholesky(a, 3);
    expect([...a]).toEqual([2, 0, 0, 6, 1, 0, -8, 5, 3]);
    expect([...choleskySolve(a, 3, [4, 12, -16])].map((v) => Math.round(v * 1e9) / 1e9 + 0)).toEqual([1, 0, 0]);
  });

  it('solves, inverts and gives the quadratic form', () => {
    const random = new Random(4);
    const n = 12;
    const g = Float64Array.from({ length: n * n }, () => random.normal());
    const a = new Float64Array(n * n);
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) for (let k = 0; k < n; k++) a[i * n + j]! += g[i * n + k]! * g[j * n + k]!;
    const l = a.slice();
    cholesky(l, n);
    const b = Float64Array.from({ length: n }, () => random.normal());
    const x = choleskySolve(l, n, b);
    const inverse = choleskyInverse(l, n);
    let form = 0;
    for (let i = 0; i < n; i++) {
      let ax = 0, ib = 0;
      for (let j = 0; j < n; j++) { ax += a[i * n + j]! * x[j]!; ib += inverse[i * n + j]! * b[j]!; }
      expect(ax).toBeCloseTo(b[i]!, 9);
      expect(ib).toBeCloseTo(x[i]!, 8);
      form += b[i]! * x[i]!;
    }
    expect(forwardSubstitute(l, n, b).reduce((sum, v) => sum + v * v, 0) / form).toBeCloseTo(1, 9);
  });

  it('refuses what is not positive definite', () => {
    expect(() => cholesky(Float64Array.of(1, 2, 2, 1), 2)).toThrow(/positive definite/);
    expect(() => cholesky(Float64Array.of(NaN), 1)).toThrow();
    expect(() => cholesky(Float64Array.of(1), 2)).toThrow();
  });
});

describe('symmetricEigen2', () => {
  it.each([
    [[1, 0, 4], 4, 1, 0],
    [[4, 0, 1], 4, 1, 90],
    [[2.5, 1.5, 2.5], 4, 1, 45],
    [[2.5, -1.5, 2.5], 4, 1, 135],
    [[3, 0, 3], 3, 3, 0],
    [[1, 1, 1], 2, 0, 45],
  ] as const)('%j', (cov, major, minor, azimuth) => {
    const e = symmetricEigen2(cov);
    expect(e.majorVariance).toBeCloseTo(major, 12);
    expect(e.minorVariance).toBeCloseTo(minor, 12);
    expect(e.azimDeg).toBeCloseTo(azimuth, 10);
  });

  it('undoes a rotation by any azimuth', () => {
    for (let azimuth = 0; azimuth < 180; azimuth += 7) {
      const s = Math.sin((azimuth * Math.PI) / 180), c = Math.cos((azimuth * Math.PI) / 180);
      const e = symmetricEigen2([9 * s * s + 4 * c * c, 5 * s * c, 9 * c * c + 4 * s * s]);
      expect(e.majorVariance).toBeCloseTo(9, 10);
      expect(e.minorVariance).toBeCloseTo(4, 10);
      expect(e.azimDeg).toBeCloseTo(azimuth, 9);
    }
  });
});
