import { describe, expect, it } from 'vitest';
import { meansOf, middles } from '../../src/grid/middles.js';
import { Random } from '../../src/numerics/random.js';

/** Mean of one group, and which samples it is taken of. */
function middleOf(value: readonly number[], sd: readonly number[]): { mean: number; taken: number[]; total: number } {
  const weight = sd.map((each) => each ** -2);
  const middle = middles({ start: Int32Array.of(0, value.length), order: Int32Array.from(value.keys()) }, value, weight);
  const taken = [...middle.order.subarray(middle.from[0], middle.until[0])];
  return { mean: meansOf(value, middle)[0]!, taken: taken.toSorted((a, b) => a - b), total: middle.total[0]! };
}

describe('middles', () => {
  it('is the mean weighted by inverse variance where nothing is left out', () => {
    const { mean, total } = middleOf([10, 16], [1, 2]);
    expect(mean).toBeCloseTo((10 / 1 + 16 / 4) / (1 + 1 / 4), 12);
    expect(total).toBeCloseTo(1.25, 12);
  });

  it('leaves a quarter out at either end, as without weights, where weights are alike', () => {
    const random = new Random(2);
    for (let count = 1; count < 150; count++) {
      const value = Array.from({ length: count }, () => random.normal());
      const plain = middleOf(value, []);
      const cut = (count + 1) >> 2;
      expect(plain.taken.length).toBe(count - 2 * cut);
      for (const sd of [1, 0.1, 3]) {
        const alike = middleOf(value, value.map(() => sd));
        expect(alike.taken).toEqual(plain.taken);
        expect(alike.mean).toBeCloseTo(plain.mean, 12);
      }
      expect(middleOf(value, value.map(() => 1)).mean).toBe(plain.mean);
    }
  });

  it('keeps an accurate sample that lies at the end of poor ones', () => {
    // The poor ones lie above; the lowest, which would be cut off by number, carries most of the weight.
    expect(middleOf([10, 14, 15], [0.1, 1, 1]).taken).toEqual([0, 1]);
    expect(middleOf([10, 14, 15], [1, 1, 1]).taken).toEqual([1]);
    expect(middleOf([10, 14, 15], [0.1, 1, 1]).mean).toBeCloseTo((1000 + 14) / 101, 12);
  });

  it('leaves out wild samples that carry no more than a quarter of the weight', () => {
    expect(middleOf([5, 6, 7, 9e9], [1, 1, 1, 1]).mean).toBeCloseTo(6.5, 12);
    expect(middleOf([5, 6, 7, 9e9, -9e9, 6, 6, 7], [1, 1, 1, 2, 2, 1, 1, 1]).mean).toBeLessThan(7);
    expect(middleOf([5, 6, 7, 9e9, -9e9, 6, 6, 7], [1, 1, 1, 2, 2, 1, 1, 1]).mean).toBeGreaterThan(5);
  });

  it('passes over groups without samples, and takes many samples as it takes few', () => {
    const value = Array.from({ length: 400 }, (_, n) => (n * 37) % 400);
    const middle = middles({ start: Int32Array.of(0, 0, 400, 400), order: Int32Array.from(value.keys()) }, value, []);
    expect([...middle.group]).toEqual([1]);
    expect(meansOf(value, middle)[0]).toBeCloseTo(199.5, 12);
    expect(middle.total[0]).toBe(200);
  });
});
