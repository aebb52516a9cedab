import { describe, expect, it } from 'vitest';
import { areaM2, pointInArea } from '../../src/density/area.js';
import { massIn } from '../../src/density/massIn.js';
import type { Area, Density } from '../../src/density/types.js';
import { lineFrame } from '../../src/plan/lineFrame.js';
import { convexHull, halfTurn, minimumRectangle } from '../../src/plan/minimumRectangle.js';
import { OpenWays } from '../../src/plan/openWays.js';
import { linePieces, linePlaces, parallelLines } from '../../src/plan/parallelLines.js';
import { searchArea } from '../../src/plan/searchArea.js';
import { clipAreas } from '../../src/site/clipAreas.js';
import { rectangle, ring, turned } from './testSite.js';

const gaussian = (weight: number, x: number, cov: readonly [number, number, number]) => ({ role: 'place', kind: 'gaussian', weight, x, y: 0, cov }) as const;

describe('lineFrame', () => {
  it('runs along the azimuth and across it to the right, there and back', () => {
    const east = lineFrame(90, [100, 200]);
    expect(east.toUV(110, 200)[0]).toBeCloseTo(10, 12);
    expect(east.toUV(100, 195)[1]).toBeCloseTo(5, 12);
    const slanted = lineFrame(37, [5e5, 4e6]);
    const [x, y] = slanted.toXY(...slanted.toUV(500_321, 4_000_123));
    expect(x).toBeCloseTo(500_321, 8);
    expect(y).toBeCloseTo(4_000_123, 8);
  });
});

describe('minimumRectangle', () => {
  it.each([0, 12.5, 45, 89, 90, 133, 179])('finds a turned rectangle again: %d°', (azim) => {
    const { azimDeg, lengthM, widthM } = minimumRectangle(turned(rectangle(0, 0, 40, 100), azim));
    expect(Math.abs(Math.sin(((azimDeg - azim) * Math.PI) / 180))).toBeLessThan(1e-9);
    expect(lengthM).toBeCloseTo(100, 6);
    expect(widthM).toBeCloseTo(40, 6);
  });
  it('is as small as that of a right-angled triangle by hand', () => {
    // Legs 3 and 4: along the legs the box has 12; along the hypotenuse 5 × 2.4 = 12 as well; the least azimuth is taken.
    const { lengthM, widthM } = minimumRectangle([[ring([0, 0], [3, 0], [0, 4])]]);
    expect(lengthM * widthM).toBeCloseTo(12, 9);
  });
  it('has a hull without collinear corners', () => {
    expect(convexHull([[0, 0], [1, 0], [2, 0], [2, 2], [1, 1], [0, 2], [0, 1]])).toHaveLength(4);
    expect(() => minimumRectangle([[ring([0, 0], [1, 1], [2, 2])]])).toThrow('no extent');
  });
  it('keeps azimuths in [0, 180)', () => {
    expect([180, -10, 359, 179.9999999999].map(halfTurn)).toEqual([0, 170, 179, 0]);
  });
});

describe('parallelLines', () => {
  it('needs as many lines as spacings fit, centred', () => {
    expect(linePlaces(0, 40, 10)).toEqual([5, 15, 25, 35]);
    expect(linePlaces(0, 41, 10)).toEqual([0.5, 10.5, 20.5, 30.5, 40.5]);
    expect(linePlaces(0, 3, 10)).toEqual([1.5]);
  });
  it('cuts lines at holes and notches', () => {
    const withHole: Area = [[...rectangle(0, 0, 100, 40)[0]!, ring([30, 10], [30, 30], [50, 30], [50, 10])]];
    expect(linePieces(withHole, 20)).toEqual([{ v: 20, u0: 0, u1: 30 }, { v: 20, u0: 50, u1: 100 }]);
    expect(parallelLines(withHole, 10).map(({ v }) => v)).toEqual([5, 15, 15, 25, 25, 35]);
  });
  it('counts corners on the line once, and level edges not at all', () => {
    const diamond: Area = [[ring([0, 10], [10, 0], [20, 10], [10, 20])]];
    expect(linePieces(diamond, 10)).toEqual([{ v: 10, u0: 0, u1: 20 }]);
    expect(linePieces(diamond, 0)).toEqual([]);
    expect(linePieces(rectangle(0, 0, 10, 10), 0)).toEqual([{ v: 0, u0: 0, u1: 10 }]);
    expect(linePieces(rectangle(0, 0, 10, 10), 10)).toEqual([]);
  });
  it('walks through an edge that two polygons share', () => {
    expect(linePieces([...rectangle(0, 0, 10, 10), ...rectangle(10, 0, 25, 10)], 5)).toEqual([{ v: 5, u0: 0, u1: 25 }]);
  });
});

describe('searchArea', () => {
  const everywhere = rectangle(-1e4, -1e4, 1e4, 1e4);
  it('holds the stated share, and little more', () => {
    const density: Density = { parts: [gaussian(1, 0, [900, 200, 100])] };
    for (const mass of [0.5, 0.95, 0.99]) {
      const held = massIn(density, searchArea([density], everywhere, { mass, marginM: 0 }));
      expect(held).toBeGreaterThanOrEqual(mass);
      expect(held).toBeLessThan(mass + 0.002);
    }
  });
  it('keeps the margin on all sides', () => {
    const density: Density = { parts: [gaussian(1, 0, [900, 200, 100])] };
    const [core, grown] = [0, 15].map((marginM) => searchArea([density], everywhere, { mass: 0.95, marginM }));
    for (const [x, y] of core![0]![0]!) {
      // Corners of the tangent polygon lie outside the ellipse by up to a part in a thousand of its half-axis.
      for (let i = 0; i < 24; i++) expect(pointInArea(grown!, x + 14.8 * Math.cos(i), y + 14.8 * Math.sin(i))).toBe(true);
    }
    // Steiner's formula: A + margin × circumference + π margin²; circumference of the ellipse by Ramanujan's approximation.
    const s2 = -2 * Math.log(0.05);
    const [a, b] = [500 + Math.sqrt(400 ** 2 + 200 ** 2), 500 - Math.sqrt(400 ** 2 + 200 ** 2)].map((variance) => Math.sqrt(variance * s2)) as [number, number];
    const h = ((a - b) / (a + b)) ** 2;
    const circumference = Math.PI * (a + b) * (1 + (3 * h) / (10 + Math.sqrt(4 - 3 * h)));
    expect(areaM2(grown!) / (Math.PI * a * b + 15 * circumference + Math.PI * 225)).toBeCloseTo(1, 2);
  });
  it('takes every place of a mixture, leaves blunders out, keeps to open ground', () => {
    const density: Density = { parts: [gaussian(0.6, -100, [4, 0, 4]), gaussian(0.3, 100, [4, 0, 4]), { role: 'blunder', kind: 'disc', weight: 0.1, x: 0, y: 0, radiusM: 1600 }] };
    expect(searchArea([density], everywhere, { mass: 0.95, marginM: 5 })).toHaveLength(2);
    const half = searchArea([density], rectangle(0, -50, 200, 0), { mass: 0.95, marginM: 5 });
    expect(half).toHaveLength(1);
    expect(areaM2(half)).toBeCloseTo((Math.PI * (2 * 2.4477 + 5) ** 2) / 2, 0);
  });
  it('grows an area with its margin', () => {
    const density: Density = { parts: [{ role: 'place', kind: 'area', weight: 1, area: rectangle(0, 0, 100, 50) }] };
    // Steiner's formula again: 5000 + 10 × 300 + π 100.
    expect(areaM2(searchArea([density], everywhere, { mass: 0.95, marginM: 10 }))).toBeCloseTo(5000 + 3000 + 314.16, -1);
  });
});

describe('OpenWays', () => {
  it('goes straight on convex ground', () => {
    expect(new OpenWays(rectangle(0, 0, 100, 100)).way(0, 0, 30, 40)).toEqual({ lengthM: 50, kind: 'straight' });
  });
  it('goes round a pond by its corner', () => {
    const ways = new OpenWays(clipAreas('difference', rectangle(0, 0, 100, 100), rectangle(40, 20, 60, 80)));
    const { lengthM, kind } = ways.way(0, 50, 100, 50);
    expect(kind).toBe('round');
    expect(lengthM).toBeCloseTo(2 * Math.hypot(40, 30) + 20, 6);
    expect(ways.way(100, 50, 0, 50).lengthM).toBe(lengthM);
    expect(ways.way(0, 10, 100, 10)).toEqual({ lengthM: 100, kind: 'straight' });
    expect(ways.way(40, 20, 40, 80).kind).toBe('straight');
  });
  it('goes round a notch in the parcel', () => {
    const ways = new OpenWays([[ring([0, 0], [100, 0], [100, 100], [60, 100], [60, 20], [40, 20], [40, 100], [0, 100])]]);
    expect(ways.way(40, 100, 60, 100)).toEqual({ lengthM: 80 + 20 + 80, kind: 'round' });
  });
  it('says where no way leads', () => {
    const ways = new OpenWays([...rectangle(0, 0, 10, 10), ...rectangle(20, 0, 30, 10)]);
    expect(ways.way(5, 5, 25, 5)).toEqual({ lengthM: 20, kind: 'outside' });
    expect(ways.cost(5, 5, 25, 5)).toBe(40);
    expect(ways.way(21, 1, 29, 1).kind).toBe('straight');
  });
  it('keeps the ways of a wiggly shore, with the corners thinned', () => {
    const shore = Array.from({ length: 2000 }, (_, i): [number, number] => {
      const a = (-2 * Math.PI * i) / 2000;
      const r = 50 + Math.sin(40 * a);
      return [100 + r * Math.cos(a), 100 + r * Math.sin(a)];
    });
    const ways = new OpenWays([[...rectangle(0, 0, 200, 200)[0]!, ring(...shore)]]);
    const { lengthM } = ways.way(0, 100, 200, 100);
    // Two tangents and an arc round a disc of radius 50: 2 √(100² − 50²) + 50 (π − 2 arccos ½).
    expect(lengthM).toBeGreaterThan(2 * Math.sqrt(7500) + 50 * (Math.PI / 3) - 4);
    expect(lengthM).toBeLessThan(2 * Math.sqrt(7500) + 50 * (Math.PI / 3) + 4);
  });
});
