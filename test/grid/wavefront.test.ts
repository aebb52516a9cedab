import { describe, expect, it } from 'vitest';
import { wavefront } from '../../src/grid/wavefront.js';

describe('wavefront', () => {
  it.each([[1, 1], [2, 4], [5, 3], [30, 4]])('visits each of %i rows once in each of %i passes, never ahead of the rows it reads', (height, passes) => {
    const done = Array.from({ length: passes }, () => 0);
    wavefront(height, passes, (pass, j) => {
      expect(j).toBe(done[pass]);
      // The pass before has finished the two rows below.
      if (pass > 0) expect(done[pass - 1]).toBeGreaterThanOrEqual(Math.min(height, j + 3));
      // The pass after has not touched the two rows above.
      if (pass + 1 < passes) expect(done[pass + 1]).toBeLessThanOrEqual(Math.max(0, j - 2));
      done[pass]!++;
    });
    expect(done).toEqual(done.map(() => height));
  });
});
