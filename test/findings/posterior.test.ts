import { describe, expect, it } from 'vitest';
import { reconcile } from '../../src/findings/reconcile.js';
import { matchPosterior } from '../../src/findings/posterior.js';
import type { Anomaly } from '../../src/anomalies/types.js';
import type { WellRecord } from '../../src/records/types.js';
import { Random } from '../../src/numerics/random.js';
import { anomalies, anomaly, ground, record } from './made.js';

const prior = { unrecordedPerM2: 1e-5, othersPerM2: 2e-4, casingOdds: 0.35 / 0.65 };

/** Chances of the pairs by brute force: every assignment, at every node of a fine square of shifts. */
function byBruteForce(records: readonly WellRecord[], list: readonly Anomaly[], { ownSdM, sharedSdM, detect }: { ownSdM: number; sharedSdM: number; detect: number }): number[][] {
  const sums = records.map(() => list.map(() => 0));
  let z = 0;
  const step = 0.25 * ownSdM;
  for (let e = -4.5 * sharedSdM; e <= 4.5 * sharedSdM; e += step) {
    for (let n = -4.5 * sharedSdM; n <= 4.5 * sharedSdM; n += step) {
      const at = Math.exp(-(e * e + n * n) / (2 * sharedSdM ** 2));
      const w = records.map((r) => list.map((a) => {
        const L = a.pCasing / (1 - a.pCasing) / prior.casingOdds;
        const s2 = ownSdM ** 2 + a.cov[0];
        const F = Math.exp(-((a.x - r.x - e) ** 2 + (a.y - r.y - n) ** 2) / (2 * s2)) / (2 * Math.PI * s2);
        return (r.pCasing * F * L) / ((1 - r.pCasing * detect) * (prior.unrecordedPerM2 * L + prior.othersPerM2));
      }));
      const choose = (i: number, weight: number, picks: readonly number[]): void => {
        if (i === records.length) {
          z += weight;
          picks.forEach((j, row) => { if (j >= 0) sums[row]![j]! += weight; });
          return;
        }
        choose(i + 1, weight, [...picks, -1]);
        list.forEach((_, j) => { if (!picks.includes(j)) choose(i + 1, weight * w[i]![j]!, [...picks, j]); });
      };
      choose(0, at, []);
    }
  }
  return sums.map((row) => row.map((value) => value / z));
}

describe('a shift that a group shares', () => {
  const group = { id: 'made.csv / NAD27', sharedSdM: 6 };
  const ownSdM = 1.5;
  const sdM = Math.hypot(ownSdM, group.sharedSdM);

  it('is integrated as a fine sum over shifts and assignments does', () => {
    const records = [record('R1', 0, 0, { sdM, group }), record('R2', 30, 5, { sdM, group }), record('R3', 12, 33, { sdM, group })];
    const list = [anomaly('A1', 6, -3), anomaly('A2', 35.2, 1.5, { pCasing: 0.5 }), anomaly('A3', 26, 9, { pCasing: 0.6 }), anomaly('A4', 17, 31), anomaly('A5', 5, 36, { pCasing: 0.3 })];
    const { pairs } = matchPosterior({ records, detect: [0.9, 0.9, 0.9], anomalies: list, prior });
    const brute = byBruteForce(records, list, { ownSdM, sharedSdM: 6, detect: 0.9 });
    pairs.forEach((row, i) => row.forEach((p, j) => expect(Math.abs(p - brute[i]![j]!)).toBeLessThan(0.002)));
  });

  it('that all see resolves what none could resolve alone', () => {
    // Wells 40 m apart, each with scrap as near to its record as the casing is; records 7 m east and 5 m south of the truth.
    const random = new Random(2);
    const wells = Array.from({ length: 9 }, (_, i) => [40 * (i % 3), 40 * Math.floor(i / 3)] as const);
    const list = wells.flatMap(([x, y], i) => [anomaly(`W${i}`, x, y, { pCasing: 0.6 }), anomaly(`S${i}`, x + 14 * Math.cos(2.4 * i), y + 14 * Math.sin(2.4 * i), { pCasing: 0.6 })]);
    const place = wells.map(([x, y]) => [x + 7 + ownSdM * random.normal(), y - 5 + ownSdM * random.normal()] as const);
    const solve = (shared: WellRecord['group']): ReturnType<typeof matchPosterior> =>
      matchPosterior({ records: place.map(([x, y], i) => record(`R${i}`, x, y, { sdM, group: shared })), detect: wells.map(() => 0.9), anomalies: list, prior });
    const together = solve(group);
    const apart = solve(null);
    const right = ({ pairs }: typeof together): number => pairs.filter((row, i) => row[2 * i]! > 0.9).length;
    expect(right(together)).toBe(9);
    expect(right(apart)).toBeLessThan(5);
    const [shift] = together.shifts;
    expect(Math.abs(shift!.eastM + 7)).toBeLessThan(3 * shift!.sdM);
    expect(Math.abs(shift!.northM - 5)).toBeLessThan(3 * shift!.sdM);
    expect(shift!.sdM).toBeLessThan(1);
  });

  it('changes nothing for a record that has no neighbour in its group', () => {
    const list = [anomaly('A1', 5, 2), anomaly('A2', -6, 3, { pCasing: 0.4 })];
    const one = matchPosterior({ records: [record('R1', 0, 0, { sdM, group })], detect: [0.9], anomalies: list, prior });
    const none = matchPosterior({ records: [record('R1', 0, 0, { sdM })], detect: [0.9], anomalies: list, prior });
    expect(Array.from(one.pairs[0]!)).toEqual(Array.from(none.pairs[0]!));
  });

  it('two groups that meet over one casing still give at most one record to a casing', () => {
    const other = { id: 'other.csv / NAD27', sharedSdM: 6 };
    const records = [record('R1', 0, 0, { sdM, group }), record('R2', 40, 0, { sdM, group }), record('Q1', 4, 1, { sdM, group: other }), record('Q2', 80, 2, { sdM, group: other })];
    const list = [anomaly('A1', 2, 2), anomaly('A2', 42, 2), anomaly('A3', 78, 3)];
    const { pairs } = matchPosterior({ records, detect: records.map(() => 0.9), anomalies: list, prior });
    list.forEach((_, j) => expect(pairs.reduce((sum, row) => sum + row[j]!, 0)).toBeLessThan(1.1));
    expect(pairs[1]![1]).toBeGreaterThan(0.9);
    expect(pairs[3]![2]).toBeGreaterThan(0.9);
  });
});

describe('chances against made worlds', () => {
  /**
   * Worlds drawn from what the priors say: wells drilled or not, found or missed, scrap and unrecorded casings strewn,
   * records off by chance, by blunder and by a shift in common. Whatever is stated with chance p has to be true p of the time.
   */
  it('what is said with chance p is true in p of the cases: matches, casings that remain, unrecorded ones', () => {
    const random = new Random(17);
    const [side, detect, ownSdM, sharedSdM, pCasing, blunder] = [200, 0.85, 5, 4, 0.7, 0.04];
    const perHa = { unrecorded: 0.5, others: 4 };
    const sdM = Math.hypot(ownSdM, sharedSdM);
    const field = { detection: ground(detect, { sideM: side + 3300, cellM: 50 }), covered: ground(1, { sideM: side + 3300, cellM: 50 }) };
    // Evidence of 9 to 1 either way, right in nine cases of ten: its odds are then what it says.
    const evidence = (casing: boolean): number => (casing === random.uniform() < 0.9 ? 9 : 1 / 9);
    const pOf = (L: number): number => (L * prior.casingOdds) / (1 + L * prior.casingOdds);
    const poisson = (mean: number): number => { let [k, product] = [0, random.uniform()]; while (product > Math.exp(-mean)) { k++; product *= random.uniform(); } return k; };
    const pairBins = Array.from({ length: 5 }, () => ({ said: 0, true: 0, n: 0 }));
    const sums = { remainsSaid: 0, remainsTrue: 0, records: 0, alone: 0, aloneTrue: 0 };
    for (let world = 0; world < 150; world++) {
      const [se, sn] = [sharedSdM * random.normal(), sharedSdM * random.normal()];
      const list: Anomaly[] = [];
      const owner = new Map<string, string>();
      const casing = new Set<string>();
      const strew = (x: number, y: number, { isCasing, of }: { isCasing: boolean; of: string }): void => {
        const id = `A${list.length}`;
        list.push(anomaly(id, x + 0.3 * random.normal(), y + 0.3 * random.normal(), { pCasing: pOf(evidence(isCasing)) }));
        owner.set(id, of);
        if (isCasing) casing.add(id);
      };
      const there = new Set<string>();
      const records = Array.from({ length: 5 }, (_, i) => {
        const [x, y] = [(random.uniform() - 0.5) * 100, (random.uniform() - 0.5) * 100];
        const place = random.uniform() < blunder
          ? (() => { const r = 1609 * Math.sqrt(random.uniform()); const t = 2 * Math.PI * random.uniform(); return [x + r * Math.cos(t), y + r * Math.sin(t)] as const; })()
          : [x + se + ownSdM * random.normal(), y + sn + ownSdM * random.normal()] as const;
        if (random.uniform() < pCasing) {
          there.add(`R${i}`);
          if (random.uniform() < detect) strew(place[0], place[1], { isCasing: true, of: `R${i}` });
        }
        return record(`R${i}`, x, y, { sdM, blunder, pCasing, group: { id: 'g', sharedSdM } });
      });
      const hectares = (side * side) / 1e4;
      for (let k = poisson(perHa.unrecorded * hectares); k > 0; k--) strew((random.uniform() - 0.5) * side, (random.uniform() - 0.5) * side, { isCasing: true, of: '' });
      for (let k = poisson(perHa.others * hectares); k > 0; k--) strew((random.uniform() - 0.5) * side, (random.uniform() - 0.5) * side, { isCasing: false, of: '' });
      const { list: rows, pairs } = reconcile({ placed: records, unplaced: [] }, anomalies(...list), field, { unrecordedPerHa: perHa.unrecorded, othersPerHa: perHa.others });
      for (const { recordId, anomalyId, p } of pairs) {
        const bin = pairBins[Math.min(4, Math.floor(5 * p))]!;
        bin.said += p;
        bin.n++;
        if (owner.get(anomalyId) === recordId) bin.true++;
      }
      for (const finding of rows) {
        if (finding.recordId !== '') {
          sums.records++;
          sums.remainsSaid += finding.pRemains;
          if (there.has(finding.recordId)) sums.remainsTrue++;
        }
        if (finding.finding === 'unrecorded') {
          sums.alone += finding.pRemains;
          if (casing.has(finding.anomalyId)) sums.aloneTrue++;
        }
      }
    }
    for (const bin of pairBins) {
      expect(bin.n).toBeGreaterThan(10);
      // Three standard errors of a share.
      expect(Math.abs(bin.said - bin.true)).toBeLessThan(3 * Math.sqrt(Math.max(1, bin.true * (1 - bin.true / bin.n))));
    }
    expect(Math.abs(sums.remainsSaid - sums.remainsTrue)).toBeLessThan(3 * Math.sqrt(sums.records * 0.2));
    expect(Math.abs(sums.alone - sums.aloneTrue)).toBeLessThan(3 * Math.sqrt(Math.max(1, sums.aloneTrue)));
  });
});
