import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';
import { despike, fourthDifferenceNoise } from '../../src/readings/despike.js';

const STATION = { stepM: 0, sourceM: Infinity };
/** A walker at 1.2 m/s and 10 readings a second, 1.5 m above the steel. */
const WALKER = { stepM: 0.12, sourceM: 1.5 };

function whole(values: Float64Array) {
  return [{ start: 0, end: values.length }];
}

function found(values: Float64Array, options = STATION): number[] {
  return [...despike(values, whole(values), options).entries()].filter(([, one]) => one === 1).map(([i]) => i);
}

/** Vertical field of a pole over flat ground, of the given peak, passed straight over: peak × (1 + u²)^−3/2. */
function overPole(peakNT: number, depthM: number, { offsetM = 0, noiseNT = 0.15, seed = 1 } = {}): Float64Array {
  const random = new Random(seed);
  return Float64Array.from({ length: 800 }, (_, i) => {
    const x = (i - 400) * 0.12;
    return 51_600 + peakNT * (1 + (x * x + offsetM * offsetM) / depthM ** 2) ** -1.5 + noiseNT * random.normal();
  });
}

describe('despike', () => {
  it('takes 44440 and 99999 out of one-minute fields and leaves a true swing of 130 nT in ten minutes', () => {
    // The despiker's test for one-minute total field: values and swing as in the check values of observatory practice.
    const random = new Random(2);
    const values = Float64Array.from({ length: 240 }, (_, i) => Math.round((47_950 + 10 * Math.sin(i / 40) + 130 * (1 / (1 + Math.exp(-(i - 125) / 1.6))) + 0.5 * random.normal()) * 10) / 10);
    expect(Math.max(...values.slice(120, 131)) - Math.min(...values.slice(120, 131))).toBeGreaterThan(110);
    values[50] = 44_440;
    values[180] = 99_999;
    expect(found(values)).toEqual([50, 180]);
  });

  it.each([[4000, 1.5], [4000, 1.8], [6000, 1.5], [-3000, 1.6], [1500, 1.5]])('leaves a casing of %d nT passed at %d m', (peak, depth) => {
    for (let seed = 1; seed <= 5; seed++) expect(found(overPole(peak, depth, { seed }), WALKER)).toEqual([]);
  });

  it('leaves a strong piece of scrap just under the sensor', () => {
    // Dipole field falls off as (1 + u²)^−5/2 and faster: steeper than any casing.
    const values = Float64Array.from({ length: 400 }, (_, i) => {
      const u2 = ((i - 200) * 0.12 / 1.5) ** 2;
      return 51_600 + 5000 * (2 - u2) / 2 * (1 + u2) ** -2.5;
    });
    expect(found(values, WALKER)).toEqual([]);
  });

  it('takes a spike out of the flank and the peak of a casing', () => {
    for (const at of [385, 392, 400, 411]) {
      const values = overPole(3000, 1.7);
      values[at]! += 900;
      expect(found(values, WALKER)).toEqual([at]);
    }
  });

  it.each([1, 2, 3])('takes a run of %d false readings', (length) => {
    const values = overPole(0, 1.5);
    for (let k = 0; k < length; k++) values[300 + k]! += 500;
    expect(found(values, WALKER)).toEqual(Array.from({ length }, (_, k) => 300 + k));
  });

  it('looks at the first and last readings of a run and across missing ones', () => {
    const values = overPole(0, 1.5);
    values[0]! += 300;
    values[799]! -= 300;
    values[101] = NaN;
    values[102]! += 300;
    values[103] = NaN;
    expect(found(values, WALKER)).toEqual([0, 102, 799]);
  });

  it('finds nothing in noise, whole or rounded to a nT', () => {
    const random = new Random(9);
    const noise = Float64Array.from({ length: 20_000 }, () => 50_000 + 0.3 * random.normal());
    expect(found(noise, WALKER)).toEqual([]);
    expect(found(noise.map(Math.round), WALKER)).toEqual([]);
    expect(found(new Float64Array(100).fill(50_000))).toEqual([]);
  });
});

describe('fourthDifferenceNoise', () => {
  it('gives the standard deviation of white noise, whatever cubic lies under it', () => {
    const random = new Random(3);
    const values = Float64Array.from({ length: 40_000 }, (_, i) => 0.2 * random.normal() + 1e-3 * i + 1e-9 * i ** 3 / 40);
    // 40,000 readings: the standard error of a robust spread is below 2 %.
    expect(Math.abs(fourthDifferenceNoise(values, whole(values)) / 0.2 - 1)).toBeLessThan(0.05);
  });

  it('is not below the last digit written', () => {
    const values = Float64Array.from({ length: 500 }, (_, i) => 100 + Math.round(i / 50));
    expect(fourthDifferenceNoise(values, whole(values))).toBeCloseTo(1 / Math.sqrt(12), 12);
  });
});
