import { describe, expect, it } from 'vitest';
import { pointInArea } from '../../src/density/area.js';
import { densityAt } from '../../src/density/densityAt.js';
import { ELLIPSE_SIGMAS, ellipse95, ellipseRing } from '../../src/density/ellipse.js';
import { expectation } from '../../src/density/expectation.js';
import { massIn } from '../../src/density/massIn.js';
import { densityCovariance, densityMean } from '../../src/density/moments.js';
import { owensT } from '../../src/density/owensT.js';
import type { Area, Covariance, Density, DensityPart } from '../../src/density/types.js';
import { normalCdf } from '../../src/numerics/special.js';
import { Random } from '../../src/numerics/random.js';
import type { Grid } from '../../src/raster/types.js';

type Part = DensityPart & { role: 'place' | 'blunder' };
const box = (w: number, s: number, e: number, n: number): Area => [[[[w, s], [e, s], [e, n], [w, n], [w, s]]]];
const gaussian = (x: number, y: number, cov: Covariance, weight = 1): Part => ({ kind: 'gaussian', weight, x, y, cov, role: 'place' });
const one = (...parts: Part[]): Density => ({ parts });
const gridOf = (width: number, height: number, f: (x: number, y: number) => number, { west = 0, north = 0, cellM = 1 } = {}): Grid => ({
  width, height, west, north, cellM,
  values: Float64Array.from({ length: width * height }, (_, i) => f(west + cellM * ((i % width) + 0.5), north - cellM * (Math.floor(i / width) + 0.5))),
});
const narrow: Covariance = [80, 72, 70];
const mixed = one(
  gaussian(3, 4, [30, 12, 18], 0.6), gaussian(30, -12, [9, 0, 9], 0.3),
  { kind: 'disc', weight: 0.05, x: 10, y: 10, radiusM: 25, role: 'place' },
  { kind: 'area', weight: 0.05, area: box(-800, -800, 809, 809), role: 'blunder' },
);

describe('published numbers', () => {
  it("has Owen's T right (Patefield & Tandy 2000, table of test values)", () => {
    for (const [h, a, t] of [
      [0.0625, 0.25, 3.89119302347014e-2], [6.5, 0.4375, 2.00057730485083e-11], [7, 0.96875, 6.39906271938987e-13],
      [4.78125, 0.0625, 1.06329748046875e-7], [2, 0.5, 8.62507798552151e-3], [1, 0.9999975, 6.67418089782286e-2],
    ] as const) expect(Math.abs(owensT(h, a) / t - 1)).toBeLessThan(1e-8);
  });

  it('draws the 95 % ellipse of a Gaussian at 2.4477 σ', () => {
    expect(ELLIPSE_SIGMAS).toBeCloseTo(2.4477, 4);
    // σ of 5 m along azimuth 30° and 2 m across.
    const [s, c] = [Math.sin(Math.PI / 6), Math.cos(Math.PI / 6)];
    const cov: Covariance = [25 * s * s + 4 * c * c, (25 - 4) * s * c, 25 * c * c + 4 * s * s];
    const ellipse = ellipse95(one(gaussian(1000, 2000, cov, 0.95), { kind: 'area', weight: 0.05, area: box(0, 0, 9000, 9000), role: 'blunder' }));
    expect(ellipse.semiMajM).toBeCloseTo(2.4477 * 5, 3);
    expect(ellipse.semiMinM).toBeCloseTo(2.4477 * 2, 3);
    expect(ellipse.azimDeg).toBeCloseTo(30, 9);
    expect([ellipse.x, ellipse.y]).toEqual([1000, 2000]);
    expect(massIn(one(gaussian(1000, 2000, cov)), [[ellipseRing(ellipse, 2000)]])).toBeCloseTo(0.95, 5);
  });

  it('puts the mass of a Gaussian in a box where the normal distribution puts it', () => {
    expect(massIn(one(gaussian(0, 0, [4, 0, 9])), box(-2, -3, 4, 1))).toBeCloseTo((normalCdf(2) - normalCdf(-1)) * (normalCdf(1 / 3) - normalCdf(-1)), 10);
    // Half planes and quadrants: P(X > 0, Y > 0) = 1/4 + arcsin ρ/2π (Sheppard 1899).
    expect(massIn(one(gaussian(0, 0, [4, 3, 9])), box(0, 0, 1e4, 1e4))).toBeCloseTo(0.25 + Math.asin(0.5) / (2 * Math.PI), 10);
  });

  it('a disc holds 95 % of itself within √0.95 of its radius', () => {
    const ellipse = ellipse95(one({ kind: 'disc', weight: 1, x: 5, y: 6, radiusM: 100, role: 'place' }));
    expect(ellipse.semiMajM).toBeCloseTo(100 * Math.sqrt(0.95), 1);
    expect(ellipse.semiMinM).toBeCloseTo(ellipse.semiMajM, 3);
  });
});

describe('moments', () => {
  it('leave the blunders out and count what lies between the parts', () => {
    const density = one(gaussian(0, 0, [1, 0, 4], 0.475), gaussian(10, 0, [1, 0, 4], 0.475), { kind: 'disc', weight: 0.05, x: 900, y: 900, radiusM: 800, role: 'blunder' });
    expect(densityMean(density)).toEqual({ x: 5, y: 0 });
    const cov = densityCovariance(density);
    expect(cov[0]).toBeCloseTo(26, 9);
    expect(cov[2]).toBeCloseTo(4, 9);
  });

  it('refuse a density that is all blunder', () => {
    expect(() => densityMean(one({ kind: 'disc', weight: 1, x: 0, y: 0, radiusM: 1, role: 'blunder' }))).toThrow();
  });
});

describe('ellipse95 of a mixture', () => {
  it('holds at least 95 % of points drawn from the mixture, and no more than it has to', () => {
    const parts = [gaussian(0, 0, [36, 0, 36], 0.7), gaussian(25, 30, [36, 10, 36], 0.3)];
    const ring: Area = [[ellipseRing(ellipse95(one(...parts)), 720)]];
    const random = new Random(3);
    let hits = 0;
    const n = 40_000;
    for (let i = 0; i < n; i++) {
      const { x, y, cov: [ee, en, nn] } = (random.uniform() < 0.7 ? parts[0] : parts[1]) as Extract<Part, { kind: 'gaussian' }>;
      const u = random.normal();
      if (pointInArea(ring, x + Math.sqrt(ee) * u, y + (en / Math.sqrt(ee)) * u + Math.sqrt(nn - (en * en) / ee) * random.normal())) hits++;
    }
    // Three standard errors of 40,000 draws are 0.0033.
    expect(hits / n).toBeGreaterThan(0.9467);
    expect(hits / n).toBeLessThan(0.9533);
  });
});

describe('massIn, densityAt and expectation agree', () => {
  it('a fine sum of the density equals the mass, for every kind of part', () => {
    const area: Area = [[[[-10, -20], [40, -25], [35, 20], [0, 15]], [[5, 0], [9, 0], [7, 5]]]];
    const step = 0.1;
    let sum = 0;
    for (let x = -10 + step / 2; x < 40; x += step) {
      for (let y = -25 + step / 2; y < 20; y += step) if (pointInArea(area, x, y)) sum += densityAt(mixed, x, y) * step * step;
    }
    expect(massIn(mixed, area)).toBeCloseTo(sum, 3);
  });

  it('expectation of a grid of ones over a box is the mass in the box', () => {
    for (const density of [mixed, one(gaussian(0.3, 0.2, narrow)), one(gaussian(1, 1, [0.01, 0.004, 0.003])), one(gaussian(4.9, -2.2, [9, -29.9, 100]))]) {
      for (const cellM of [0.7, 2, 5]) {
        const width = Math.round(35 / cellM);
        const grid = gridOf(width, width, () => 1, { west: -10, north: 20, cellM });
        expect(Math.abs(expectation(density, grid) - massIn(density, box(-10, 20 - width * cellM, -10 + width * cellM, 20)))).toBeLessThan(2e-5);
      }
    }
  });

  it('expectation of a rough grid equals a draw of a million points', () => {
    const grid = gridOf(30, 25, (x, y) => (Math.sin(7 * x + 3 * y) > 0.3 ? Number.NaN : Math.abs(Math.sin(x * y))), { west: -8, north: 22, cellM: 1.5 });
    const density = one(gaussian(6, 5, narrow, 0.5), gaussian(12, 2, [20, -6, 12], 0.5));
    const random = new Random(11);
    let sum = 0;
    const n = 1_000_000;
    for (let i = 0; i < n; i++) {
      const [x0, y0, ee, en, nn] = i % 2 ? [6, 5, ...narrow] as const : [12, 2, 20, -6, 12] as const;
      const u = random.normal();
      const col = Math.floor((x0 + Math.sqrt(ee) * u + 8) / 1.5);
      const row = Math.floor((22 - (y0 + (en / Math.sqrt(ee)) * u + Math.sqrt(nn - (en * en) / ee) * random.normal())) / 1.5);
      const value = col >= 0 && col < 30 && row >= 0 && row < 25 ? grid.values[row * 30 + col]! : 0;
      if (value === value) sum += value;
    }
    expect(Math.abs(expectation(density, grid) - sum / n)).toBeLessThan(1e-3);
  });

  it('a Gaussian far smaller than a cell takes the value of its cell, and of both cells when it sits on their edge', () => {
    const grid = gridOf(3, 2, (x) => (x < 10 ? 0.2 : x < 20 ? 0.8 : 0.5), { west: 0, north: 20, cellM: 10 });
    expect(expectation(one(gaussian(15, 15, [1e-4, 0, 1e-4])), grid)).toBeCloseTo(0.8, 6);
    expect(expectation(one(gaussian(10, 15, [1e-4, 0, 1e-4])), grid)).toBeCloseTo(0.5, 6);
    expect(expectation(one(gaussian(10, 15, [0, 0, 0])), grid)).toBeCloseTo(0.5, 6);
    expect(expectation(one(gaussian(-15, 15, [1e-4, 0, 1e-4])), grid)).toBe(0);
  });

  it('counts discs and areas by their overlap, NaN and the world outside as nothing', () => {
    const grid = gridOf(4, 4, (x, y) => (x < 1 && y > -1 ? Number.NaN : 1), { west: 0, north: 0, cellM: 1 });
    expect(expectation(one({ kind: 'area', weight: 1, area: box(0, -4, 8, 0), role: 'place' }), grid)).toBeCloseTo(15 / 32, 12);
    expect(expectation(one({ kind: 'disc', weight: 1, x: 4, y: -2, radiusM: 1, role: 'blunder' }), grid)).toBeCloseTo(0.5, 6);
  });

  it('a disc that holds the grid counts as the disc cut at the cells does', () => {
    const grid = gridOf(40, 30, (x, y) => (x * y > 0 ? Number.NaN : Math.abs(Math.sin(x + 2 * y))), { west: -20, north: 15 });
    const sum = Array.from(grid.values).reduce((a, b) => (b === b ? a + b : a), 0);
    for (const radiusM of [26, 60]) {
      expect(expectation(one({ kind: 'disc', weight: 1, x: 0.5, y: 0, radiusM, role: 'blunder' }), grid)).toBeCloseTo(sum / (Math.PI * radiusM ** 2), 5);
    }
  });

  it('a larger grid of ones never holds less, and a plane of them holds all', () => {
    let before = 0;
    for (const half of [5, 10, 20, 40, 900]) {
      const mass = expectation(mixed, gridOf(2 * half, 2 * half, () => 1, { west: -half, north: half }));
      expect(mass).toBeGreaterThanOrEqual(before - 1e-9);
      before = mass;
    }
    expect(before).toBeCloseTo(1, 5);
  });
});
