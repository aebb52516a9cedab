import { describe, expect, it } from 'vitest';
import { erf, erfc, normalCdf, normalPdf, normalQuantile } from '../../src/numerics/special.js';

describe('erf', () => {
  // Abramowitz & Stegun (1964), table 7.1, ten decimals.
  it.each([
    [0, 0], [0.1, 0.1124629160], [0.5, 0.5204998778], [1, 0.8427007929], [1.5, 0.9661051465], [2, 0.9953222650],
  ])('erf(%f) agrees with the table', (x, expected) => {
    expect(erf(x)).toBeCloseTo(expected, 10);
    expect(erf(-x)).toBeCloseTo(-expected, 10);
  });

  // SciPy special.erfc.
  it.each([
    [3, 2.20904969985854e-5], [5, 1.53745979442803e-12], [10, 2.08848758376254e-45],
  ])('erfc(%f) keeps its digits in the tail', (x, expected) => {
    expect(erfc(x) / expected).toBeCloseTo(1, 12);
  });

  it('joins its three approximations without a step', () => {
    for (const seam of [0.46875, 4]) {
      expect(Math.abs(erfc(seam + 1e-12) - erfc(seam - 1e-12)) / erfc(seam)).toBeLessThan(1e-10);
    }
  });

  it('knows the ends', () => {
    expect(erf(Infinity)).toBe(1);
    expect(erf(-Infinity)).toBe(-1);
    expect(erfc(-Infinity)).toBe(2);
    expect(erf(NaN)).toBeNaN();
  });
});

describe('normal distribution', () => {
  // Abramowitz & Stegun (1964), table 26.1.
  it.each([
    [0, 0.5], [1, 0.841344746068543], [2, 0.977249868051821], [3, 0.998650101968370], [-1, 0.158655253931457],
  ])('Φ(%f)', (x, expected) => expect(normalCdf(x)).toBeCloseTo(expected, 14));

  // Abramowitz & Stegun (1964), table 26.5 (p to x), and the textbook 97.5 % point.
  it.each([
    [0.975, 1.959963984540054], [0.995, 2.575829303548901], [0.999, 3.090232306167813], [0.75, 0.674489750196082],
    [1e-9, -5.997807015007687],
  ])('Φ⁻¹(%f)', (p, expected) => expect(normalQuantile(p)).toBeCloseTo(expected, 12));

  it('quantile and distribution undo each other', () => {
    for (const p of [1e-300, 1e-20, 1e-6, 0.01, 0.3, 0.5, 0.6, 0.99]) expect(normalCdf(normalQuantile(p)) / p).toBeCloseTo(1, 11);
    for (let x = -6; x <= 6; x += 0.25) expect(normalQuantile(normalCdf(-Math.abs(x)))).toBeCloseTo(-Math.abs(x), 11);
  });

  it('the density is the slope of the distribution', () => {
    for (const x of [-2.5, -0.3, 0, 1.7]) expect((normalCdf(x + 1e-5) - normalCdf(x - 1e-5)) / 2e-5).toBeCloseTo(normalPdf(x), 8);
  });

  it('knows the ends', () => {
    expect(normalQuantile(0)).toBe(-Infinity);
    expect(normalQuantile(1)).toBe(Infinity);
    expect(normalQuantile(-0.1)).toBeNaN();
    expect(normalQuantile(NaN)).toBeNaN();
  });
});
