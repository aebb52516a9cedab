import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { sampleWeights, sdRange } from '../../src/grid/sampleErrors.js';

const samples = { x: [0, 1, 2, NaN], y: [0, 1, 2, 3], value: [5, 6, NaN, 7] };

describe('standard errors of samples', () => {
  it('are asked only of samples that count', () => {
    expect(sdRange(samples)).toBeNull();
    expect(sdRange({ ...samples, sd: [3, 2, 0, NaN] })).toEqual([2, 3]);
    expect([...sampleWeights(samples)]).toEqual([]);
    expect([...sampleWeights({ ...samples, sd: [4, 2, 1, 1] }).subarray(0, 2)]).toEqual([0.25, 1]);
  });

  it.each([[[1]], [[1, NaN, 1, 1]], [[0, 1, 1, 1]], [[-2, 1, 1, 1]], [[1, Infinity, 1, 1]], [[1e-60, 1e60, 1, 1]]])('are refused where they are no numbers to weigh by: %j', (sd) => {
    expect(() => sdRange({ ...samples, sd })).toThrow(UserError);
    expect(() => sampleWeights({ ...samples, sd })).toThrow(/standard error of a reading/);
  });
});
