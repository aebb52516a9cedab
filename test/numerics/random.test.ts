import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';

const draw = (seed: number) => {
  const random = new Random(seed);
  return Array.from({ length: 8 }, () => random.uniform());
};

describe('Random', () => {
  it('gives the published sequence', () => {
    // Reference C code of xoshiro128** 1.1 (Blackman & Vigna) from the state below, as kept in a public port's test data.
    const random = Random.fromState([0x964d4a0c, 0xd40ab895, 0xad7fdecb, 0x3006f0f0]);
    expect([0, 1, 2, 3].map(() => random.uint32())).toEqual([0xf1391922, 0x6fe53806, 0xa5be2840, 0xf510ee70]);
  });

  it('repeats itself for a seed and differs between seeds', () => {
    expect(draw(7)).toEqual(draw(7));
    expect(draw(7)).not.toEqual(draw(8));
    expect(draw(1)).not.toEqual(draw(1.5));
    expect(draw(0)).toEqual(draw(-0));
  });

  it('has the moments of the uniform and the normal distribution', () => {
    const random = new Random(11);
    const n = 200_000;
    let u = 0, uu = 0, g = 0, gg = 0, g4 = 0, lag = 0, before = 0;
    for (let i = 0; i < n; i++) {
      const a = random.uniform();
      u += a; uu += a * a;
      lag += (a - 0.5) * (before - 0.5);
      before = a;
      const b = random.normal();
      g += b; gg += b * b; g4 += b ** 4;
    }
    // Five standard errors of each mean.
    expect(Math.abs(u / n - 1 / 2)).toBeLessThan(5 * Math.sqrt(1 / 12 / n));
    expect(Math.abs(uu / n - 1 / 3)).toBeLessThan(5 * Math.sqrt(4 / 45 / n));
    expect(Math.abs(lag / n)).toBeLessThan(5 / 12 / Math.sqrt(n));
    expect(Math.abs(g / n)).toBeLessThan(5 / Math.sqrt(n));
    expect(Math.abs(gg / n - 1)).toBeLessThan(5 * Math.sqrt(2 / n));
    expect(Math.abs(g4 / n - 3)).toBeLessThan(5 * Math.sqrt(96 / n));
  });

  it('draws integers evenly', () => {
    const random = new Random(3);
    const counts = [0, 0, 0, 0, 0, 0, 0];
    for (let i = 0; i < 70_000; i++) counts[random.integer(7)]!++;
    const chi2 = counts.reduce((sum, c) => sum + (c - 10_000) ** 2 / 10_000, 0);
    // Chi-squared with 6 degrees of freedom exceeds 22.5 once in a thousand (Abramowitz & Stegun, table 26.8).
    expect(chi2).toBeLessThan(22.5);
    expect(() => random.integer(0)).toThrow();
  });

  it('forks streams by label, whatever was drawn before', () => {
    const a = new Random(5);
    const b = new Random(5);
    b.uniform();
    expect(a.fork('walk').uniform()).toBe(b.fork('walk').uniform());
    expect(a.fork('walk').uniform()).not.toBe(a.fork('noise').uniform());
    expect(a.fork('walk').fork('x').uniform()).not.toBe(a.fork('x').fork('walk').uniform());
  });

  it('gives forks that do not follow each other', () => {
    const x = new Random(5).fork('a');
    const y = new Random(5).fork('b');
    const n = 50_000;
    let sum = 0;
    for (let i = 0; i < n; i++) sum += x.normal() * y.normal();
    expect(Math.abs(sum / n)).toBeLessThan(5 / Math.sqrt(n));
  });
});
