import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';
import { cellOrder, plainOrder } from '../../src/plan/plainOrder.js';
import type { Step } from '../../src/plan/tour.js';
import { deadLength, walkOrder, type Segment, type WayCost } from '../../src/plan/walkOrder.js';

const straight: WayCost = (ax, ay, bx, by) => Math.hypot(bx - ax, by - ay);

function scattered(count: number, seed: number): Segment[] {
  const random = new Random(seed);
  return Array.from({ length: count }, () => {
    const [ax, ay, angle] = [random.uniform() * 100, random.uniform() * 100, random.uniform() * 6.3];
    return { ax, ay, bx: ax + 30 * Math.cos(angle), by: ay + 30 * Math.sin(angle) };
  });
}

const inOrder = (count: number): Step[] => Array.from({ length: count }, (_, index) => ({ index, reversed: false }));

/** Shortest dead way by trying every order and every direction. */
function shortest(segments: readonly Segment[], options: { cost: WayCost; from?: readonly [number, number] }): number {
  let least = Infinity;
  const extend = (walk: readonly Step[], open: readonly number[]): void => {
    if (open.length === 0) least = Math.min(least, deadLength(segments, walk, options));
    for (const index of open) for (const reversed of [false, true]) extend([...walk, { index, reversed }], open.filter((other) => other !== index));
  };
  extend([], segments.map((_, i) => i));
  return least;
}

function expectEveryOnce(walk: readonly Step[], count: number): void {
  expect(walk.map(({ index }) => index).toSorted((a, b) => a - b)).toEqual(Array.from({ length: count }, (_, i) => i));
}

describe('walkOrder', () => {
  it('is the shortest of all walks over five lines', () => {
    for (let seed = 1; seed <= 12; seed++) {
      const segments = scattered(5, seed);
      const walk = walkOrder(segments, [inOrder(5)], { cost: straight });
      expectEveryOnce(walk, 5);
      expect(deadLength(segments, walk, { cost: straight })).toBeCloseTo(shortest(segments, { cost: straight }), 6);
    }
  });
  it('is so from where the walker stands, and where ways cost more than the straight distance', () => {
    const wall: WayCost = (ax, ay, bx, by) => (ax < 50) === (bx < 50) ? straight(ax, ay, bx, by) : straight(ax, ay, bx, by) + 200;
    for (let seed = 20; seed <= 28; seed++) {
      const segments = scattered(5, seed);
      const options = { cost: wall, from: [-40, 160] as const };
      const walk = walkOrder(segments, [inOrder(5)], options);
      expect(deadLength(segments, walk, options)).toBeCloseTo(shortest(segments, options), 6);
    }
  });
  it('is never longer than an order given, and the same each time', () => {
    for (const count of [1, 2, 3, 40, 150]) {
      const segments = scattered(count, count);
      const given = inOrder(count);
      const walk = walkOrder(segments, [given], { cost: straight });
      expectEveryOnce(walk, count);
      expect(deadLength(segments, walk, { cost: straight })).toBeLessThanOrEqual(deadLength(segments, given, { cost: straight }));
      expect(walkOrder(segments, [given], { cost: straight })).toEqual(walk);
    }
  });
  it('keeps to and fro over a plain rectangle, where nothing is shorter', () => {
    const segments = Array.from({ length: 60 }, (_, i) => ({ ax: 0, ay: 8 * i, bx: 500, by: 8 * i }));
    const plain = plainOrder(segments.map(({ ay }) => ({ v: ay, u0: 0, u1: 500 })));
    const walk = walkOrder(segments, [plain], { cost: straight });
    expect(deadLength(segments, walk, { cost: straight })).toBeCloseTo(59 * 8, 6);
  });
  it('has nothing to walk where there is nothing', () => {
    expect(walkOrder([], [[]], { cost: straight })).toEqual([]);
  });
});

describe('plain orders', () => {
  const piece = (v: number, u0: number, u1: number) => ({ v, u0, u1 });
  /** Lines at 0 to 30 with a pond from 40 to 60 on the two in the middle. */
  const pieces = [piece(0, 0, 100), piece(10, 0, 40), piece(10, 60, 100), piece(20, 0, 40), piece(20, 60, 100), piece(30, 0, 100)];
  it('go line by line', () => {
    expect(plainOrder(pieces).map(({ index, reversed }) => `${index}${reversed ? '-' : '+'}`)).toEqual(['0+', '2-', '1-', '3+', '4+', '5-']);
  });
  it('go cell by cell', () => {
    const walk = cellOrder(pieces);
    expectEveryOnce(walk, 6);
    const beside = walk.map(({ index }) => index);
    expect(Math.abs(beside.indexOf(1) - beside.indexOf(3))).toBe(1);
    expect(Math.abs(beside.indexOf(2) - beside.indexOf(4))).toBe(1);
  });
});
