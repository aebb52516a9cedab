import { existsSync, readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import { describe, expect, it } from 'vitest';
import { delineate } from '../../src/anomalies/delineate.js';
import type { Anomaly } from '../../src/anomalies/types.js';
import { UserError } from '../../src/errors.js';
import type { Readings } from '../../src/readings/types.js';
import { madeSite, madeSurvey, plainGrid, type MadeOptions, type MadeSurvey } from './madeSurvey.js';

/** Half the readings a second of a usual survey, so that the tests stay quick. */
const QUICK: Partial<MadeOptions> = { rateHz: 5 };
/** 95 % of a bivariate normal lies within this squared distance. */
const CHI2_95 = 5.991;

function run(made: MadeSurvey, change: Partial<Readings> = {}) {
  const readings = { ...made.readings, ...change };
  return delineate(readings, plainGrid(readings, { cellM: 2, reachM: 6 }), made.site);
}

function casingNear(list: readonly Anomaly[], place: { readonly x: number; readonly y: number }, withinM: number): Anomaly | undefined {
  const away = (anomaly: Anomaly) => Math.hypot(anomaly.x - place.x, anomaly.y - place.y);
  return list.filter((anomaly) => anomaly.class === 'casing' && away(anomaly) < withinM).toSorted((a, b) => away(a) - away(b))[0];
}

function mahalanobis2({ x, y, cov: [ee, en, nn] }: Anomaly, place: { readonly x: number; readonly y: number }): number {
  const [dx, dy] = [place.x - x, place.y - y];
  return (nn * dx * dx - 2 * en * dx * dy + ee * dy * dy) / (ee * nn - en * en);
}

describe('delineate on made surveys with collars, scrap, a pipe and wandering positions', () => {
  const surveys = [1, 2, 4].map((seed) => madeSurvey(seed, { ...QUICK, casings: 10 }));
  const results = surveys.map((made) => run(made));
  const casings = surveys.flatMap((made, k) => made.casings.map((casing) => ({ casing, hit: casingNear(results[k]!.list, casing, 3) })));

  it('finds every casing within a metre, as a casing', () => {
    const far = casings.filter(({ casing, hit }) => !hit || Math.hypot(hit.x - casing.x, hit.y - casing.y) >= 1).map(({ casing }) => casing);
    expect(far).toEqual([]);
  });

  it('states ellipses that hold 90 to 99 % of true places', () => {
    const share = casings.filter(({ casing, hit }) => hit && mahalanobis2(hit, casing) <= CHI2_95).length / casings.length;
    expect(share).toBeGreaterThanOrEqual(0.86); // 30 casings: two standard errors below 95 %.
    expect(share).toBeLessThan(1.0001);
  });

  it('would not do so if positions were taken as exact', () => {
    const made = surveys[0]!;
    const { list } = run(made, { positionSdM: 0 });
    const inside = made.casings.filter((casing) => {
      const hit = casingNear(list, casing, 3);
      return hit && mahalanobis2(hit, casing) <= CHI2_95;
    });
    expect(inside.length / made.casings.length).toBeLessThan(0.7);
  });

  it('takes scrap and pipe for casings at most once in a survey', () => {
    results.forEach(({ list }, k) => {
      const others = list.filter((anomaly) => anomaly.class === 'casing' && surveys[k]!.casings.every(({ x, y }) => Math.hypot(anomaly.x - x, anomaly.y - y) >= 3));
      expect(others.length).toBeLessThanOrEqual(1);
    });
  });

  it('makes one linear anomaly or few of the pipe, with its strike', () => {
    results.forEach(({ list }, k) => {
      const { pipe } = surveys[k]!;
      const [first, last] = [pipe[0]!, pipe.at(-1)!];
      const strikeDeg = (Math.atan2(last[0] - first[0], last[1] - first[1]) * 180) / Math.PI;
      const longest = list.filter((anomaly) => anomaly.class === 'linear').toSorted((a, b) => b.semiMajM - a.semiMajM)[0];
      expect(longest).toBeDefined();
      expect(Math.abs(longest!.strikeDeg - strikeDeg)).toBeLessThan(5);
    });
  });

  it('gives the sign of the top, its strength and its depth within their errors', () => {
    for (const { casing, hit } of casings) {
      expect(Math.sign(hit!.poleAM)).toBe(Math.sign(casing.poleAM));
      expect(Math.abs(Math.log(hit!.poleAM / casing.poleAM))).toBeLessThan(Math.log(2));
      expect(Math.abs(hit!.depthM - casing.depthM)).toBeLessThan(1.5);
    }
  });

  it('draws an outline around each source and numbers them by falling deflection', () => {
    for (const { list } of results) {
      expect(list.map((anomaly) => anomaly.anomalyId)).toEqual(list.map((_, k) => `A${k + 1}`));
      expect(list.map((anomaly) => anomaly.snr)).toEqual(list.map((anomaly) => anomaly.snr).toSorted((a, b) => b - a));
      for (const anomaly of list) {
        expect(anomaly.areaM2).toBeGreaterThan(0);
        expect(anomaly.outline.length).toBeGreaterThan(0);
        expect(anomaly.semiMinM).toBeGreaterThan(0);
        expect(anomaly.pCasing).toBeGreaterThanOrEqual(0.002);
        expect(anomaly.pCasing).toBeLessThanOrEqual(0.99);
      }
    }
  });
});

describe('delineate', () => {
  const plain: Partial<MadeOptions> = { ...QUICK, scrap: 0, pipe: false, sizeM: 120, casings: 4 };
  const sizes = (made: MadeSurvey) => {
    const { list } = run(made);
    return made.casings.map((casing) => Math.log(casingNear(list, casing, 3)?.semiMajM ?? made.readings.positionSdM * 10));
  };
  const mean = (values: readonly number[]) => values.reduce((a, b) => a + b, 0) / values.length;

  it('states larger errors where lines are missing, noise or position error is greater', () => {
    const usual = mean(sizes(madeSurvey(7, plain)));
    expect(mean(sizes(madeSurvey(7, { ...plain, every: 2 })))).toBeGreaterThan(usual + 0.1);
    expect(mean(sizes(madeSurvey(7, { ...plain, positionSdM: 0.6 })))).toBeGreaterThan(usual + 0.4);
    expect(mean(sizes(madeSurvey(7, { ...plain, noise: 2 })))).toBeGreaterThan(usual);
  });

  it('does without times, and gives the same answer twice', () => {
    const made = madeSurvey(8, plain);
    const untimed = { timeS: new Float64Array(made.readings.count).fill(NaN) };
    const once = run(made, untimed);
    for (const casing of made.casings) expect(casingNear(once.list, casing, 1)).toBeDefined();
    expect(run(made, untimed)).toEqual(once);
  });

  it('finds nothing like a casing on empty ground', () => {
    const { list, noise } = run(madeSurvey(9, { ...plain, casings: 0 }));
    expect(list.filter((anomaly) => anomaly.class === 'casing')).toEqual([]);
    expect(noise.whiteSdNT).toBeCloseTo(0.15, 1);
  });

  it('refuses readings without a residual', () => {
    const made = madeSurvey(9, { ...plain, casings: 0, sizeM: 30 });
    expect(() => run(made, { residual: new Float64Array(made.readings.count).fill(NaN) })).toThrow(UserError);
  });
});

const AIRBORNE = new URL('../../../shared/checks/airborne_lines.csv.gz', import.meta.url);

describe.skipIf(!existsSync(AIRBORNE))('delineate on real flight lines, 200 m apart and 80 m above ground', () => {
  it('finds sources of rock, all with a finite error, and no casing', () => {
    const rows = gunzipSync(readFileSync(AIRBORNE)).toString().trim().split('\n').slice(1).map((row) => row.split(','));
    const names = [...new Set(rows.map((row) => row[0]!))].slice(0, 10);
    const used = rows.filter((row) => names.includes(row[0]!));
    // A plane tangent to the sphere is good enough for where sources lie to each other.
    const metres = 111_195;
    const residual = Float64Array.from(used, (row) => Number(row[4]));
    const readings: Readings = {
      count: used.length, x: Float64Array.from(used, (row) => (Number(row[1]) - 140.6) * metres * Math.cos((22 * Math.PI) / 180)),
      y: Float64Array.from(used, (row) => (Number(row[2]) + 22) * metres), heightM: new Float64Array(used.length).fill(80),
      timeS: new Float64Array(used.length).fill(NaN), line: Int32Array.from(used, (row) => names.indexOf(row[0]!)), lineNames: names,
      raw: residual, steps: [], residual, flag: new Uint8Array(used.length), positionSdM: 5, positionCorrelationS: 60, warnings: [],
    };
    const { list } = delineate(readings, plainGrid(readings, { cellM: 50, reachM: 150 }), madeSite(), { maxSources: 25 });
    expect(list.length).toBeGreaterThan(3);
    expect(list.filter((anomaly) => anomaly.class === 'casing')).toEqual([]);
    for (const anomaly of list) {
      for (const value of [anomaly.x, anomaly.y, anomaly.posSdM, anomaly.snr, anomaly.peakNT, anomaly.depthM, anomaly.areaM2]) expect(Number.isFinite(value)).toBe(true);
    }
  });
});
