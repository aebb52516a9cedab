import { describe, expect, it } from 'vitest';
import { PRIOR } from '../../src/anomalies/classify.js';
import { CASING_SHARE } from '../../src/detection/sourcePrior.js';
import { intensities } from '../../src/findings/intensities.js';
import { RECONCILE_DEFAULTS, reconcile, type ReconcileOptions } from '../../src/findings/reconcile.js';
import type { Finding, Findings } from '../../src/findings/types.js';
import { reconcile as operation } from '../../src/operations/reconcile.js';
import type { Records } from '../../src/records/types.js';
import type { Task } from '../../src/operations/types.js';
import { anomalies, anomaly, ground, record } from './made.js';

const records = (...placed: Records['placed'][number][]): Records => ({ placed, unplaced: [] });
const everywhere = { detection: ground(0.9), covered: ground(1) };
const row = (findings: Findings, id: string): Finding => findings.list.find(({ recordId, anomalyId }) => recordId === id || (recordId === '' && anomalyId === id))!;
const pair = (findings: Findings, r: string, a: string): number => findings.pairs.find(({ recordId, anomalyId }) => recordId === r && anomalyId === a)?.p ?? 0;

describe('by hand', () => {
  it('one record, one anomaly', () => {
    // F = e^(−r²/2s²)/(2πs²) with s² = 36 + 0.09, r = 5; L = (0.9/0.1)/(0.35/0.65); p = 0.8, q = 0.9; ρ = 1e−5/m²; κ = 2e−4/m².
    const s2 = 36.09;
    const F = Math.exp(-25 / (2 * s2)) / (2 * Math.PI * s2);
    const L = 9 / (0.35 / 0.65);
    const w = (0.8 * F * L) / ((1 - 0.72) * (1e-5 * L + 2e-4));
    const findings = reconcile(records(record('R1', 0, 0)), anomalies(anomaly('A1', 3, 4)), everywhere, { unrecordedPerHa: 0.1, othersPerHa: 2 });
    expect(pair(findings, 'R1', 'A1')).toBeCloseTo(w / (1 + w), 6);
    const located = row(findings, 'R1');
    expect(located.finding).toBe('located');
    expect(located.pMatch).toBeCloseTo(w / (1 + w), 6);
    expect(located.distM).toBeCloseTo(5, 9);
    expect(located.azimDeg).toBeCloseTo(36.8699, 3);
    expect([located.x, located.y]).toEqual([3, 4]);
    expect(located.pDetect).toBeCloseTo(0.9, 6);
    expect(located.pRemains).toBeCloseTo(w / (1 + w) + (1 / (1 + w)) * (0.08 / 0.28), 6);
    expect(located.digOrder).toBe(1);
  });

  it('two records, two anomalies: the joint posterior, not the nearest', () => {
    const sites = { R1: [0, 0], R2: [8, 0] } as const;
    const seen = { A1: [6, 3], A2: [12, -1] } as const;
    const L = 9 / (0.35 / 0.65);
    const w = (r: keyof typeof sites, a: keyof typeof seen): number => {
      const d2 = (sites[r][0] - seen[a][0]) ** 2 + (sites[r][1] - seen[a][1]) ** 2;
      return (0.8 * (Math.exp(-d2 / (2 * 36.09)) / (2 * Math.PI * 36.09)) * L) / (0.28 * (1e-5 * L + 2e-4));
    };
    const [a, b, c, d] = [w('R1', 'A1'), w('R1', 'A2'), w('R2', 'A1'), w('R2', 'A2')];
    const z = 1 + a + b + c + d + a * d + b * c;
    const findings = reconcile(records(record('R1', 0, 0), record('R2', 8, 0)), anomalies(anomaly('A1', 6, 3), anomaly('A2', 12, -1)), everywhere, { unrecordedPerHa: 0.1, othersPerHa: 2 });
    expect(pair(findings, 'R1', 'A1')).toBeCloseTo((a + a * d) / z, 6);
    expect(pair(findings, 'R1', 'A2')).toBeCloseTo((b + b * c) / z, 6);
    expect(pair(findings, 'R2', 'A1')).toBeCloseTo((c + b * c) / z, 6);
    expect(pair(findings, 'R2', 'A2')).toBeCloseTo((d + a * d) / z, 6);
    // A1 lies nearer to R2 than to R1, but A2 can only be R2's.
    expect(row(findings, 'R1').anomalyId).toBe('A1');
    expect(row(findings, 'R2').anomalyId).toBe('A2');
  });

  it('an empty search leaves p(1 − q)/(1 − pq) exactly', () => {
    const found = row(reconcile(records(record('R1', 0, 0)), anomalies(), everywhere), 'R1');
    expect(found.finding).toBe('not_found');
    expect(found.pDetect).toBeCloseTo(0.9, 6);
    expect(found.pRemains).toBeCloseTo(0.08 / 0.28, 5);
    expect([found.pMatch, found.distM, found.azimDeg]).toEqual([NaN, NaN, NaN]);
    expect(found.digOrder).toBe(0);
    expect([found.x, found.y]).toEqual([0, 0]);
  });

  it('starts from the same odds of casing against other as the anomalies do', () => {
    expect(CASING_SHARE).toBe(PRIOR.casing);
  });
});

describe('how densely unrecorded sources lie', () => {
  const of = (list: Parameters<typeof intensities>[0], expected = 0): ReturnType<typeof intensities> => intensities(list, { hectares: 20, expected, stated: {} });

  it('is the prior before anything was found, then what the survey shows', () => {
    // Gamma prior of shape 0.5 and mean 0.1 per hectare weighs like 5 hectares: 0.5/25, then (0.5 + 4 · 0.9 − 1.6)/25.
    expect(of([]).unrecorded).toBeCloseTo(0.02, 12);
    expect(intensities([], { hectares: 0, expected: 0, stated: {} }).unrecorded).toBeCloseTo(0.1, 12);
    const four = [1, 2, 3, 4].map((k) => anomaly(`A${k}`, 0, 0));
    expect(of(four, 1.6).unrecorded).toBeCloseTo(2.5 / 25, 12);
    expect(of(four, 9).unrecorded).toBeCloseTo(0.02, 12);
    expect(of(four).others).toBeCloseTo(0.9 / 20, 12);
  });

  it('is what the user states, where stated', () => {
    expect(intensities([anomaly('A1', 0, 0)], { hectares: 20, expected: 0, stated: { unrecordedPerHa: 3, othersPerHa: 7 } })).toEqual({ unrecorded: 3, others: 7 });
  });
});

describe('words', () => {
  it('a casing far from every record is unrecorded, scrap is not', () => {
    const findings = reconcile(records(record('R1', 0, 0, { blunder: 0.05 })), anomalies(anomaly('A1', 90, 120), anomaly('A2', -100, 50, { pCasing: 0.05 })), everywhere);
    const alone = row(findings, 'A1');
    expect(alone.finding).toBe('unrecorded');
    expect(alone.pMatch).toBeGreaterThan(0.95);
    expect(alone.pRemains).toBeGreaterThan(0.5);
    expect([alone.pCovered, alone.pDetect]).toEqual([NaN, NaN]);
    expect([alone.x, alone.y]).toEqual([90, 120]);
    expect(row(findings, 'A2')).toBeUndefined();
    expect(row(findings, 'R1').finding).toBe('not_found');
  });

  it('two casings as near to one record are ambiguous, and the note names both', () => {
    const found = row(reconcile(records(record('R1', 0, 0)), anomalies(anomaly('A1', 4, 0), anomaly('A2', -4, 0)), everywhere), 'R1');
    expect(found.finding).toBe('ambiguous');
    expect(found.note).toMatch(/A1 0\.\d\d.*A2 0\.\d\d|A2 0\.\d\d.*A1 0\.\d\d/);
    expect([found.x, found.y]).toEqual([0, 0]);
    expect(found.digOrder).toBeGreaterThan(0);
    expect(found.pRemains).toBeGreaterThan(0.9);
  });

  it('two permits of one well share its casing: both ambiguous, one rank, no casing lost', () => {
    const findings = reconcile(records(record('R1', 0, 0), record('R1 again', 0, 0)), anomalies(anomaly('A1', 2, 1)), everywhere);
    for (const id of ['R1', 'R1 again']) {
      expect(row(findings, id).finding).toBe('ambiguous');
      expect(row(findings, id).anomalyId).toBe('A1');
      expect(row(findings, id).digOrder).toBe(1);
    }
    expect(findings.list).toHaveLength(2);
  });

  it('no casing drops out where a dozen permits claim it', () => {
    const twelve = Array.from({ length: 12 }, (_, i) => record(`R${i}`, 0.1 * i, 0));
    const findings = reconcile(records(...twelve), anomalies(anomaly('A1', 0, 0)), everywhere);
    expect(findings.list.some(({ anomalyId }) => anomalyId === 'A1')).toBe(true);
  });

  it('a record whose ground nobody walked is not searched, one without a place says why', () => {
    const half = { detection: ground((x) => (x < 0 ? 0.9 : 0)), covered: ground((x) => (x < 0 ? 1 : 0)) };
    const findings = reconcile({
      placed: [record('R1', 60, 0, { blunder: 0.05 }), record('R2', -60, 0)],
      unplaced: [{ recordId: 'R3', source: 'permits.csv', row: 4, column: 'lon', value: '79.9', problem: 'lies in Asia', advice: 'write it with a minus sign' }],
    }, anomalies(), half);
    const unwalked = row(findings, 'R1');
    expect(unwalked.finding).toBe('not_searched');
    expect(unwalked.pCovered).toBeLessThan(0.05);
    expect(unwalked.pRemains).toBeCloseTo(0.8, 2);
    expect(row(findings, 'R2').finding).toBe('not_found');
    const nowhere = row(findings, 'R3');
    expect(nowhere.finding).toBe('not_searched');
    expect(nowhere.x).toBeNaN();
    expect(nowhere.note).toContain('permits.csv, row 4, lon "79.9"');
    expect(nowhere.note).toContain('minus sign');
  });

  it('ground outside the grid and cells without a value count as not searched', () => {
    const holes = ground((x) => (Math.abs(x) < 20 ? NaN : 0.9));
    const found = row(reconcile(records(record('R1', 0, 0)), anomalies(), { detection: holes, covered: { ...holes, values: holes.values.map((v) => (v === v ? 1 : v)) } }), 'R1');
    expect(found.finding).toBe('not_searched');
    expect(found.pDetect).toBeLessThanOrEqual(found.pCovered);
    expect(row(reconcile(records(record('R1', 900, 0)), anomalies(), everywhere), 'R1').pCovered).toBe(0);
  });

  it('digs the surest casing first', () => {
    const findings = reconcile(records(record('R1', 0, 0)), anomalies(anomaly('A1', 100, 100, { pCasing: 0.7 }), anomaly('A2', 1, 1), anomaly('A3', -90, 90, { pCasing: 0.95 })), everywhere);
    const ranked = findings.list.filter(({ digOrder }) => digOrder > 0).toSorted((a, b) => a.digOrder - b.digOrder).map(({ anomalyId }) => anomalyId);
    expect(ranked).toEqual(['A2', 'A3', 'A1']);
  });

  it('thresholds are options', () => {
    const options: Partial<ReconcileOptions> = { locatedAt: 0.999999 };
    expect(row(reconcile(records(record('R1', 0, 0)), anomalies(anomaly('A1', 3, 4)), everywhere, options), 'R1').finding).toBe('ambiguous');
    expect(RECONCILE_DEFAULTS.locatedAt).toBe(0.9);
    expect(RECONCILE_DEFAULTS.notSearchedBelow).toBe(0.05);
  });
});

describe('what must hold', () => {
  const placed = [record('R1', 0, 0, { blunder: 0.05 }), record('R2', 14, 3, { blunder: 0.05 }), record('R3', 9, -12, { sdM: 10 }), record('R4', -120, 80), record('R5', 60, 60, { pCasing: 0.3 })];
  const list = [anomaly('A1', 5, 1), anomaly('A2', 12, -2, { pCasing: 0.6 }), anomaly('A3', 20, -9, { pCasing: 0.1 }), anomaly('A4', -118, 83), anomaly('A5', -30, -70), anomaly('A6', 64, 57, { pCasing: 0.4 })];
  const usual = reconcile(records(...placed), anomalies(...list), everywhere);

  it('nothing depends on the order or the names of records and anomalies', () => {
    const rename = (id: string): string => (id === '' ? '' : `Z${9 - Number(id.slice(1))}${id[0]}`);
    const turned = reconcile(
      records(...placed.toReversed().map((r) => ({ ...r, recordId: rename(r.recordId) }))),
      anomalies(...[3, 0, 5, 2, 4, 1].map((j) => ({ ...list[j]!, anomalyId: rename(list[j]!.anomalyId) }))), everywhere,
    );
    for (const before of usual.list) {
      const after = row(turned, rename(before.recordId === '' ? before.anomalyId : before.recordId));
      expect(after.finding).toBe(before.finding);
      expect(after.anomalyId).toBe(rename(before.anomalyId));
      expect(after.digOrder).toBe(before.digOrder);
      for (const key of ['pMatch', 'pCovered', 'pDetect', 'pRemains'] as const) {
        if (Number.isNaN(before[key])) expect(after[key]).toBeNaN(); else expect(after[key]).toBeCloseTo(before[key], 9);
      }
    }
    expect(turned.pairs).toHaveLength(usual.pairs.length);
  });

  it('a record has at most one casing and a casing at most one record', () => {
    const sum = (key: 'recordId' | 'anomalyId', id: string): number => usual.pairs.filter((p) => p[key] === id).reduce((total, { p }) => total + p, 0);
    for (const { recordId } of placed) expect(sum('recordId', recordId)).toBeLessThanOrEqual(1 + 1e-9);
    for (const { anomalyId } of list) expect(sum('anomalyId', anomalyId)).toBeLessThanOrEqual(1 + 1e-9);
  });

  it('less ground covered or less chance there: p_detect falls, p_remains of what was not found rises', () => {
    const lone = records(record('R1', 0, 0, { blunder: 0.05 }));
    let before = { pDetect: 1, pRemains: 0 };
    for (const [reach, chance] of [[200, 0.99], [200, 0.8], [12, 0.8], [6, 0.8], [6, 0.4], [0, 0.4]] as const) {
      const covered = ground((x) => (Math.abs(x) < reach ? 1 : 0));
      const found = row(reconcile(lone, anomalies(), { covered, detection: { ...covered, values: covered.values.map((v) => v * chance) } }), 'R1');
      expect(found.pDetect).toBeLessThan(before.pDetect);
      expect(found.pRemains).toBeGreaterThan(before.pRemains);
      expect(found.pDetect).toBeLessThanOrEqual(found.pCovered);
      before = found;
    }
    expect(before.pRemains).toBeCloseTo(0.8, 9);
  });

  it('a likelier casing, a nearer one, a surer record: the match is the surer', () => {
    const p = (r: Parameters<typeof record>[3], a: Parameters<typeof anomaly>[3], x = 8): number =>
      pair(reconcile(records(record('R1', 0, 0, r)), anomalies(anomaly('A1', x, 0, a)), everywhere, { unrecordedPerHa: 0.1, othersPerHa: 5 }), 'R1', 'A1');
    const base = p({}, { pCasing: 0.3 });
    expect(p({}, { pCasing: 0.6 })).toBeGreaterThan(base);
    expect(p({ pCasing: 0.95 }, { pCasing: 0.3 })).toBeGreaterThan(base);
    expect(p({}, { pCasing: 0.3 }, 4)).toBeGreaterThan(base);
    expect(p({}, { pCasing: 0.3 }, 25)).toBeLessThan(base);
    expect(p({ blunder: 0.2 }, { pCasing: 0.3 })).toBeLessThan(base);
  });

  it('stands certainties at either end', () => {
    const findings = reconcile(records(record('R1', 0, 0, { sdM: 0, pCasing: 1 }), record('R2', 50, 0, { pCasing: 0 })), anomalies(anomaly('A1', 0.2, 0, { pCasing: 1 }), anomaly('A2', 50, 1, { pCasing: 0 })), { detection: ground(1), covered: ground(1) });
    expect(row(findings, 'R1').finding).toBe('located');
    expect(row(findings, 'R2').finding).toBe('not_found');
    expect(row(findings, 'R2').pRemains).toBe(0);
    for (const { pRemains, pDetect } of findings.list) for (const p of [pRemains, pDetect]) expect(p >= 0 && p <= 1).toBe(true);
  });

  it('a blunder may reach a casing far away, with a small chance', () => {
    const p = pair(reconcile(records(record('R1', 0, 0, { blunder: 0.3 })), anomalies(anomaly('A1', 150, 0)), everywhere), 'R1', 'A1');
    expect(p).toBeGreaterThan(0.001);
    expect(p).toBeLessThan(0.05);
    expect(pair(reconcile(records(record('R1', 0, 0)), anomalies(anomaly('A1', 150, 0)), everywhere), 'R1', 'A1')).toBe(0);
  });
});

describe('operation', () => {
  const task = (inputs: Record<string, unknown>, parameters: Record<string, unknown> = {}): Task =>
    ({ parameters, inputs, seed: 1, site: null as never, files: null as never, progress() {}, warn() {} });

  it('reads its parameters and takes ground that was heard as covered where no other grid is given', async () => {
    const inputs = { records: records(record('R1', 0, 0)), anomalies: anomalies(anomaly('A1', 3, 4)), detection: everywhere.detection };
    const { findings } = await operation.run(task(inputs, { located_at: 0.9999999 })) as { findings: Findings };
    expect(row(findings, 'R1').finding).toBe('ambiguous');
    expect(row(findings, 'R1').pCovered).toBeCloseTo(1, 6);
    expect(operation.parameters.properties.located_at!.default).toBe(RECONCILE_DEFAULTS.locatedAt);
  });

  it('refuses grids on different lattices', async () => {
    await expect(operation.run(task({ records: records(), anomalies: anomalies(), detection: ground(0.9), covered: ground(1, { cellM: 4 }) }))).rejects.toThrow(/lattice of the detection grid/);
  });
});
