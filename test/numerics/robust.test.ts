import { describe, expect, it } from 'vitest';
import { madSd, median, quantile } from '../../src/numerics/robust.js';
import { Random } from '../../src/numerics/random.js';

describe('robust statistics', () => {
  it('finds medians and quantiles by definition 7 of Hyndman & Fan (1996)', () => {
    expect(median([5])).toBe(5);
    expect(median([3, 1, 2])).toBe(2);
    expect(median([4, 1, 2, 3])).toBe(2.5);
    // Position 1 + 0.3 · 3 = 1.9 in the ordered sample 1 2 3 4.
    expect(quantile([4, 1, 2, 3], 0.3)).toBeCloseTo(1.9, 14);
    expect(quantile([4, 1, 2, 3], 0)).toBe(1);
    expect(quantile([4, 1, 2, 3], 1)).toBe(4);
  });

  it('ignores NaN, keeps the input, and says NaN of nothing', () => {
    const values = Float64Array.of(NaN, 3, 1, NaN, 2);
    expect(median(values)).toBe(2);
    expect(values).toEqual(Float64Array.of(NaN, 3, 1, NaN, 2));
    expect(median([])).toBeNaN();
    expect(madSd([NaN])).toBeNaN();
    expect(() => quantile([1], 1.1)).toThrow();
  });

  it('agrees with sorting on many samples, ties among them', () => {
    const random = new Random(1);
    for (let round = 0; round < 200; round++) {
      const values = Array.from({ length: 1 + random.integer(40) }, () => (round % 2 ? random.integer(5) : random.normal()));
      const sorted = values.toSorted((a, b) => a - b);
      const q = random.integer(values.length) / Math.max(1, values.length - 1);
      expect(quantile(values, q)).toBeCloseTo(sorted[Math.round(q * (values.length - 1))]!, 12);
    }
  });

  it('scales the deviation to a standard deviation and does not mind outliers', () => {
    const random = new Random(2);
    const values = Float64Array.from({ length: 20_000 }, () => 7 + 3 * random.normal());
    expect(madSd(values)).toBeCloseTo(3, 1);
    for (let i = 0; i < 2000; i++) values[i] = 1e9;
    expect(madSd(values)).toBeLessThan(3.6);
  });
});
