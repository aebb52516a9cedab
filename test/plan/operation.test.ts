import { describe, expect, it } from 'vitest';
import { plan } from '../../src/operations/plan.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { fieldSheet } from '../../src/plan/fieldSheet.js';
import { magneticAzimuthDeg, trueAzimuthDeg } from '../../src/plan/azimuths.js';
import { planChances } from '../../src/plan/planChances.js';
import { PLAN_DEFAULTS, planSurvey } from '../../src/plan/planSurvey.js';
import { spacingForTarget, worstChance } from '../../src/plan/spacingForTarget.js';
import type { SurveyPlan } from '../../src/plan/types.js';
import type { Records, WellRecord } from '../../src/records/types.js';
import type { Site } from '../../src/site/types.js';
import { rectangle, testSite, turned } from './testSite.js';

const site = testSite(rectangle(0, 0, 200, 120));
const listening = {
  heightM: 1.5, target: site.target, mainField: site.mainField, falseAlarmsPerHa: 0.1,
  noise: { whiteSdNT: 1, correlatedSdNT: 3, correlationM: 15, positionSdM: 0.3, positionCorrelationS: 60 },
};

function record(recordId: string, [x, y]: readonly [number, number], options: { sdM: number; blunderShare?: number }): WellRecord {
  const { sdM, blunderShare = 0 } = options;
  return {
    recordId, source: 'made', row: 1, x, y, semiMajM: 2.4477 * sdM, semiMinM: 2.4477 * sdM, azimDeg: 0, posSdM: sdM,
    density: { parts: [
      { role: 'place', kind: 'gaussian', weight: 1 - blunderShare, x, y, cov: [sdM ** 2, 0, sdM ** 2] },
      { role: 'blunder', kind: 'disc', weight: blunderShare, x, y, radiusM: 1609 },
    ] },
    datum: 'NAD83', shift: '', basis: '', note: '', group: null, pCasing: 0.8,
  };
}
const recordsOf = (...placed: WellRecord[]): Records => ({ placed, unplaced: [] });

describe('chances promised', () => {
  const open = { spacingM: 8, tieRatio: 0 };
  it('are all but certain in the middle, half at the edge, none outside', () => {
    const { chances } = planSurvey(site, recordsOf(
      record('middle', [100, 60], { sdM: 5 }), record('edge', [0, 60], { sdM: 5 }), record('outside', [-60, 60], { sdM: 5 }),
    ), open);
    const [middle, edge, outside] = chances;
    expect(middle!.pCovered).toBeCloseTo(1, 3);
    expect(middle!.pDetect).toBeGreaterThan(0.99);
    expect(edge!.pCovered).toBeCloseTo(0.5, 2);
    expect(outside!.pCovered).toBeLessThan(1e-6);
    for (const { pCovered, pDetect } of chances) expect(pDetect).toBeLessThanOrEqual(pCovered + 1e-12);
  });
  it('count a blunder over the whole mile', () => {
    const [chance] = planSurvey(site, recordsOf(record('blunder', [100, 60], { sdM: 5, blunderShare: 1 }), record('x', [100, 60], { sdM: 5 })), open).chances;
    // The parcel's share of the disc.
    expect(chance!.pCovered).toBeCloseTo((200 * 120) / (Math.PI * 1609 ** 2), 4);
  });
  it('fall with a weaker target, a higher sensor and more noise', () => {
    const weak: Site = { ...site, target: { ...site.target, poleAM: [3, 6] } };
    const detect = (options: object, on = weak): number => planSurvey(on, recordsOf(record('r', [100, 60], { sdM: 10 })), { ...open, ...options }).chances[0]!.pDetect;
    const base = detect({});
    expect(base).toBeGreaterThan(0.2);
    expect(base).toBeLessThan(0.98);
    expect(detect({}, { ...site, target: { ...site.target, poleAM: [2, 4] } })).toBeLessThan(base);
    expect(detect({ sensorM: 3 })).toBeLessThan(base);
    expect(detect({ geologyNt: 6 })).toBeLessThan(base);
    expect(detect({ spacingM: 4 })).toBeGreaterThan(base);
  });
  it('are the same for a record alone and beside others', () => {
    const { lines } = planSurvey(site, null, open);
    const [a, b] = [record('a', [60, 40], { sdM: 8 }), record('b', [150, 90], { sdM: 8 })];
    const together = planChances(lines, [a, b], { open: site.open, listening });
    const alone = planChances(lines, [a], { open: site.open, listening });
    expect(together[0]!.pDetect).toBeCloseTo(alone[0]!.pDetect, 3);
  });
});

describe('spacingForTarget', () => {
  it('is the widest that keeps the chance: half a metre more does not', () => {
    for (const poleAM of [[2, 4], [4, 8]] as const) {
      const faint = { ...listening, target: { ...listening.target, poleAM } };
      const { spacingM, chance } = spacingForTarget(faint, { azimuthDeg: 30, wantedChance: 0.9 });
      expect(chance).toBeGreaterThanOrEqual(0.9);
      expect(chance).toBe(worstChance(spacingM, faint, 30));
      expect(worstChance(spacingM + 0.5, faint, 30)).toBeLessThan(0.9);
    }
  });
  it('leaves no ground beyond the reach of both lines, however strong the target', () => {
    const { spacingM } = spacingForTarget({ ...listening, target: { ...listening.target, poleAM: [1e5, 2e5] } }, { azimuthDeg: 0, wantedChance: 0.5 });
    // 1.907 distances of 1.5 + 1.25 m to either side.
    expect(spacingM).toBe(10);
    expect(worstChance(10.5, listening, 0)).toBe(0);
  });
  it('gives the closest lines where the target cannot be had', () => {
    const hopeless = { ...listening, target: { ...listening.target, poleAM: [0.01, 0.02] as const } };
    const { spacingM, chance } = spacingForTarget(hopeless, { azimuthDeg: 0, wantedChance: 0.95 });
    expect(spacingM).toBe(1);
    expect(chance).toBeLessThan(0.1);
    const small = { ...testSite(rectangle(0, 0, 40, 30)), target: hopeless.target };
    expect(planSurvey(small, null, {}).notes.join(' ')).toContain('less than the 95 % wanted');
  });
  it('is the default of a plan, which says what it rests on', () => {
    const { spacingM, notes } = planSurvey(site, null, {});
    expect(spacingM).toBe(10);
    expect(notes[2]).toMatch(/^At the worst place between two lines a casing of 60 to 400 A·m at 0 to 2\.5 m is detected with a chance of over 99\.9 %/);
    expect(planSurvey(site, null, { spacingM: 25 }).notes[2]).toContain('beyond the reach of both');
  });
});

describe('ground from records', () => {
  it('is searched, and nothing else', () => {
    const { searchArea, lines, notes } = planSurvey(site, recordsOf(record('a', [60, 60], { sdM: 4 }), record('b', [200, 60], { sdM: 4 })), { area: 'records', spacingM: 6 });
    expect(searchArea).toHaveLength(2);
    const reach = 4 * 2.4477 + PLAN_DEFAULTS.marginM + 0.05;
    for (const { x0, y0, x1, y1 } of lines) {
      for (const [x, y] of [[x0, y0], [x1, y1]] as const) expect(Math.min(Math.hypot(x - 60, y - 60), Math.hypot(x - 200, y - 60))).toBeLessThan(reach);
      expect(Math.max(x0, x1)).toBeLessThan(200.001);
    }
    expect(notes[0]).toContain('survey lines 6 m apart');
  });
  it('is refused where no record reaches the parcel', () => {
    expect(() => planSurvey(site, recordsOf(record('far', [900, 60], { sdM: 4 })), { area: 'records' })).toThrow('no record whose ground reaches');
  });
});

describe('directions', () => {
  // Grid north half a degree east of true north, compass north nine degrees west of it.
  it('add the convergence and take off the declination', () => {
    expect(trueAzimuthDeg(359.8, site.mainField)).toBeCloseTo(0.3, 9);
    expect(magneticAzimuthDeg(90, site.mainField)).toBeCloseTo(99.5, 9);
  });
  it('stand on the field sheet with the ends in the unit of the CRS', () => {
    const zone = { ...testSite(turned(rectangle(400_000, 100_000, 400_040, 100_100), 0)), frame: { ...site.frame, metresPerUnit: 1200 / 3937 } };
    const here = { ...zone, toWgs84: { ...zone.toWgs84, place: (lonDeg: number, latDeg: number) => ({ lonDeg, latDeg, shift: '', sdM: 0, sharedSdM: 0 }) } };
    const plan = planSurvey(here, null, { spacingM: 10, tieRatio: 0 });
    const [row] = fieldSheet(plan, here);
    expect(row).toMatchObject({ visit: 1, lineNo: plan.lines[0]!.lineNo, kind: 'survey' });
    expect(row!.startEast * (1200 / 3937)).toBeCloseTo(plan.lines[0]!.x0, 6);
    expect(here.frame.forward(row!.endLonDeg, row!.endLatDeg)[1]).toBeCloseTo(plan.lines[0]!.y1, 4);
    expect(row!.magneticAzimDeg - row!.gridAzimDeg).toBeCloseTo(9.5, 9);
  });
});

describe('plan', () => {
  it('runs from parameters as the survey file has them', async () => {
    const parameters = readParameters({ spacing_m: '25 ft', tie_ratio: 0 }, plan.parameters, { where: 'survey.json, plan', resolve: (path) => path });
    const out = await plan.run({
      site, parameters, inputs: {}, seed: 0, progress: () => {}, warn: () => {},
      files: { has: async () => false, read: async () => { throw new Error('nothing is read'); } },
    });
    const made = out.plan as SurveyPlan;
    expect(made.spacingM).toBeCloseTo(7.62, 9);
    expect(made.lines).toHaveLength(16);
    expect(made.chances).toEqual([]);
  });
});
