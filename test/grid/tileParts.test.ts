import { describe, expect, it } from 'vitest';
import { bucketSamples, samplesWithin } from '../../src/grid/buckets.js';
import { cellMeans } from '../../src/grid/cellMeans.js';
import { coarseSurface, surfaceAt } from '../../src/grid/coarseSurface.js';
import { anyGap, gapsOf } from '../../src/grid/gaps.js';
import { robustRange } from '../../src/grid/robustRange.js';
import { fitTrend, trendAt } from '../../src/grid/trend.js';
import { solveTile } from '../../src/grid/solveTile.js';
import { Random } from '../../src/numerics/random.js';

const frame = { width: 9, height: 7, west: 1000, north: 2070, cellM: 10 };
const random = new Random(5);
const places = (count: number) => {
  const x = Float64Array.from({ length: count }, () => 990 + 110 * random.uniform());
  const y = Float64Array.from({ length: count }, () => 1990 + 90 * random.uniform());
  return { x, y, value: x.map((v, n) => 3 + 2 * (v - 1000) - y[n]!) };
};

describe('bucketSamples', () => {
  it('finds the readings of any rectangle, as looking at all does', () => {
    const samples = places(300);
    const buckets = bucketSamples(samples, new Float64Array(0), frame);
    const weighted = bucketSamples(samples, samples.value.map((v) => v / 7), frame);
    for (let trial = 0; trial < 40; trial++) {
      const tile = { width: 1 + random.integer(30), height: 1 + random.integer(30), west: 990 + 60 * random.uniform(), north: 2020 + 60 * random.uniform(), cellM: 2.5 };
      const inside = [...samples.x.keys()].filter((n) => {
        const [x, y] = [samples.x[n]!, samples.y[n]!];
        const kept = x >= 1000 && x < 1090 && y > 2000 && y <= 2070;
        return kept && x >= tile.west && x <= tile.west + tile.width * 2.5 && y <= tile.north && y >= tile.north - tile.height * 2.5;
      });
      const { x, y, value } = samplesWithin(buckets, tile);
      expect([...x].toSorted()).toEqual(inside.map((n) => samples.x[n]!).toSorted());
      x.forEach((v, n) => expect(value[n]).toBe(3 + 2 * (v - 1000) - y[n]!));
      expect(samplesWithin(buckets, tile).weight.length).toBe(0);
      expect(samplesWithin(weighted, tile)).toEqual({ x, y, value, weight: value.map((v) => v / 7) });
    }
  });
});

describe('cellMeans', () => {
  it('are the means of values and of places', () => {
    const samples = { x: [1001, 1003, 1085, NaN, 1002, 1000], y: [2069, 2067, 2001, 2001, 2068, 1900], value: [4, 6, 9, 5, NaN, 1] };
    const means = cellMeans(samples, [], frame);
    expect([...means.cell]).toEqual([0, 6 * 9 + 8]);
    expect([...means.value]).toEqual([5, 9]);
    expect(means.x[0]).toBeCloseTo(1002, 9);
    expect(means.y[0]).toBeCloseTo(2068, 9);
    const weighted = cellMeans(samples, [3, 1, 0.01, 1, 1, 1], frame);
    expect(weighted.value[0]).toBeCloseTo((3 * 4 + 6) / 4, 12);
    expect(weighted.x[0]).toBeCloseTo(1001.5, 9);
    expect(weighted.y[0]).toBeCloseTo(2068.5, 9);
    expect(weighted.value[1]).toBe(9);
  });
});

describe('fitTrend', () => {
  it('gives a plane back, and a level where the places lie on a line', () => {
    const samples = places(50);
    const trend = fitTrend(samples, 1);
    samples.x.forEach((x, n) => expect(trendAt(trend, x, samples.y[n]!)).toBeCloseTo(samples.value[n]!, 8));
    const line = fitTrend({ x: [0, 1, 2], y: [0, 1, 2], value: [1, 2, 6] }, 1);
    expect(line).toMatchObject({ onLine: true, level: 3, perEastM: 0, perNorthM: 0 });
  });
});

describe('coarseSurface', () => {
  it('passes through the means at their own places, and through a plane between', async () => {
    const means = cellMeans(places(400), [], frame);
    const level = { x: 0, y: 0, level: 0, perEastM: 0, perNorthM: 0, onLine: false };
    const surface = await coarseSurface(means, { frame, trend: level, tension: 0, spacingM: 20, range: 250, solve: solveTile });
    for (let trial = 0; trial < 20; trial++) {
      const [x, y] = [1025 + 40 * random.uniform(), 2025 + 20 * random.uniform()];
      // The coarse solver may leave a thousandth of the range of about 250.
      expect(Math.abs(surfaceAt(surface, x, y) - (3 + 2 * (x - 1000) - y))).toBeLessThan(0.5);
    }
  });
});

describe('gaps', () => {
  it('are the wide cells that no reading reaches', () => {
    const means = cellMeans({ x: [1005, 1015], y: [2065, 2065], value: [1, 1] }, [], frame);
    const gaps = gapsOf(means, frame, 20);
    // The readings' cells are columns 0 and 1 of the first row; (2 + √2) cells further nothing is reached.
    expect([...gaps.gap.subarray(0, 9)]).toEqual([0, 0, 0, 0, 0, 1, 1, 1, 1]);
    expect(anyGap(gaps, [0, 0, 25, 5], 2)).toBe(false);
    expect(anyGap(gaps, [0, 0, 26, 5], 2)).toBe(true);
    expect(anyGap(gaps, [-50, -50, 5, 5], 2)).toBe(false);
  });
});

describe('robustRange', () => {
  it.each([
    [[], 0], [[5], 0], [[5, 9], 4], [[1, 2, 99999, 3, 4], 2], [[NaN, 1, 2, 3, 4, NaN, 5], 2], [[0, 10, 10, 0, -10, -10], 20],
  ])('of %j is %f', (values, range) => expect(robustRange(values)).toBe(range));
});
