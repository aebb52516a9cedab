import { describe, expect, it } from 'vitest';
import { estimateLineSpacing } from '../../src/grid/estimateLineSpacing.js';
import { Random } from '../../src/numerics/random.js';

interface Walk {
  readonly spacing: number;
  readonly azimuthDeg: number;
  readonly wander: number;
  readonly ties?: number;
  readonly gapAfter?: number;
}

/** Lines of 200 m there and back, a reading every half metre, and tie lines across; turned to the azimuth. */
function walk({ spacing, azimuthDeg, wander, ties = 0, gapAfter = 1e9 }: Walk) {
  const random = new Random(spacing * 100 + azimuthDeg);
  const [s, c] = [Math.sin((azimuthDeg * Math.PI) / 180), Math.cos((azimuthDeg * Math.PI) / 180)];
  const x: number[] = [], y: number[] = [], line: number[] = [];
  const push = (along: number, across: number, name: number) => {
    x.push(500_000 + along * s + across * c);
    y.push(4_000_000 + along * c - across * s);
    line.push(name);
  };
  for (let n = 0; n < 20; n++) {
    let off = 0;
    for (let k = 0; k <= 400; k++) {
      off = 0.98 * off + wander * Math.sqrt(1 - 0.98 ** 2) * random.normal();
      push(n % 2 ? 200 - k / 2 : k / 2, n * spacing + off + (n > gapAfter ? 10 * spacing : 0), n);
    }
  }
  for (let n = 0; n < ties; n++) for (let k = 0; k <= 40 * spacing; k++) push(10 + n * (190 / ties), (k / 2), 100 + n);
  return { x, y, line };
}

describe('estimateLineSpacing', () => {
  it.each([
    { spacing: 8, azimuthDeg: 0, wander: 0 },
    { spacing: 8, azimuthDeg: 33, wander: 0.5 },
    { spacing: 5, azimuthDeg: 90, wander: 0.5, ties: 5 },
    { spacing: 20, azimuthDeg: 170, wander: 1, ties: 10 },
    { spacing: 8, azimuthDeg: 10, wander: 0.3, gapAfter: 9 },
  ])('%j', (plan) => {
    const estimate = estimateLineSpacing(walk(plan));
    // A twentieth: that of a wandering walk.
    expect(Math.abs(estimate / plan.spacing - 1)).toBeLessThan(plan.wander > 0 ? 0.05 : 1e-6);
  });

  it('leaves out flagged readings', () => {
    const samples = walk({ spacing: 8, azimuthDeg: 20, wander: 0 });
    // Every second line flagged: the rest are twice as far apart.
    const flag = samples.line.map((n) => n % 2);
    expect(estimateLineSpacing({ ...samples, flag })).toBeCloseTo(16, 5);
  });

  it('is NaN where no line has a neighbour', () => {
    const { x, y } = walk({ spacing: 8, azimuthDeg: 20, wander: 0 });
    expect(estimateLineSpacing({ x, y, line: x.map(() => 0) })).toBeNaN();
    expect(estimateLineSpacing({ x: [], y: [], line: [] })).toBeNaN();
    expect(estimateLineSpacing({ x: [1, 2], y: [1, 2], line: [0, 1] })).toBeNaN();
  });
});
