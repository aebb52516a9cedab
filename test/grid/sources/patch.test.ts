import { describe, expect, it } from 'vitest';
import { DEEP_SHARE, LEVEL_SHARE } from '../../../src/grid/sources/layer.js';
import { patchOpenness, patchValue, solvePatch } from '../../../src/grid/sources/patch.js';
import { placeReadings, readingsWithin } from '../../../src/grid/sources/placedReadings.js';
import { Random } from '../../../src/numerics/random.js';

const layer = { depthM: 4, deepM: 30 };
const random = new Random(11);
const x = Float64Array.from({ length: 60 }, () => 40 * random.uniform());
const y = Float64Array.from({ length: 60 }, () => 40 * random.uniform());
const up = Float64Array.from({ length: 60 }, () => random.uniform() - 0.5);
/** Field of a pole 6 m below the level. */
const field = (px: number, py: number, height: number): number => 4_000 * (6 + height) / Math.hypot(px - 19, py - 23, 6 + height) ** 3;
const value = x.map((px, n) => field(px, y[n]!, up[n]!));
const BOUNDS = { west: 0, south: 0, east: 40, north: 40 };
const readings = placeReadings({ x, y, up, value }, BOUNDS, 0.5);
const all = readingsWithin(readings, BOUNDS, 1_000);

describe('placeReadings', () => {
  it('keeps place, height and value of a reading that is alone in its square', () => {
    expect(all.length).toBe(60);
    for (const n of all) {
      const own = x.findIndex((px) => Math.abs(px - readings.x[n]!) < 1e-9);
      expect(own).toBeGreaterThanOrEqual(0);
      expect(readings.y[n]).toBeCloseTo(y[own]!, 9);
      expect(readings.up[n]).toBeCloseTo(up[own]!, 12);
      expect(readings.value[n]).toBe(value[own]);
    }
  });

  it('takes value, place and height from the middle half of a square', () => {
    const crowd = placeReadings({ x: [1, 1.1, 1.2, 1.3], y: [1, 1, 1, 1], up: [9, 2, 4, 9], value: [-1_000, 5, 7, 1_000] }, { west: 0, south: 0, east: 2, north: 2 }, 2);
    expect([crowd.value[0], crowd.up[0], crowd.weight[0]]).toEqual([6, 3, 2]);
    expect(crowd.x[0]).toBeCloseTo(1.15, 12);
  });

  it('finds exactly the readings of a window, and the nearest of them where there are too many', () => {
    const window = { west: 7, south: 3, east: 29, north: 31 };
    const found = readingsWithin(readings, window, 1_000);
    const inside = [...all].filter((n) => readings.x[n]! >= 7 && readings.x[n]! <= 29 && readings.y[n]! >= 3 && readings.y[n]! <= 31);
    expect([...found]).toEqual(inside);
    const few = readingsWithin(readings, window, 5);
    const distance = (n: number): number => Math.hypot(readings.x[n]! - 18, readings.y[n]! - 17);
    const limit = Math.max(...Array.from(few, distance));
    expect(inside.filter((n) => distance(n) < limit - 1e-12).length).toBe(4);
  });
});

describe('solvePatch', () => {
  const patch = solvePatch(readings, all, { layer, noiseNT: 0 });

  it('gives readings on the level back, and the field at other heights brought to the level', () => {
    const level = solvePatch(placeReadings({ x, y, value: x.map((px, n) => field(px, y[n]!, 0)) }, BOUNDS, 0.5), all, { layer, noiseNT: 0 });
    for (let n = 0; n < 60; n++) {
      expect(Math.abs(patchValue(level, x[n]!, y[n]!) - field(x[n]!, y[n]!, 0))).toBeLessThan(0.05);
      expect(Math.abs(patchValue(patch, x[n]!, y[n]!) - field(x[n]!, y[n]!, 0))).toBeLessThan(0.5);
    }
    // Without the heights it would be off by a good part of the peak of 111 nT.
    expect(Math.max(...Array.from(x, (px, n) => Math.abs(value[n]! - field(px, y[n]!, 0))))).toBeGreaterThan(4);
  });

  it('leaves nothing open at a reading on the level and everything far from all', () => {
    const work = new Float64Array(2 * all.length);
    const level = solvePatch(placeReadings({ x, y, value }, BOUNDS, 0.5), all, { layer, noiseNT: 0 });
    expect(patchOpenness(level, [x[3]!, y[3]!], work).variance).toBeLessThan(1e-5);
    const far = patchOpenness(level, [5_000, 5_000], work);
    // The level is known from the readings, the two layers are not.
    expect(far.variance).toBeGreaterThan(1 + DEEP_SHARE);
    expect(far.variance).toBeLessThan(1 + DEEP_SHARE + LEVEL_SHARE);
    expect(far.expected).toBeLessThan(1e-6);
  });

  it('likes the layer best at about the depth of the source', () => {
    const misfit = [1, 2, 4, 8, 16].map((depthM) => solvePatch(readings, all, { layer: { depthM, deepM: 60 }, noiseNT: 0.1 }).misfit);
    expect(misfit.indexOf(Math.min(...misfit))).toBeGreaterThanOrEqual(2);
    expect(misfit.indexOf(Math.min(...misfit))).toBeLessThanOrEqual(3);
  });

  it('takes readings in one place and readings that are all alike', () => {
    const same = placeReadings({ x: [1, 1, 1], y: [1, 1, 3], value: [4, 4, 4] }, BOUNDS, 0.5);
    const flat = solvePatch(same, readingsWithin(same, BOUNDS, 10), { layer, noiseNT: 0 });
    expect(patchValue(flat, 2, 2)).toBeCloseTo(4, 9);
  });
});
