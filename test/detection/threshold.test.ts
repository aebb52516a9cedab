import { describe, expect, it } from 'vitest';
import { filterWeights, rowLength, whitenSignals } from '../../src/detection/deflection.js';
import { targetAverage, targetDepths, wanderingProbability } from '../../src/detection/targetAverage.js';
import { LOOK_SIDE_SHARE, detectionProbability, detectionThreshold, falseAlarmChance, looksPerHa } from '../../src/detection/threshold.js';
import { Random } from '../../src/numerics/random.js';

describe('threshold', () => {
  it('is the normal quantile (1.96 at 5 %, 2.5758 at 1 %, two-sided)', () => {
    const perHa = looksPerHa(3);
    expect(detectionThreshold({ falseAlarmsPerHa: 0.05 * perHa, distanceM: 3 })).toBeCloseTo(1.959964, 6);
    expect(detectionThreshold({ falseAlarmsPerHa: 0.01 * perHa, distanceM: 3 })).toBeCloseTo(2.575829, 6);
  });

  it('has an even chance where the deflection is the threshold, and the false alarm chance where there is nothing', () => {
    expect(detectionProbability(4, 4)).toBeCloseTo(0.5, 9);
    const options = { falseAlarmsPerHa: 0.1, distanceM: 2.75 };
    expect(detectionProbability(0, detectionThreshold(options))).toBeCloseTo(falseAlarmChance(options), 12);
  });

  it('takes a look to be as large as the peaks of the filtered noise are apart (Adler 1981)', () => {
    // Peaks above t per unit area, λ (2π)^(−3/2) t e^(−t²/2) with λ = 3/4z², against looks × one-sided tail.
    const [z, t] = [2.75, 4.2];
    const peaksPerHa = 1e4 * (3 / (4 * z * z)) * (2 * Math.PI) ** -1.5 * t * Math.exp((-t * t) / 2);
    const alarmsPerHa = (looksPerHa(z) * detectionProbability(0, t)) / 2;
    expect(alarmsPerHa / peaksPerHa).toBeGreaterThan(0.85);
    expect(alarmsPerHa / peaksPerHa).toBeLessThan(1.15);
    expect(looksPerHa(z)).toBeCloseTo(1e4 / (LOOK_SIDE_SHARE * z) ** 2, 9);
  });

  it('refuses an alarm rate that no look could keep', () => {
    expect(() => detectionThreshold({ falseAlarmsPerHa: 1e6, distanceM: 3 })).toThrow();
    expect(() => detectionThreshold({ falseAlarmsPerHa: 0, distanceM: 3 })).toThrow();
  });
});

/** Deflection of a signal under a covariance, with background columns. */
function deflection(covariance: readonly (readonly number[])[], signal: readonly number[], background: readonly (readonly number[])[] = []): number {
  const n = covariance.length;
  const stride = n + 2;
  const a = new Float64Array((n + background.length + 1) * stride);
  [...covariance, ...background, signal].forEach((row, i) => a.set(row, i * stride));
  whitenSignals(a, { n, background: background.length, signals: 1, stride });
  return rowLength(a, n + background.length, { n, stride });
}
const IDENTITY = [[1, 0, 0, 0], [0, 1, 0, 0], [0, 0, 1, 0], [0, 0, 0, 1]];

describe('deflection', () => {
  it('is |s|/σ in white noise', () => {
    expect(deflection([[4, 0, 0], [0, 4, 0], [0, 0, 4]], [2, -4, 4])).toBeCloseTo(3, 12);
  });

  it('matches a 2 × 2 case by hand', () => {
    // C = [[2, 1], [1, 2]], C⁻¹ = [[2, −1], [−1, 2]]/3, s = (1, 3): (2 − 3 − 3 + 18)/3 = 14/3.
    expect(deflection([[2, 1], [1, 2]], [1, 3])).toBeCloseTo(Math.sqrt(14 / 3), 12);
  });

  it('gives up what a constant and a slope explain', () => {
    // Of the quadratic (0, 1, 4, 9) the part outside constant and slope is (1, −1, −1, 1), of length 2.
    expect(deflection(IDENTITY, [0, 1, 4, 9], [[1, 1, 1, 1], [0, 1, 2, 3]])).toBeCloseTo(2, 12);
    expect(deflection(IDENTITY, [5, 7, 9, 11], [[1, 1, 1, 1], [0, 1, 2, 3]])).toBeCloseTo(0, 6);
  });

  it('passes over a background column that the others hold already', () => {
    const once = deflection(IDENTITY, [1, 5, 2, 0], [[1, 1, 1, 1]]);
    expect(deflection(IDENTITY, [1, 5, 2, 0], [[1, 1, 1, 1], [3, 3, 3, 3], [0, 0, 0, 0]])).toBeCloseTo(once, 12);
  });

  it('refuses a matrix that is no covariance', () => {
    expect(() => deflection([[1, 2], [2, 1]], [1, 1])).toThrow();
  });

  it('weights are C⁻¹ s, the matched filter', () => {
    const stride = 2;
    const a = Float64Array.from([2, 0, 1, 2, 1, 3]);
    whitenSignals(a, { n: 2, background: 0, signals: 1, stride });
    filterWeights(a, 2, { n: 2, stride });
    // C⁻¹ s = (2 − 3, −1 + 6)/3.
    expect(a[4]).toBeCloseTo(-1 / 3, 12);
    expect(a[5]).toBeCloseTo(5 / 3, 12);
  });
});

describe('average over the target', () => {
  it('agrees with a fine sum, for ranges wide and narrow, with and without wander', () => {
    const heightM = 1.5;
    const perAM = (depth: number): number => 0.55 / (heightM + depth) ** 2.2;
    for (const wander of [0, 0.1, 0.3]) {
      for (const [poleAM, depthM] of [[[5, 60], [0, 2.5]], [[2, 30], [0.5, 4]], [[10, 10], [0, 3]], [[4, 50], [1, 1]], [[40, 40], [1, 1]]] as const) {
        let sum = 0;
        const n = 100;
        for (let i = 0; i < n; i++) {
          for (let j = 0; j < n; j++) {
            const pole = poleAM[0] * (poleAM[1] / poleAM[0]) ** ((i + 0.5) / n);
            sum += wanderingProbability(pole * perAM(depthM[0] + ((j + 0.5) / n) * (depthM[1] - depthM[0])), wander, 4.2);
          }
        }
        const target = { poleAM, depthM, basis: '' };
        const depths = targetDepths(target, heightM);
        const stated = targetAverage(target, { perAM: depths.map(perAM), wander: depths.map(() => wander) }, { threshold: 4.2, heightM });
        expect(Math.abs(stated - sum / n ** 2)).toBeLessThan(0.006);
      }
    }
  });

  it('wander lowers the chance of what is just heard, raises that of what is just not, and leaves the loud alone', () => {
    expect(wanderingProbability(6, 0.3, 4.2)).toBeLessThan(wanderingProbability(6, 0, 4.2));
    expect(wanderingProbability(2.5, 0.3, 4.2)).toBeGreaterThan(wanderingProbability(2.5, 0, 4.2));
    expect(wanderingProbability(60, 0.3, 4.2)).toBeGreaterThan(0.9999);
  });

  it('wanders as draws of a log-normal variable do', () => {
    const random = new Random(4);
    const sigma = Math.sqrt(Math.log(1 + 0.25 ** 2));
    let hits = 0;
    for (let i = 0; i < 100_000; i++) if (Math.abs(5.5 * Math.exp(sigma * random.normal() - sigma * sigma / 2) + random.normal()) > 4.2) hits++;
    expect(Math.abs(hits / 100_000 - wanderingProbability(5.5, 0.25, 4.2))).toBeLessThan(0.006);
  });
});
