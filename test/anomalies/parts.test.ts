import { describe, expect, it } from 'vitest';
import { alignments } from '../../src/anomalies/alignment.js';
import { averageBlocks } from '../../src/anomalies/blocks.js';
import { whiteNoise } from '../../src/anomalies/noise.js';
import { circleOutline, contourOutline } from '../../src/anomalies/outline.js';
import { Random } from '../../src/numerics/random.js';
import type { Readings } from '../../src/readings/types.js';

function readingsOf(residual: Float64Array, line: (i: number) => number = () => 0): Readings {
  const count = residual.length;
  return {
    count, x: Float64Array.from({ length: count }, (_, i) => 0.1 * i), y: new Float64Array(count), heightM: new Float64Array(count).fill(1.7),
    timeS: Float64Array.from({ length: count }, (_, i) => 0.1 * i), line: Int32Array.from({ length: count }, (_, i) => line(i)), lineNames: ['1', '2'],
    raw: residual, steps: [], residual, flag: new Uint8Array(count), positionSdM: 0.3, positionCorrelationS: 60, warnings: [],
  };
}

describe('whiteNoise', () => {
  const random = new Random(3);
  const noise = Float64Array.from({ length: 20000 }, () => 0.4 * random.normal());

  it('finds the standard deviation of white noise on a slow wave', () => {
    // The 68 % point of 20,000 values is good to about 1 %.
    const found = whiteNoise(readingsOf(noise.map((value, i) => value + 50 * Math.sin(i / 300))));
    expect(Math.abs(found / 0.4 - 1)).toBeLessThan(0.03);
  });
  it('is at least the rounding of the values', () => {
    expect(whiteNoise(readingsOf(noise.map((_, i) => Math.round(i / 700))))).toBeCloseTo(1 / Math.sqrt(12), 6);
  });
  it('is 0 without readings', () => {
    expect(whiteNoise(readingsOf(new Float64Array(3)))).toBe(0);
  });
});

describe('averageBlocks', () => {
  const options = { blockM: 0.5, gapM: 3, pauseS: 100 };
  it('keeps the sum, leaves NaN out and ends a pass with its line', () => {
    const residual = Float64Array.from({ length: 100 }, (_, i) => (i === 7 ? NaN : i));
    const blocks = averageBlocks(readingsOf(residual, (i) => (i < 50 ? 0 : 1)), options);
    expect(blocks.passes).toBe(2);
    expect(blocks.value.reduce((sum, value, k) => sum + value * blocks.size[k]!, 0)).toBeCloseTo(4950 - 7, 9);
    expect(blocks.size.reduce((a, b) => a + b, 0)).toBe(99);
  });
  it('gives each pass without times a time of its own', () => {
    const blocks = averageBlocks({ ...readingsOf(new Float64Array(100), (i) => (i < 50 ? 0 : 1)), timeS: new Float64Array(100).fill(NaN) }, options);
    expect(new Set(blocks.timeS).size).toBe(2);
  });
});

describe('alignments', () => {
  const options = { toleranceM: 1, gapM: 15, leastMembers: 4, leastLengthM: 30, meanGapM: 12 };
  const pin = (x: number, y: number) => ({ x, y, sdM: 0 });
  it('finds a run among strays, with its strike and its ends', () => {
    const along = Math.PI / 6;
    const pins = [...[0, 9, 20, 29, 41].map((t) => pin(5 + t * Math.sin(along), 3 + t * Math.cos(along))), pin(30, 2), pin(-8, 40)];
    const [run, ...rest] = alignments(pins, options);
    expect(rest).toEqual([]);
    expect(run!.members).toEqual([0, 1, 2, 3, 4]);
    expect(run!.azimuth).toBeCloseTo(along, 9);
    expect(run!.to - run!.from).toBeCloseTo(41, 9);
  });
  it('does not bridge a gap, nor take three for a row', () => {
    expect(alignments([0, 10, 20, 60, 70, 80].map((t) => pin(t, 0)), options)).toEqual([]);
  });
});

describe('contourOutline', () => {
  const size = 60;
  const cone = Float64Array.from({ length: size * size }, (_, k) => Math.max(0, 20 - Math.hypot((k % size) + 0.5 - 30, Math.floor(k / size) + 0.5 - 30)));
  const grid = { width: size, height: size, west: 100, north: 500, cellM: 1, values: cone };
  const input = { x: 130, y: 470, radiusM: 28, levelNT: 10, background: () => 0, owns: () => true, whole: false };
  it('is the contour of the grid: a circle of 10 m around a cone', () => {
    expect(contourOutline(grid, input)!.areaM2 / (Math.PI * 100)).toBeCloseTo(1, 1);
  });
  it('keeps to the part that belongs to the source', () => {
    expect(contourOutline(grid, { ...input, owns: (x) => x < 130 })!.areaM2 / (Math.PI * 50)).toBeCloseTo(1, 1);
  });
  it('is null where nothing reaches the level, and a circle stands in', () => {
    expect(contourOutline(grid, { ...input, levelNT: 25 })).toBeNull();
    expect(circleOutline(1, 2, 3).areaM2 / (Math.PI * 9)).toBeCloseTo(1, 1);
  });
});
