import { describe, expect, it } from 'vitest';
import { areaM2, pointInArea, ringAreaM2 } from '../../src/density/area.js';
import { drawnEllipse, noShapes } from '../../src/density/drawnEllipse.js';
import { ellipse95 } from '../../src/density/ellipse.js';
import { gaussianWithDigits } from '../../src/density/gaussianWithDigits.js';
import { massIn } from '../../src/density/massIn.js';
import { massInEllipse } from '../../src/density/massInEllipse.js';
import { region95 } from '../../src/density/region95.js';
import type { Density, Ellipse, HalfAxes } from '../../src/density/types.js';
import { Random } from '../../src/numerics/random.js';
import { area, box, draw, gaussian, one, type Part } from './made.js';

/** Whole seconds at 39° north, turned by the convergence of a frame. */
const SECOND: HalfAxes = [[12.2, 0.3], [-0.35, 15.4]];
const BLUNDER: Part = { kind: 'area', role: 'blunder', weight: 0.05, area: box(-800, -800, 809, 809) };
const L_SHAPE = [[[[0, 0], [800, 0], [800, 400], [400, 400], [400, 800], [0, 800], [0, 0]]]] as const;

const DENSITIES: Array<{ name: string; density: Density; mostMass: number }> = [
  { name: 'two datums that overlap', density: one(gaussian(0, 0, [33, 0, 33], { weight: 0.7 }), gaussian(12, 3, [34, 0, 34], { weight: 0.3 })), mostMass: 0.97 },
  { name: 'two datums far apart', density: one(gaussian(0, 0, [4, 0, 4], { weight: 0.7 }), gaussian(112, 3, [4, 0, 4], { weight: 0.3 })), mostMass: 0.99 },
  { name: 'three datums of different error', density: one(gaussian(0, 0, [33, 0, 33], { weight: 0.6 }), gaussian(25, 30, [33, 0, 33], { weight: 0.3 }), gaussian(1, 1, [64, 0, 64], { weight: 0.1 })), mostMass: 0.99 },
  { name: 'a narrow and a wide part', density: one(gaussian(0, 0, [9, 0, 9], { weight: 0.6 }), gaussian(10, 3, [400, 100, 300], { weight: 0.4 })), mostMass: 0.97 },
  { name: 'two that lean against each other', density: one(gaussian(0, 0, [40, 30, 40], { weight: 0.6 }), gaussian(10, 3, [40, -30, 40], { weight: 0.4 })), mostMass: 0.995 },
  { name: 'whole seconds off a map', density: one(gaussian(0, 0, [33, 0, 33], { rounding: SECOND })), mostMass: 0.97 },
  { name: 'digits of one axis only', density: one(gaussian(0, 0, [33, 0, 33], { rounding: [[0, 50], [0.1, 0]] })), mostMass: 0.98 },
  { name: 'digits far coarser than the receiver', density: one(gaussian(0, 0, [4, 0, 4], { rounding: [[55, 1], [-1, 43]] })), mostMass: 0.998 },
  { name: 'digits and nothing else', density: one(gaussian(0, 0, [1e-4, 0, 1e-4], { rounding: [[55, 1], [-1, 43]] })), mostMass: 0.998 },
  { name: 'coarse digits on one of two datums', density: one(gaussian(0, 0, [1, 0, 1], { weight: 0.7, rounding: SECOND }), gaussian(50, 10, [1, 0, 1], { weight: 0.3, rounding: SECOND })), mostMass: 0.9995 },
  { name: 'a section whose lines are uncertain', density: one(area(box(0, 0, 1609, 1630), { cov: [100, 20, 144] })), mostMass: 0.997 },
  { name: 'a quarter quarter whose lines are very uncertain', density: one(area(box(0, 0, 402, 401), { cov: [2500, 800, 1600] })), mostMass: 0.99 },
  { name: 'an L of three quarters', density: one(area(L_SHAPE, { cov: [100, 0, 100] })), mostMass: 0.9995 },
  { name: 'a disc', density: one({ kind: 'disc', role: 'place', weight: 1, x: 7, y: 9, radiusM: 1609 }), mostMass: 0.96 },
];

/** Square of the distance from an ellipse's centre in units of its half-axes. */
function scaleAt({ x, y, semiMajM, semiMinM, azimDeg }: Ellipse, [px, py]: readonly [number, number]): number {
  const azimuth = (azimDeg * Math.PI) / 180;
  const [dx, dy] = [px - x, py - y];
  return ((dx * Math.sin(azimuth) + dy * Math.cos(azimuth)) / semiMajM) ** 2 + ((dx * Math.cos(azimuth) - dy * Math.sin(azimuth)) / semiMinM) ** 2;
}

describe('region95', () => {
  it.each(DENSITIES)('holds 95 % of draws, and its ellipse holds it: $name', ({ density, mostMass }) => {
    const random = new Random(7);
    const region = region95(density);
    const outline = region.outline();
    const { ellipse, excess } = drawnEllipse(density);
    const n = 40_000;
    let [inside, drawn, differ] = [0, 0, 0];
    for (let i = 0; i < n; i++) {
      const point = draw(density, random);
      if (region.contains(...point)) inside++;
      if (scaleAt(ellipse, point) <= 1) drawn++;
      if (i < 5000 && pointInArea(outline, ...point) !== region.contains(...point)) differ++;
    }
    // Three standard errors of 40,000 draws are 0.0033, the raster's own error 0.002 to 0.003.
    expect(inside / n).toBeGreaterThan(0.945);
    expect(inside / n).toBeLessThan(0.9555);
    expect(differ).toBeLessThan(15);
    expect(Math.abs(areaM2(outline) / region.areaM2 - 1)).toBeLessThan(0.01);
    // The outline lies within the ellipse and touches it; the ellipse says how much it holds.
    const farthest = Math.max(...outline.flat(2).map((point) => scaleAt(ellipse, point)));
    expect(farthest).toBeLessThanOrEqual(1);
    expect(farthest).toBeGreaterThan(0.97);
    expect(Math.abs(excess.massHeld - drawn / n)).toBeLessThan(0.004);
    expect(excess.massHeld).toBeGreaterThan(0.948);
    expect(excess.massHeld).toBeLessThan(mostMass);
    expect(excess.areaRatio).toBeGreaterThan(0.995);
    expect(excess.areaRatio).toBeCloseTo((Math.PI * ellipse.semiMajM * ellipse.semiMinM) / areaM2(outline), 1);
  });

  it('is the 2.4477 σ ellipse of one Gaussian, blunders or not', () => {
    const density = one(gaussian(1000, 2000, [25, 7, 9], { weight: 0.95 }), BLUNDER);
    const region = region95(density);
    expect(region.enclosing()).toEqual(ellipse95(density));
    expect(drawnEllipse(density)).toEqual({ ellipse: ellipse95(density), excess: { massHeld: 0.95, areaRatio: 1 } });
    expect(region.areaM2).toBeCloseTo(Math.PI * -2 * Math.log(0.05) * Math.sqrt(25 * 9 - 49), 9);
    expect(massIn(one(gaussian(1000, 2000, [25, 7, 9])), region.outline())).toBeCloseTo(0.95, 3);
  });

  it('of two like Gaussians far apart is two discs whose sizes have a closed form', () => {
    // Above the level t a part of weight w holds w − T, T = 2πσ²t, within the radius √(2σ² ln(w/T)); the two sum to 0.95.
    const region = region95(one(gaussian(0, 0, [4, 0, 4], { weight: 0.7 }), gaussian(112, 3, [4, 0, 4], { weight: 0.3 })), { perSd: 12, acrossArea: 64 });
    const sizes = region.outline().map((rings) => areaM2([rings])).toSorted((a, b) => b - a);
    const expected = [0.7, 0.3].map((w) => Math.PI * 2 * 4 * Math.log(w / 0.025));
    expect(sizes).toHaveLength(2);
    sizes.forEach((size, i) => expect(size / expected[i]!).toBeCloseTo(1, 2));
  });

  it('of flat ground is the ground drawn in to 95 % of its size', () => {
    const square = region95(one(area(box(0, 0, 1000, 1000))));
    expect(areaM2(square.outline()) / 1e6).toBeCloseTo(0.95, 2);
    for (const [x, y, inside] of [[500, 500, true], [500, 25, true], [25, 500, true], [500, 4, false], [3, 3, false], [996, 500, false]] as const) expect(square.contains(x, y)).toBe(inside);
    const disc = region95(one({ kind: 'disc', role: 'place', weight: 1, x: 0, y: 0, radiusM: 100 })).enclosing();
    expect(disc.semiMajM / (100 * Math.sqrt(0.95))).toBeCloseTo(1, 2);
  });

  it('is never larger than an ellipse that holds as much', () => {
    for (const { density } of DENSITIES) {
      const { semiMajM, semiMinM } = ellipse95(density);
      expect(region95(density).areaM2).toBeLessThan(Math.PI * semiMajM * semiMinM * 1.01);
    }
  });

  it('leaves a hole where a density has one, and its rings run the right way round', () => {
    const ring = Array.from({ length: 12 }, (_, k): Part => gaussian(40 * Math.cos((k * Math.PI) / 6), 40 * Math.sin((k * Math.PI) / 6), [36, 0, 36], { weight: 1 / 12 }));
    const region = region95(one(...ring));
    const [only, ...others] = region.outline();
    expect(others).toHaveLength(0);
    expect(only).toHaveLength(2);
    expect(ringAreaM2(only![0]!)).toBeGreaterThan(0);
    expect(ringAreaM2(only![1]!)).toBeLessThan(0);
    expect(region.contains(0, 0)).toBe(false);
    expect(region.contains(40, 0)).toBe(true);
  });

  it('has a region also where parts are points, or a point lies on a wide part', () => {
    const points = one(gaussian(0, 0, [0, 0, 0], { weight: 0.6 }), gaussian(40, 30, [0, 0, 0], { weight: 0.4 }));
    const { ellipse, excess } = drawnEllipse(points);
    // Shaped like a needle, it has to be long to be wide enough round the farther point, 30 m from the mean: √(1.2² + 2.4²) σ.
    expect(ellipse.semiMajM / 24.5).toBeGreaterThan(2.6);
    expect(ellipse.semiMajM / 24.5).toBeLessThan(2.8);
    expect(excess.massHeld).toBeGreaterThan(0.95);
    expect(region95(points).contains(0, 0) && region95(points).contains(40, 30) && !region95(points).contains(20, 15)).toBe(true);
    const onWide = one(gaussian(0, 0, [1e4, 0, 1e4], { weight: 0.5 }), gaussian(180.3, 40.7, [1e-4, 0, 1e-4], { weight: 0.5 }));
    const region = region95(onWide);
    expect(region.contains(180.3, 40.7)).toBe(true);
    const random = new Random(5);
    let inside = 0;
    for (let i = 0; i < 20_000; i++) if (region.contains(...draw(onWide, random))) inside++;
    expect(Math.abs(inside / 20_000 - 0.95)).toBeLessThan(0.01);
  });

  it('moves with the density and keeps its digits in the millions of metres', () => {
    const parts = (x: number, y: number): Density => one(gaussian(x, y, [33, 5, 20], { weight: 0.7 }), gaussian(x + 20, y - 9, [33, 5, 20], { weight: 0.3 }));
    const [near, far] = [region95(parts(0, 0)), region95(parts(600_000, 4_400_000))];
    expect(far.areaM2).toBeCloseTo(near.areaM2, 3);
    expect(far.enclosing().semiMajM).toBeCloseTo(near.enclosing().semiMajM, 4);
    expect(far.enclosing().x - 600_000).toBeCloseTo(near.enclosing().x, 6);
  });
});

describe('drawnEllipse', () => {
  it('is the same with and without known shapes, and finds a shape that comes again once', () => {
    const shapes = noShapes();
    const section = box(0, 0, 1609, 1630);
    for (const density of [one(gaussian(5, 6, [9, 0, 9], { rounding: SECOND })), one(area(section, { cov: [100, 0, 100] })), one(area(section, { cov: [400, 0, 400] }))]) {
      const first = drawnEllipse(density, shapes);
      expect(drawnEllipse(density, shapes)).toEqual(first);
      expect(drawnEllipse(density)).toEqual(first);
    }
    expect(shapes.gaussians.size).toBe(1);
  });

  it('agrees with the region of a rounded place found for itself', () => {
    const random = new Random(3);
    for (let i = 0; i < 12; i++) {
      const [a, b, turn] = [2 + 40 * random.uniform(), 2 + 40 * random.uniform(), 7 * random.uniform()];
      const density = one(gaussian(3, 4, [16, 0, 16], { rounding: [[a * Math.cos(turn), a * Math.sin(turn)], [-b * Math.sin(turn), b * Math.cos(turn)]] }));
      const own = region95(density).enclosing();
      const { ellipse, excess } = drawnEllipse(density);
      for (const ratio of [ellipse.semiMajM / own.semiMajM, ellipse.semiMinM / own.semiMinM]) {
        expect(ratio).toBeGreaterThan(0.998);
        expect(ratio).toBeLessThan(1.01);
      }
      expect(excess.massHeld).toBeCloseTo(massInEllipse(density, ellipse), 2);
    }
  });
});

describe('gaussianWithDigits', () => {
  it('keeps digits as an even spread where they weigh, as Gaussian where they hardly do, and the covariance either way', () => {
    const fine = gaussianWithDigits({ x: 0, y: 0, weight: 1, cov: [33, 0, 33] }, [[3, 0], [0, 4]]);
    expect(fine.rounding).toBeUndefined();
    expect(fine.cov).toEqual([36, 0, 33 + 16 / 3]);
    const coarse = gaussianWithDigits({ x: 0, y: 0, weight: 1, cov: [33, 0, 33] }, SECOND);
    expect(coarse.rounding).toBe(SECOND);
    expect(coarse.cov[0]).toBeCloseTo(33 + (12.2 ** 2 + 0.35 ** 2) / 3, 9);
  });

  it('costs at most 0.2 % of mass where the digits are taken as Gaussian', () => {
    const half = Math.sqrt(3 * 0.2499);
    const kept = gaussianWithDigits({ x: 0, y: 0, weight: 1, cov: [1 - half ** 2 / 3, 0, 1 - half ** 2 / 3] }, [[half, 0], [0, half]]);
    expect(kept.rounding).toBeUndefined();
    const truth = one({ ...kept, rounding: [[half, 0], [0, half]], role: 'place' });
    expect(Math.abs(massInEllipse(truth, ellipse95(one({ ...kept, role: 'place' }))) - 0.95)).toBeLessThan(0.002);
  });
});
