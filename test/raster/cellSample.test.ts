import { describe, expect, it } from 'vitest';
import { CellSample } from '../../src/raster/cellSample.js';

const cells = (count: number): Float32Array => Float32Array.from({ length: count }, (_, i) => i);

/** The sample of cells 0, 1, 2, … that come in parts of the given sizes. */
function sampled(count: number, most: number, part: number): number[] {
  const sample = new CellSample(count, most);
  const all = cells(count);
  for (let from = 0; from < count; from += part) sample.add(all.subarray(from, from + part));
  return [...sample.values()];
}

describe('CellSample', () => {
  it('keeps all cells where they are few', () => {
    expect(sampled(1000, 1000, 37)).toEqual([...cells(1000)]);
  });

  it.each([[1001, 500], [40_000, 300], [12_345, 1000]])('keeps one cell of each run of %i cells where at most %i may be kept', (count, most) => {
    const kept = sampled(count, most, count);
    const step = Math.ceil(count / most);
    expect(kept.length).toBeLessThanOrEqual(most);
    expect(kept.length).toBeGreaterThanOrEqual(Math.floor(count / step));
    expect(kept.map((cell) => Math.floor(cell / step))).toEqual(kept.map((_, run) => run));
    // No pattern of the grid is in step with the sample.
    expect(new Set(kept.map((cell) => cell % step)).size).toBeGreaterThan(Math.min(step, 20) / 2);
  });

  it('does not depend on the parts, which may be shorter than a run', () => {
    for (const part of [1, 7, 40, 4000]) expect(sampled(10_000, 250, part)).toEqual(sampled(10_000, 250, 10_000));
  });
});
