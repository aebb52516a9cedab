import { describe, expect, it } from 'vitest';
import { DEEP_SHARE, layerCovariance, layerKernel, LEVEL_SHARE } from '../../../src/grid/sources/layer.js';

/** A deep layer so far down that its field is a constant. */
const layer = { depthM: 3, deepM: 1e9 };
const shallow = (squaredM2: number, up: number): number => layerCovariance(layer, squaredM2, up) - DEEP_SHARE - LEVEL_SHARE;

describe('the layer of sources', () => {
  it.each([
    { x: 0, upA: 0, upB: 0 },
    { x: 2.5, upA: 0, upB: 0 },
    { x: 2.5, upA: 1, upB: -0.7 },
    { x: 9, upA: 0.4, upB: 0.4 },
  ])('has the covariance that its sources add up to, $x m apart', ({ x, upA, upB }) => {
    let sum = 0;
    const step = 0.25;
    for (let sx = -120; sx < 120; sx += step) {
      for (let sy = -120; sy < 120; sy += step) {
        sum += step * step * layerKernel(layer, sx * sx + sy * sy, upA) * layerKernel(layer, (sx - x) ** 2 + sy * sy, upB);
      }
    }
    expect(sum).toBeCloseTo(shallow(x * x, upA + upB), 3);
  });

  it('is the field of a pole under a pole: variance 1 at the level, less above it', () => {
    expect(shallow(0, 0)).toBeCloseTo(1, 8);
    // Variance falls with the inverse square of the height over the layer.
    expect(shallow(0, 6)).toBeCloseTo(1 / 4, 8);
    expect(shallow(0, -2)).toBeGreaterThan(1);
  });
});
