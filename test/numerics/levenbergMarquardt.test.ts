import { describe, expect, it } from 'vitest';
import { levenbergMarquardt, type LeastSquaresProblem } from '../../src/numerics/levenbergMarquardt.js';
import { Random } from '../../src/numerics/random.js';

/** Model value and its derivatives by the parameters. */
type Model = (p: Float64Array, x: number) => [value: number, ...slopes: number[]];

function fit(model: Model, x: readonly number[], y: readonly number[]): LeastSquaresProblem {
  return {
    count: x.length,
    residuals(p, r, jacobian) {
      for (let i = 0; i < x.length; i++) {
        const [value, ...slopes] = model(p, x[i]!);
        r[i] = value - y[i]!;
        if (jacobian) slopes.forEach((slope, j) => { jacobian[i * p.length + j] = slope; });
      }
    },
  };
}

const rational = (numerator: number[], denominator: number[], [top, below]: [Float64Array, Float64Array]): [number, ...number[]] => {
  const n = numerator.reduce((sum, v, i) => sum + v * top[i]!, 0);
  const d = 1 + denominator.reduce((sum, v, i) => sum + v * below[i]!, 0);
  return [n / d, ...numerator.map((v) => v / d), ...denominator.map((v) => (-n * v) / (d * d))];
};

/**
 * Data, starts, certified values and standard deviations of the NIST Statistical Reference Datasets, nonlinear regression
 * (itl.nist.gov/div898/strd/nls): Misra1a (lower difficulty), Thurber and MGH09 (higher).
 */
const SETS = [
  {
    name: 'Misra1a', starts: [[500, 1e-4], [250, 5e-4]],
    values: [2.3894212918e2, 5.5015643181e-4], sd: [2.7070075241, 7.2668688436e-6], rss: 1.2455138894e-1,
    x: [77.6, 114.9, 141.1, 190.8, 239.9, 289, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760],
    y: [10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.4, 75.47, 81.78],
    model: ((p, x) => [p[0]! * (1 - Math.exp(-p[1]! * x)), 1 - Math.exp(-p[1]! * x), p[0]! * x * Math.exp(-p[1]! * x)]) as Model,
  },
  {
    name: 'Thurber', starts: [[1000, 1000, 400, 40, 0.7, 0.3, 0.03], [1300, 1500, 500, 75, 1, 0.4, 0.05]],
    values: [1.28813968e3, 1.4910792535e3, 5.8323836877e2, 7.5416644291e1, 9.6629502864e-1, 3.9797285797e-1, 4.9727297349e-2],
    sd: [4.6647963344, 3.9571156086e1, 2.8698696102e1, 5.567537027, 3.1333340687e-2, 1.4984928198e-2, 6.5842344623e-3],
    rss: 5.6427082397e3,
    x: [
      -3.067, -2.981, -2.921, -2.912, -2.84, -2.797, -2.702, -2.699, -2.633, -2.481, -2.363, -2.322, -1.501, -1.46, -1.274, -1.212,
      -1.1, -1.046, -0.915, -0.714, -0.566, -0.545, -0.4, -0.309, -0.109, -0.103, 0.01, 0.119, 0.377, 0.79, 0.963, 1.006, 1.115,
      1.572, 1.841, 2.047, 2.2,
    ],
    y: [
      80.574, 84.248, 87.264, 87.195, 89.076, 89.608, 89.868, 90.101, 92.405, 95.854, 100.696, 101.06, 401.672, 390.724, 567.534,
      635.316, 733.054, 759.087, 894.206, 990.785, 1090.109, 1080.914, 1122.643, 1178.351, 1260.531, 1273.514, 1288.339, 1327.543,
      1353.863, 1414.509, 1425.208, 1421.384, 1442.962, 1464.35, 1468.705, 1447.894, 1457.628,
    ],
    model: ((p, x) => rational([1, x, x ** 2, x ** 3], [x, x ** 2, x ** 3], [p.subarray(0, 4), p.subarray(4)])) as Model,
  },
  {
    name: 'MGH09', starts: [[25, 39, 41.5, 39], [0.25, 0.39, 0.415, 0.39]],
    values: [1.9280693458e-1, 1.9128232873e-1, 1.2305650693e-1, 1.3606233068e-1],
    sd: [1.1435312227e-2, 1.9633220911e-1, 8.0842031232e-2, 9.0025542308e-2], rss: 3.0750560385e-4,
    x: [4, 2, 1, 0.5, 0.25, 0.167, 0.125, 0.1, 0.0833, 0.0714, 0.0625],
    y: [0.1957, 0.1947, 0.1735, 0.16, 0.0844, 0.0627, 0.0456, 0.0342, 0.0323, 0.0235, 0.0246],
    model: ((p, x) => {
      const top = x * x + x * p[1]!;
      const below = x * x + x * p[2]! + p[3]!;
      return [(p[0]! * top) / below, top / below, (p[0]! * x) / below, (-p[0]! * top * x) / below ** 2, (-p[0]! * top) / below ** 2];
    }) as Model,
  },
];

describe('levenbergMarquardt on the NIST reference sets', () => {
  for (const set of SETS) {
    it.each(set.starts.map((start, i) => [i + 1, start] as const))(`${set.name} from start %i`, (_, start) => {
      const result = levenbergMarquardt(fit(set.model, set.x, set.y), start, { maxIterations: 2000 });
      expect(result.converged).toBe(true);
      expect(result.chi2 / set.rss).toBeCloseTo(1, 9);
      const variance = result.chi2 / (set.x.length - start.length);
      set.values.forEach((value, j) => {
        // Within a hundred-thousandth of the certified standard deviation.
        expect(Math.abs(result.parameters[j]! - value) / set.sd[j]!).toBeLessThan(1e-5);
        expect(Math.sqrt(result.covariance[j * start.length + j]! * variance) / set.sd[j]!).toBeCloseTo(1, 5);
      });
    });
  }
});

const line = (x: readonly number[], y: readonly number[]) => fit((p, at) => [p[0]! + p[1]! * at, 1, at], x, y);

/** An exponential decay whose first parameter counts in `unit`. */
const decay = (unit: number) => levenbergMarquardt(
  fit((p, x) => {
    const shape = unit * Math.exp(-x * p[1]!);
    return [p[0]! * shape, shape, -x * p[0]! * shape];
  }, [0, 1, 2, 3, 4], [5, 3.1, 1.7, 1.2, 0.6]),
  [1 / unit, 1],
);

describe('levenbergMarquardt', () => {
  it('gives the textbook line and its covariance', () => {
    const { parameters, covariance, chi2, converged } = levenbergMarquardt(line([0, 1, 2, 3], [1, 3, 2, 5]), [0, 0]);
    expect(converged).toBe(true);
    expect(parameters[0]).toBeCloseTo(1.1, 9);
    expect(parameters[1]).toBeCloseTo(1.1, 9);
    expect(chi2).toBeCloseTo(2.7, 9);
    // Inverse of [[4, 6], [6, 14]].
    [0.7, -0.3, -0.3, 0.2].forEach((v, i) => expect(covariance[i]).toBeCloseTo(v, 9));
  });

  it('holds a bound, and frees it where the data pull away', () => {
    const held = levenbergMarquardt(line([0, 1, 2, 3], [1, 3, 2, 5]), [0, 0], { lower: [-10, -10], upper: [10, 0.5] });
    expect(held.parameters[1]).toBe(0.5);
    // With the slope fixed at 0.5 the intercept is the mean of y − x/2.
    expect(held.parameters[0]).toBeCloseTo(2, 8);
    expect([...held.atBound]).toEqual([0, 1]);
    const free = levenbergMarquardt(line([0, 1, 2, 3], [1, 3, 2, 5]), [0, 0], { lower: [-10, 0], upper: [10, 10] });
    expect(free.parameters[1]).toBeCloseTo(1.1, 8);
  });

  it('ends on exact data and on a start that is the answer', () => {
    expect(levenbergMarquardt(line([0, 1, 2], [1, 2, 3]), [5, 5]).chi2).toBeLessThan(1e-18);
    const same = levenbergMarquardt(line([0, 1, 2], [1, 2, 3]), [1, 1]);
    expect(same.chi2).toBe(0);
    expect(same.converged).toBe(true);
  });

  it('does not depend on the units of the parameters', () => {
    const a = decay(1);
    const b = decay(1e8);
    expect(b.parameters[0]! * 1e8).toBeCloseTo(a.parameters[0]!, 8);
    expect(b.iterations).toBe(a.iterations);
  });

  it('states the spread that repeated noise really gives', () => {
    const random = new Random(9);
    const x = Array.from({ length: 30 }, (_, i) => i / 10);
    let sum = 0, predicted = 0;
    const rounds = 400;
    for (let k = 0; k < rounds; k++) {
      const problem = fit((p, t) => [(10 * p[0]!) / (1 + (t - p[1]!) ** 2), 10 / (1 + (t - p[1]!) ** 2), (20 * p[0]! * (t - p[1]!)) / (1 + (t - p[1]!) ** 2) ** 2], x, x.map((t) => 20 / (1 + (t - 1.4) ** 2) + random.normal()));
      const result = levenbergMarquardt(problem, [1, 1]);
      sum += (result.parameters[1]! - 1.4) ** 2;
      predicted += result.covariance[3]!;
    }
    // Sampling error of a variance from 400 rounds: 7 %.
    expect(sum / predicted).toBeGreaterThan(0.75);
    expect(sum / predicted).toBeLessThan(1.3);
  });

  it('says NaN of a covariance that the data do not give, and refuses a start without residuals', () => {
    const twice = levenbergMarquardt(fit((p) => [p[0]! + p[1]!, 1, 1], [0, 1, 2], [1, 2, 3]), [0, 0]);
    expect(twice.chi2).toBeCloseTo(2, 9);
    expect([...twice.covariance].every(Number.isNaN)).toBe(true);
    expect(() => levenbergMarquardt(fit((p) => [Math.log(p[0]!), 1 / p[0]!], [1, 2], [1, 2]), [-1])).toThrow(/finite/);
  });
});
