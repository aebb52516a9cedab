import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';
import { Wander } from '../../src/simulation/wander.js';

/** Mean square of how far a walk has gone from its start. */
function spread(steps: number, stepS: number): number {
  let sum = 0;
  for (let k = 0; k < 4000; k++) {
    const walk = new Wander(new Random(k), 1, 10);
    const start = walk.value;
    for (let i = 0; i < steps; i++) walk.step(stepS);
    sum += (walk.value - start) ** 2;
  }
  return sum / 4000;
}

describe('Wander', () => {
  it('has the stated spread and forgets by e^(−t/τ)', () => {
    const walk = new Wander(new Random(5), 0.3, 60);
    const values = Float64Array.from({ length: 200_000 }, () => walk.step(3));
    const product = (lag: number): number => {
      let sum = 0;
      for (let i = 0; i + lag < values.length; i++) sum += values[i]! * values[i + lag]!;
      return sum / (values.length - lag);
    };
    // 10,000 correlation times: the standard error of these means is about 1.5 %.
    expect(Math.sqrt(product(0))).toBeCloseTo(0.3, 1.9);
    expect(product(20) / product(0)).toBeCloseTo(Math.exp(-1), 1);
    expect(product(60) / product(0)).toBeCloseTo(Math.exp(-3), 1);
  });

  it('steps over a pause as far as many small steps do', () => {
    // Structure function of the process: 2σ²(1 − e^(−t/τ)).
    const wanted = 2 * (1 - Math.exp(-0.5));
    expect(spread(1, 5) / wanted).toBeCloseTo(1, 0.9);
    expect(spread(50, 0.1) / wanted).toBeCloseTo(1, 0.9);
  });
});
