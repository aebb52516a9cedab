import { describe, expect, it } from 'vitest';
import { coarseCount, prolong, restrict, transfer } from '../../src/grid/transfer.js';
import { emptyHold, holdPlace } from '../../src/grid/hold.js';
import { heldResidual } from '../../src/grid/heldKernels.js';
import { plateLevel } from '../../src/grid/plateLevel.js';
import { Random } from '../../src/numerics/random.js';

const SIZES: Array<[number, number]> = [[2, 2], [3, 5], [4, 4], [5, 9], [6, 7], [12, 31], [30, 13], [17, 40]];
const random = new Random(3);
const noise = (n: number) => Float64Array.from({ length: n }, () => random.normal());
const dot = (a: ArrayLike<number>, b: ArrayLike<number>) => Array.from(a, (v, k) => v * b[k]!).reduce((sum, v) => sum + v, 0);

describe('transfer', () => {
  it.each(SIZES)('restricts by the transpose of what it prolongs, %i × %i', (width, height) => {
    const between = transfer(width, height);
    const [cw, ch] = [coarseCount(width), coarseCount(height)];
    const coarse = noise(cw * ch);
    const fine = noise(width * height);
    const up = new Float64Array(width * height);
    prolong(between, [coarse, up], null);
    const down = new Float32Array(cw * ch);
    restrict(between, [Float32Array.from(fine), down]);
    expect(dot(up, fine)).toBeCloseTo(dot(coarse, down), 4);
  });

  it.each(SIZES)('gives a plane back, and a cubic away from the rim, %i × %i', (width, height) => {
    const between = transfer(width, height);
    const cw = coarseCount(width);
    const of = (f: (x: number, y: number) => number) => {
      const coarse = Float64Array.from({ length: cw * coarseCount(height) }, (_, k) => f(2 * (k % cw), 2 * Math.floor(k / cw)));
      const fine = new Float64Array(width * height);
      prolong(between, [coarse, fine], null);
      return fine;
    };
    of((x, y) => 3 - x + 2 * y).forEach((v, k) => expect(v).toBeCloseTo(3 - (k % width) + 2 * Math.floor(k / width), 9));
    const cubic = (x: number, y: number) => x ** 3 / 50 - y ** 3 / 70 + x * x * y / 90;
    of(cubic).forEach((v, k) => {
      const [x, y] = [k % width, Math.floor(k / width)];
      if (x >= 3 && y >= 3 && x < width - 4 && y < height - 4) expect(v).toBeCloseTo(cubic(x, y), 8);
    });
  });
});

/** (H z) of a level without plate: the held operator with both weights zero. */
function holdTimes(width: number, height: number, lay: (hold: ReturnType<typeof emptyHold>) => void) {
  const level = plateLevel({ width, height, alpha: 0, tau: 0 });
  lay(level.hold);
  return (z: Float64Array) => {
    const out = new Float32Array(z.length);
    heldResidual(level, z, out);
    return out.map((v) => -v);
  };
}

describe('hold', () => {
  it.each(SIZES.filter(([w]) => w > 2))('costs weight × (mean around)², %i × %i', (width, height) => {
    const [cw, ch] = [coarseCount(width), coarseCount(height)];
    const pins = Array.from({ length: 12 }, () => ({ x: (width - 1) * random.uniform() / 2, y: (height - 1) * random.uniform() / 2, weight: 1 + random.uniform() }));
    const first = { width: cw, height: ch, hold: emptyHold(cw * ch) };
    for (const pin of pins) holdPlace(first.hold, { ...pin, width: cw });
    const bilinear = (z: Float64Array, x: number, y: number) => {
      const [i, j] = [Math.floor(x), Math.floor(y)];
      const row = (k: number) => (1 - x + i) * z[k]! + (x - i) * (z[k + 1] ?? 0);
      return (1 - y + j) * row(j * cw + i) + (y > j ? (y - j) * row((j + 1) * cw + i) : 0);
    };
    const energy = (z: Float64Array) => pins.reduce((sum, { x, y, weight }) => sum + weight * bilinear(z, x, y) ** 2, 0);

    const z = noise(cw * ch);
    const times = holdTimes(cw, ch, (hold) => Object.assign(hold, first.hold));
    expect(dot(z, times(z)) / energy(z)).toBeCloseTo(1, 4);
  });
});
