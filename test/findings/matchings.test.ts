import { describe, expect, it } from 'vitest';
import { beliefMatchings } from '../../src/findings/beliefMatchings.js';
import { clusters } from '../../src/findings/clusters.js';
import { exactMatchings, type MatchingProblem } from '../../src/findings/matchings.js';
import { remainsAfterEmptySearch } from '../../src/findings/remains.js';
import { shiftPosterior } from '../../src/findings/shiftQuadrature.js';
import { Random } from '../../src/numerics/random.js';

/** All assignments one by one. */
function bruteForce({ columns, weights }: MatchingProblem): { logZ: number; chances: number[][] } {
  const sums = weights.map((row) => Array.from(row, () => 0));
  let z = 0;
  const choose = (i: number, taken: ReadonlySet<number>, weight: number, picks: ReadonlyArray<readonly [number, number]>): void => {
    if (i === columns.length) {
      z += weight;
      for (const [row, k] of picks) sums[row]![k]! += weight;
      return;
    }
    choose(i + 1, taken, weight, picks);
    columns[i]!.forEach((column, k) => { if (!taken.has(column)) choose(i + 1, new Set([...taken, column]), weight * weights[i]![k]!, [...picks, [i, k]]); });
  };
  choose(0, new Set(), 1, []);
  return { logZ: Math.log(z), chances: sums.map((row) => row.map((value) => value / z)) };
}

function made(seed: number, rows: number, columnCount: number, density: number): MatchingProblem {
  const random = new Random(seed);
  const columns = Array.from({ length: rows }, () => Array.from({ length: columnCount }, (_, j) => j).filter(() => random.uniform() < density));
  return { columns, weights: columns.map((row) => row.map(() => Math.exp(2.5 * random.normal()))) };
}

const worst = (a: readonly ArrayLike<number>[], b: readonly ArrayLike<number>[]): number =>
  Math.max(0, ...a.flatMap((row, i) => Array.from(row, (value, k) => Math.abs(value - b[i]![k]!))));

describe('sums over assignments', () => {
  it('one record and one casing: w/(1 + w)', () => {
    const { chances, logZ } = exactMatchings({ columns: [[0]], weights: [[3]] })!;
    expect(chances[0]![0]).toBeCloseTo(0.75, 12);
    expect(logZ).toBeCloseTo(Math.log(4), 12);
  });

  it('two and two, by hand', () => {
    // Seven assignments: none 1, singles 4 + 2 + 1 + 3, both 4·3 and 2·1; Z = 25.
    const { chances, logZ } = exactMatchings({ columns: [[0, 1], [0, 1]], weights: [[4, 2], [1, 3]] })!;
    expect(Math.exp(logZ)).toBeCloseTo(25, 9);
    expect(chances[0]![0]).toBeCloseTo(16 / 25, 12);
    expect(chances[0]![1]).toBeCloseTo(4 / 25, 12);
    expect(chances[1]![0]).toBeCloseTo(3 / 25, 12);
    expect(chances[1]![1]).toBeCloseTo(15 / 25, 12);
  });

  it('agree with every assignment counted, for many made groups', () => {
    for (let seed = 1; seed <= 60; seed++) {
      const problem = made(seed, 1 + (seed % 6), 1 + ((seed * 5) % 7), 0.3 + 0.1 * (seed % 7));
      const exact = exactMatchings(problem)!;
      const brute = bruteForce(problem);
      expect(exact.logZ).toBeCloseTo(brute.logZ, 9);
      expect(worst(exact.chances, brute.chances)).toBeLessThan(1e-10);
    }
  });

  it('keep to one casing a record and one record a casing, and stand any order of rows and columns', () => {
    const problem = made(99, 8, 10, 0.5);
    const { chances } = exactMatchings(problem)!;
    const perColumn = new Float64Array(10);
    chances.forEach((row, i) => {
      expect(row.reduce((a, b) => a + b, 0)).toBeLessThanOrEqual(1 + 1e-12);
      row.forEach((value, k) => { perColumn[problem.columns[i]![k]!]! += value; });
    });
    expect(Math.max(...perColumn)).toBeLessThanOrEqual(1 + 1e-12);
    const flipped = exactMatchings({ columns: problem.columns.map((row) => row.map((c) => 9 - c)).toReversed(), weights: [...problem.weights].toReversed() })!;
    expect(worst(flipped.chances.toReversed(), chances)).toBeLessThan(1e-12);
  });

  it('handle weights that overflow a product, and long chains', () => {
    const n = 300;
    const columns = Array.from({ length: n }, (_, i) => [i, i + 1]);
    const { chances, logZ } = exactMatchings({ columns, weights: columns.map(() => [1e6, 1e6]) })!;
    expect(Number.isFinite(logZ)).toBe(true);
    expect(chances.every((row) => row[0]! + row[1]! > 0.999 && row[0]! + row[1]! <= 1 + 1e-9)).toBe(true);
  });

  it('give up where too many casings are open at once', () => {
    expect(exactMatchings(made(5, 20, 25, 1))).toBeNull();
    expect(exactMatchings(made(5, 3, 40, 1))).toBeNull();
  });
});

describe('belief propagation for large groups', () => {
  it('is exact where rows and columns form a tree', () => {
    const columns = [[0, 1], [1, 2], [2, 3], [3]];
    const problem = { columns, weights: [[2, 5], [0.3, 9], [4, 4], [7]] };
    const belief = beliefMatchings(problem);
    const brute = bruteForce(problem);
    expect(belief.logZ).toBeCloseTo(brute.logZ, 8);
    expect(worst(belief.chances, brute.chances)).toBeLessThan(1e-8);
  });

  it('agrees with the exact sums on small groups: 0.1 at worst, 0.015 in the mean', () => {
    let [sum, count, most] = [0, 0, 0];
    for (let seed = 1; seed <= 80; seed++) {
      const problem = made(seed, 2 + (seed % 5), 2 + ((seed * 3) % 6), 0.7);
      const brute = bruteForce(problem);
      const belief = beliefMatchings(problem);
      most = Math.max(most, worst(belief.chances, brute.chances));
      belief.chances.forEach((row, i) => row.forEach((value, k) => { sum += Math.abs(value - brute.chances[i]![k]!); count++; }));
    }
    expect(most).toBeLessThan(0.1);
    expect(sum / count).toBeLessThan(0.015);
  });

  it('agrees with the exact sums on a group that no enumeration could reach', () => {
    // 60 records along a road, each with the three casings nearest to it.
    const random = new Random(8);
    const columns = Array.from({ length: 60 }, (_, i) => [i, i + 1, i + 2]);
    const problem = { columns, weights: columns.map((row) => row.map(() => Math.exp(2 * random.normal()))) };
    const exact = exactMatchings(problem)!;
    expect(worst(beliefMatchings(problem).chances, exact.chances)).toBeLessThan(0.1);
  });
});

describe('clusters', () => {
  it('are the parts that hang together; rows without columns belong to none', () => {
    const found = clusters([[0], [1, 2], [], [2, 5], [0, 7]]).map((rows) => rows.toSorted((a, b) => a - b));
    expect(found).toEqual([[0, 4], [1, 3]]);
  });
});

describe('an empty search', () => {
  it('leaves p(1 − q)/(1 − pq) (Koopman 1980; Stone 1975)', () => {
    // p = 0.8, q = 0.9: 0.08/0.28; and counted from 1,000 wells: 800 there, 720 of them found, 80 of 280 left.
    expect(remainsAfterEmptySearch(0.8, 0.9)).toBeCloseTo(80 / 280, 12);
    expect(remainsAfterEmptySearch(0.8, 0)).toBe(0.8);
    expect(remainsAfterEmptySearch(0.8, 1)).toBe(0);
    expect(remainsAfterEmptySearch(1, 0.99)).toBeCloseTo(1, 12);
    expect(remainsAfterEmptySearch(1, 1)).toBe(0);
    expect(remainsAfterEmptySearch(0, 0.5)).toBe(0);
  });

  it('two searches one after the other leave what one with both chances leaves', () => {
    expect(remainsAfterEmptySearch(remainsAfterEmptySearch(0.7, 0.6), 0.5)).toBeCloseTo(remainsAfterEmptySearch(0.7, 1 - 0.4 * 0.5), 12);
  });
});

describe('posterior of a shift', () => {
  it('is the closed form for a Gaussian likelihood, wide or a hundred times narrower than the prior', () => {
    for (const [sd, at] of [[4, [3, -2]], [0.3, [9.13, 4.37]], [0.08, [-7.041, 0.5]]] as const) {
      const nodes = shiftPosterior((e, n) => -((e - at[0]) ** 2 + (n - at[1]) ** 2) / (2 * sd * sd), { priorSdM: 8, leastSdM: sd });
      const mean = nodes.reduce((sum, { east, weight }) => sum + weight * east, 0);
      const variance = nodes.reduce((sum, { east, weight }) => sum + weight * (east - mean) ** 2, 0);
      const exact = 1 / (1 / 64 + 1 / (sd * sd));
      expect(Math.abs(mean - (at[0] * exact) / (sd * sd))).toBeLessThan(0.01 * sd);
      expect(variance / exact).toBeGreaterThan(0.99);
      expect(variance / exact).toBeLessThan(1.01);
      expect(nodes.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
    }
  });

  it('keeps both of two places that are as likely', () => {
    const nodes = shiftPosterior((e, n) => Math.log(Math.exp(-((e - 5) ** 2 + n * n) / 0.5) + Math.exp(-((e + 5) ** 2 + n * n) / 0.5)), { priorSdM: 8, leastSdM: 0.5 });
    const eastern = nodes.filter(({ east }) => east > 0).reduce((sum, { weight }) => sum + weight, 0);
    expect(eastern).toBeCloseTo(0.5, 6);
  });
});
