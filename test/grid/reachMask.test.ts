import { describe, expect, it } from 'vitest';
import { binSamples, indexByCell } from '../../src/grid/binSamples.js';
import { gridFrame } from '../../src/grid/gridFrame.js';
import { linearOnTriangles } from '../../src/grid/linearOnTriangles.js';
import { distanceToOccupied, reachMask } from '../../src/grid/reachMask.js';
import { Random } from '../../src/numerics/random.js';

const frame = gridFrame({ west: 0, south: 0, east: 37, north: 23 }, 1);

function points(count: number, seed: number) {
  const random = new Random(seed);
  const x = Float64Array.from({ length: count }, () => 37 * random.uniform());
  const y = Float64Array.from({ length: count }, () => 23 * random.uniform());
  return { x, y, value: x.map((v, n) => 3 + 2 * v - y[n]!) };
}

describe('distanceToOccupied', () => {
  it.each([1, 2, 7, 60])('agrees with looking at all %i places', (count) => {
    const samples = points(count, count);
    const index = indexByCell(samples, frame);
    const squared = distanceToOccupied(index, frame);
    const occupied = [...squared.keys()].filter((k) => index.start[k + 1]! > index.start[k]!);
    squared.forEach((d2, k) => {
      const [i, j] = [k % 37, Math.floor(k / 37)];
      expect(d2).toBe(Math.min(...occupied.map((o) => (o % 37 - i) ** 2 + (Math.floor(o / 37) - j) ** 2)));
    });
  });

  it('is infinite where there is nothing', () => {
    const nothing = distanceToOccupied(indexByCell({ x: [], y: [], value: [] }, frame), frame);
    expect(nothing.every((d) => d === Infinity)).toBe(true);
  });
});

describe('reachMask', () => {
  it.each([0.3, 1, 2.5, 6])('holds the cells within %f of a reading, measured from the reading', (reachM) => {
    const samples = points(20, 5);
    const mask = reachMask(indexByCell(samples, frame), frame, reachM);
    mask.forEach((inside, k) => {
      const cx = k % 37 + 0.5;
      const cy = 23 - Math.floor(k / 37) - 0.5;
      const nearest = Math.min(...Array.from(samples.x, (x, n) => Math.hypot(x - cx, samples.y[n]! - cy)));
      expect(inside).toBe(nearest <= reachM ? 1 : 0);
    });
  });
});

/** Pins of readings in one cell, a tenth of a cell apart. */
const bin = (value: number[]) => {
  const samples = { x: value.map((_, n) => 3.1 + n / 10), y: value.map(() => 2.5), value };
  return binSamples(indexByCell(samples, frame), { value: samples.value, weight: [] }, frame.width);
};

describe('binSamples', () => {
  it('takes value and place from the same middle half', () => {
    const x = [10.1, 10.2, 10.3, 10.4, 10.5, 10.6, 10.7, 10.9];
    const samples = { x, y: x.map(() => 5.5), value: x.map((v) => 100 * v) };
    const pins = binSamples(indexByCell(samples, frame), { value: samples.value, weight: [] }, frame.width);
    expect([...pins.node]).toEqual([17 * 37 + 10]);
    expect(pins.value[0]).toBeCloseTo(100 * (10.5 + pins.dx[0]!), 9);
    expect(pins.weight[0]).toBe(4);
    expect(pins.dy[0]).toBeCloseTo(0, 12);
  });

  it('gives three readings their median, two their mean', () => {
    expect(bin([5, 900, 6]).value[0]).toBe(6);
    expect(bin([5, 900, 6]).dx[0]).toBeCloseTo(-0.2, 12);
    expect(bin([4, 6]).value[0]).toBe(5);
    // Past the limit of insertion the order is the same.
    expect(bin(Array.from({ length: 9 }, (_, n) => (n * 5) % 9)).value[0]).toBe(4);
  });

  it('gives many readings in a cell what few give', () => {
    const random = new Random(3);
    const value = Array.from({ length: 500 }, () => random.normal());
    const samples = { x: value.map(() => 3.5), y: value.map(() => 2.5), value };
    const sorted = value.toSorted((a, b) => a - b).slice(125, 375);
    expect(binSamples(indexByCell(samples, frame), { value: samples.value, weight: [] }, frame.width).value[0]).toBeCloseTo(sorted.reduce((sum, v) => sum + v, 0) / 250, 12);
  });
});

describe('linearOnTriangles', () => {
  it('gives a plane back inside the hull, and NaN outside', () => {
    const random = new Random(8);
    const x = [0.5, 36.5, 0.5, 36.5, ...Array.from({ length: 30 }, () => 37 * random.uniform())];
    const y = [0.5, 0.5, 22.5, 15.5, ...Array.from({ length: 30 }, () => 15 * random.uniform())];
    const { values } = linearOnTriangles({ x, y, value: x.map((v, n) => 3 + 2 * v - y[n]!) }, frame);
    values.forEach((value, k) => {
      const cx = k % 37 + 0.5;
      const cy = 23 - Math.floor(k / 37) - 0.5;
      // The hull's northern edge runs from (0.5, 22.5) to (36.5, 15.5).
      const below = cy <= 22.5 - ((cx - 0.5) * 7) / 36 + 1e-9;
      if (below) expect(value).toBeCloseTo(3 + 2 * cx - cy, 8);
      else expect(value).toBeNaN();
    });
  });

  it('has no triangle on one line', () => {
    const { values } = linearOnTriangles({ x: [1, 2, 3], y: [1, 1, 1], value: [1, 2, 3] }, frame);
    expect(values.every(Number.isNaN)).toBe(true);
  });
});
