import { describe, expect, it } from 'vitest';
import { areaBounds, areaM2, areaMoments, pointInArea, ringAreaM2 } from '../../src/density/area.js';
import { areaFromRings } from '../../src/density/areaFromRings.js';
import { coverage } from '../../src/density/coverage.js';
import type { Area } from '../../src/density/types.js';
import { Random } from '../../src/numerics/random.js';

type P = [number, number];
const box = (w: number, s: number, e: number, n: number): P[] => [[w, s], [e, s], [e, n], [w, n], [w, s]];
const withHole: Area = [[box(0, 0, 10, 8), box(2, 2, 5, 6).toReversed()], [box(20, 0, 22, 1)]];
const FAR = 4_500_000;
const far: Area = [[box(FAR, FAR, FAR + 10, FAR + 8)]];

describe('area', () => {
  it('leaves holes out, however they run and wherever the frame has its origin', () => {
    expect(areaM2(withHole)).toBe(80 - 12 + 2);
    expect(areaM2([[box(0, 0, 10, 8).toReversed(), box(2, 2, 5, 6)]])).toBe(68);
    expect(areaM2(far)).toBe(80);
    expect(areaM2([])).toBe(0);
    expect(areaBounds(withHole)).toEqual({ west: 0, south: 0, east: 22, north: 8 });
  });

  it('tells in from out', () => {
    for (const [x, y, inside] of [[1, 1, true], [3, 3, false], [6, 3, true], [21, 0.5, true], [15, 0.5, false], [-1, 3, false]] as const) {
      expect(pointInArea(withHole, x, y)).toBe(inside);
    }
  });

  it('has the moments of a rectangle: a²/12 on each axis', () => {
    const m = areaMoments(far);
    expect(m.x).toBeCloseTo(FAR + 5, 6);
    expect(m.y).toBeCloseTo(FAR + 4, 6);
    expect(m.cov[0]).toBeCloseTo(100 / 12, 8);
    expect(m.cov[1]).toBeCloseTo(0, 8);
    expect(m.cov[2]).toBeCloseTo(64 / 12, 8);
  });

  it('has the moments that its points have, holes and several polygons included', () => {
    const area: Area = [[[[0, 0], [9, 1], [7, 6], [2, 8]], [[3, 2], [5, 2], [4, 4]]], [box(12, 3, 14, 9)]];
    const random = new Random(5);
    const kept: P[] = [];
    for (let i = 0; i < 200_000; i++) {
      const p: P = [14 * random.uniform(), 9 * random.uniform()];
      if (pointInArea(area, ...p)) kept.push(p);
    }
    const mean = (f: (p: P) => number): number => kept.reduce((sum, p) => sum + f(p), 0) / kept.length;
    const m = areaMoments(area);
    expect((kept.length / 200_000) * 126).toBeCloseTo(m.areaM2, 0);
    expect(Math.abs(mean((p) => p[0]) - m.x)).toBeLessThan(0.05);
    expect(Math.abs(mean((p) => (p[0] - m.x) * (p[1] - m.y)) - m.cov[1])).toBeLessThan(0.15);
  });
});

describe('areaFromRings', () => {
  it('finds holes, and islands in holes, in any order of rings', () => {
    const rings = [box(0, 0, 100, 100), box(10, 10, 60, 60), box(20, 20, 30, 30), box(70, 70, 80, 80), box(200, 0, 210, 10)];
    for (const order of [[0, 1, 2, 3, 4], [4, 3, 2, 1, 0], [2, 0, 4, 1, 3]]) {
      const area = areaFromRings(order.map((i) => rings[i]!));
      expect(area).toHaveLength(3);
      expect(areaM2(area)).toBe(10_000 - 2500 - 100 + 100 + 100);
      for (const [outer, ...holes] of area) {
        expect(ringAreaM2(outer!)).toBeGreaterThan(0);
        for (const hole of holes) expect(ringAreaM2(hole)).toBeLessThan(0);
      }
    }
  });

  it('keeps polygons that touch apart, closes open rings and drops empty ones', () => {
    const area = areaFromRings([box(0, 0, 5, 5), box(5, 0, 10, 5), [[1, 1], [2, 2], [1, 1]], [[1, 1], [1, 2], [2, 1]]]);
    expect(area).toHaveLength(2);
    expect(area[0]![1]![0]).toEqual(area[0]![1]!.at(-1));
    expect(areaM2(area)).toBe(49.5);
  });
});

describe('coverage', () => {
  const lattice = { width: 9, height: 7, west: -1.3, north: 9.2, cellM: 1.7 };

  it('sums to the area where the grid holds all of it', () => {
    const area: Area = [[[[0, 0], [9, 1], [7, 6], [2, 8]], [[3, 2], [5, 2], [4, 4]]]];
    const shares = coverage(area, lattice);
    expect(shares.reduce((a, b) => a + b, 0) * 1.7 ** 2).toBeCloseTo(areaM2(area), 9);
    expect(Math.max(...shares)).toBe(1);
  });

  it('agrees cell by cell with points thrown into the cells, on a shape that leaves the grid on all sides', () => {
    const area: Area = [[[[-9, 3], [3, -4], [20, 6], [5, 14], [6, 6]], [[3, 2], [5, 2.5], [4, 4]]]];
    const shares = coverage(area, lattice);
    const n = 40;
    for (let row = 0; row < 7; row++) {
      for (let col = 0; col < 9; col++) {
        let hits = 0;
        for (let i = 0; i < n * n; i++) {
          const x = -1.3 + 1.7 * (col + ((i % n) + 0.5) / n);
          if (pointInArea(area, x, 9.2 - 1.7 * (row + (Math.floor(i / n) + 0.5) / n))) hits++;
        }
        expect(Math.abs(shares[row * 9 + col]! - hits / (n * n))).toBeLessThan(0.03);
      }
    }
  });

  it('is zero for an area that lies elsewhere', () => {
    for (const [dx, dy] of [[100, 0], [-100, 0], [0, 100], [0, -100]] as const) {
      expect(Math.max(...coverage([[box(dx, dy, dx + 5, dy + 5)]], lattice))).toBe(0);
    }
  });
});
