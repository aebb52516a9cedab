import { describe, expect, it } from 'vitest';
import { densityAt } from '../../src/density/densityAt.js';
import { ellipseRing } from '../../src/density/ellipse.js';
import { expectation } from '../../src/density/expectation.js';
import { massIn } from '../../src/density/massIn.js';
import { massInEllipse } from '../../src/density/massInEllipse.js';
import { densityCovariance } from '../../src/density/moments.js';
import { roundedCdf, roundedPdf } from '../../src/density/roundedGaussian.js';
import type { Ellipse, HalfAxes } from '../../src/density/types.js';
import { unitCircleOverlap } from '../../src/density/unitCircleOverlap.js';
import { Random } from '../../src/numerics/random.js';
import type { Grid } from '../../src/raster/types.js';
import { area, box, gaussian, one } from './made.js';

const circle = (x: number, y: number, radius: number): Ellipse => ({ x, y, semiMajM: radius, semiMinM: radius, azimDeg: 0 });

/** Chance that a non-central χ² of two degrees of freedom is at most x: a Poisson mixture of central ones. Source: Johnson, Kotz & Balakrishnan (1995), eq. 29.3. */
function nonCentral2(x: number, lambda: number): number {
  let [sum, poisson, term, below] = [0, Math.exp(-lambda / 2), Math.exp(-x / 2), 0];
  for (let j = 0; j < 2000; j++) {
    // 1 − central cdf of 2 + 2j degrees is e^(−x/2) Σ_{i ≤ j} (x/2)^i / i!.
    below += term;
    sum += poisson * (1 - below);
    poisson *= lambda / 2 / (j + 1);
    term *= x / 2 / (j + 1);
  }
  return sum;
}

describe('massInEllipse', () => {
  it('of a Gaussian about its mean is 1 − exp(−r²/2)', () => {
    for (const r of [0.1, 1, 2.4477, 6]) expect(massInEllipse(one(gaussian(0, 0, [9, 0, 9])), circle(0, 0, 3 * r))).toBeCloseTo(1 - Math.exp((-r * r) / 2), 9);
  });

  it('of a circle beside the mean is the non-central χ² distribution', () => {
    for (const [distance, r] of [[1, 1], [0.5, 3], [3, 1], [4, 6], [7, 2], [30, 29], [30, 31], [0.2, 0.01]] as const) {
      expect(massInEllipse(one(gaussian(0, 0, [4, 0, 4])), circle(2 * distance * 0.6, 2 * distance * 0.8, 2 * r))).toBeCloseTo(nonCentral2(r * r, distance * distance), 7);
    }
    // Marcum's Q₁(1, 1) = 0.7328798 is the chance to miss (Marcum 1950, tables).
    expect(1 - massInEllipse(one(gaussian(0, 0, [1, 0, 1])), circle(1, 0, 1))).toBeCloseTo(0.7328798, 7);
  });

  it("agrees with Owen's polygons for ellipses and Gaussians of any shape, and with Green's theorem for rounded ones", () => {
    const random = new Random(1);
    for (let i = 0; i < 60; i++) {
      const [sx, sy, lean, turn] = [Math.exp(1.5 * random.normal()), Math.exp(1.5 * random.normal()), 1.9 * (random.uniform() - 0.5), 7 * random.uniform()];
      const [a, b] = [4 * Math.exp(random.normal()), 4 * Math.exp(random.normal())];
      // Square only in units of a round Gaussian; the leaning ones get a rectangle in its place.
      const round = i % 3 === 2;
      const rounding: HalfAxes = [[a * Math.cos(turn), a * Math.sin(turn)], [-b * Math.sin(turn), b * Math.cos(turn)]];
      const density = one(gaussian(0, 0, round ? [sx * sx, 0, sx * sx] : [sx * sx, lean * sx * sy, sy * sy], i % 3 === 0 ? {} : { rounding }));
      const major = 1 + 30 * random.uniform();
      const ellipse: Ellipse = { x: 3 * random.normal(), y: 3 * random.normal(), semiMajM: major, semiMinM: major * (0.05 + 0.95 * random.uniform()), azimDeg: 180 * random.uniform() };
      expect(Math.abs(massInEllipse(density, ellipse) - massIn(density, [[ellipseRing(ellipse, 1500)]]))).toBeLessThan(3e-5);
    }
  });

  it('of an area is the share of it that lies inside', () => {
    expect(massInEllipse(one(area(box(-2, -1, 2, 1))), { x: 0, y: 0, semiMajM: 2, semiMinM: 1, azimDeg: 90 })).toBeCloseTo(Math.PI / 4, 12);
    expect(massInEllipse(one(area(box(0, 0, 50, 50))), circle(0, 0, 50))).toBeCloseTo(Math.PI / 4, 12);
    const blurred = one(area(box(0, 0, 400, 300), { cov: [900, 200, 400] }));
    const ellipse: Ellipse = { x: 180, y: 160, semiMajM: 230, semiMinM: 150, azimDeg: 70 };
    let sum = 0;
    const step = 4;
    for (let x = -60; x < 420; x += step) for (let y = -60; y < 380; y += step) if (Math.hypot(...inUnits(ellipse, x, y)) <= 1) sum += densityAt(blurred, x, y) * step * step;
    expect(Math.abs(massInEllipse(blurred, ellipse) - sum)).toBeLessThan(2e-3);
  });
});

function inUnits({ x, y, semiMajM, semiMinM, azimDeg }: Ellipse, px: number, py: number): [number, number] {
  const azimuth = (azimDeg * Math.PI) / 180;
  const [dx, dy] = [px - x, py - y];
  return [(dx * Math.sin(azimuth) + dy * Math.cos(azimuth)) / semiMajM, (dx * Math.cos(azimuth) - dy * Math.sin(azimuth)) / semiMinM];
}

describe('unitCircleOverlap', () => {
  it('has the areas of circle, square, segment and sector', () => {
    const ring = (w: number, s: number, e: number, n: number) => box(w, s, e, n)[0]![0]!;
    expect(unitCircleOverlap(ring(-2, -2, 2, 2))).toBeCloseTo(Math.PI, 12);
    expect(unitCircleOverlap(ring(-0.5, -0.5, 0.5, 0.5))).toBeCloseTo(1, 12);
    expect(unitCircleOverlap(ring(0.5, -2, 2, 2))).toBeCloseTo(Math.acos(0.5) - 0.5 * Math.sqrt(0.75), 12);
    expect(unitCircleOverlap(ring(0, 0, 3, 3))).toBeCloseTo(Math.PI / 4, 12);
    expect(unitCircleOverlap(ring(2, 2, 3, 3))).toBeCloseTo(0, 12);
    expect(unitCircleOverlap(ring(-2, -2, 2, 2).toReversed())).toBeCloseTo(-Math.PI, 12);
  });
});

describe('rounded places', () => {
  it('have the density and distribution of a sum of a normal and a uniform variable', () => {
    for (const half of [0, 0.3, 2, 40]) {
      let sum = 0;
      const step = 0.01;
      for (let x = -half - 8 + step / 2; x < half + 8; x += step) {
        if (Math.abs(x - 0.7) < step / 2 || Math.abs(x + 2.1) < step / 2) expect(roundedCdf(x - step / 2, half)).toBeCloseTo(sum, 4);
        sum += roundedPdf(x, half) * step;
      }
      expect(sum).toBeCloseTo(1, 9);
      expect(roundedCdf(0, half)).toBeCloseTo(0.5, 12);
    }
    expect(roundedPdf(10, 2)).toBeGreaterThan(0);
  });

  it('count alike at points, in areas and over grids', () => {
    const rounding: HalfAxes = [[12, 1], [-1.2, 15]];
    for (const cov of [[33, 0, 33], [4, 0, 4]] as const) {
      const density = one(gaussian(2, 3, cov, { rounding }));
      const cells: Grid = { width: 40, height: 30, west: -31, north: 40, cellM: 2, values: Float64Array.from({ length: 1200 }, (_, i) => 0.5 + 0.4 * Math.sin((i % 40) / 6) * Math.cos(i / 400)) };
      let [sum, inGrid] = [0, 0];
      const step = 0.5;
      for (let x = -31 + step / 2; x < 49; x += step) {
        for (let y = -20 + step / 2; y < 40; y += step) {
          const value = densityAt(density, x, y) * step * step;
          inGrid += value;
          sum += value * cells.values[Math.floor((40 - y) / 2) * 40 + Math.floor((x + 31) / 2)]!;
        }
      }
      expect(massIn(density, box(-31, -20, 49, 40))).toBeCloseTo(inGrid, 4);
      expect(Math.abs(expectation(density, cells) - sum)).toBeLessThan(1e-3);
    }
  });

  it('have a wider covariance than any rounding of theirs', () => {
    expect(() => densityAt({ parts: [{ kind: 'gaussian', role: 'place', weight: 1, x: 0, y: 0, cov: [1, 0, 1], rounding: [[9, 0], [0, 9]] }] }, 0, 0)).toThrow(/wider/);
  });
});

describe('a section with uncertain lines', () => {
  it('counts alike at points and in areas, also where edges meet', () => {
    const density = one(area(box(0, 0, 1600, 1610), { cov: [100, 30, 81] }));
    for (const part of [box(0, 0, 1600, 1610), box(5, -50, 1700, 800), box(400, 300, 900, 700), box(-20, -20, 10, 1640)]) {
      const [[[w, s], , [e, n]]] = part[0] as unknown as [[[number, number], unknown, [number, number]]];
      let sum = 0;
      const [stepX, stepY] = [(e - w) / 150, (n - s) / 150];
      for (let i = 0; i < 150; i++) for (let j = 0; j < 150; j++) sum += densityAt(density, w + (i + 0.5) * stepX, s + (j + 0.5) * stepY) * stepX * stepY;
      expect(Math.abs(massIn(density, part) - sum)).toBeLessThan(3e-3);
    }
  });
});

describe('areas with uncertain edges', () => {
  const density = one(area(box(0, 0, 60, 40), { cov: [64, 20, 36] }));
  it('are wider by the covariance of their edges', () => {
    const cov = densityCovariance(density);
    [3600 / 12 + 64, 20, 1600 / 12 + 36].forEach((value, i) => expect(cov[i]).toBeCloseTo(value, 9));
  });
  it('count alike at points, in areas and over grids', () => {
    const grid: Grid = { width: 50, height: 40, west: -20, north: 60, cellM: 2, values: Float64Array.from({ length: 2000 }, (_, i) => 0.5 + 0.4 * Math.sin((i % 50) / 6)) };
    let [sum, inside] = [0, 0];
    for (let i = 0; i < 8000; i++) {
      const [x, y] = [-20 + (i % 100) + 0.5, 60 - Math.floor(i / 100) - 0.5];
      const value = densityAt(density, x, y);
      sum += value * grid.values[Math.floor((60 - y) / 2) * 50 + Math.floor((x + 20) / 2)]!;
      if (x > 10 && x < 70 && y > -10 && y < 25) inside += value;
    }
    expect(Math.abs(expectation(density, grid) - sum)).toBeLessThan(2e-3);
    expect(Math.abs(massIn(density, box(10, -10, 70, 25)) - inside)).toBeLessThan(3e-3);
  });
});
