import { describe, expect, it } from 'vitest';
import { areaBounds, pointInArea } from '../../src/density/area.js';
import type { Area } from '../../src/density/types.js';
import { UserError } from '../../src/errors.js';
import { planSurvey } from '../../src/plan/planSurvey.js';
import { OpenWays } from '../../src/plan/openWays.js';
import type { PlanLine, SurveyPlan } from '../../src/plan/types.js';
import { evenly, rectangle, ring, testSite, toSegment, turned } from './testSite.js';

const total = (plan: SurveyPlan, kind: string): number => plan.lines.filter((line) => line.kind === kind).reduce((sum, { lengthM }) => sum + lengthM, 0);
const count = (plan: SurveyPlan, kind: string): number => plan.lines.filter((line) => line.kind === kind).length;

/** A concave tract with a pond, and a corner that runs out into a tip. */
const tract: Area = [[ring([0, 0], [420, 0], [420, 160], [260, 160], [260, 240], [420, 240], [420, 400], [150, 400], [0, 250])]];
const pond: Area = [[ring([100, 90], [170, 80], [200, 130], [150, 190], [90, 150])]];

describe('a rectangle of 100 m by 40 m', () => {
  const plan = planSurvey(testSite(rectangle(0, 0, 40, 100)), null, { spacingM: 10, tieRatio: 5 });
  it('has four lines of 100 m, ten metres apart, and two ties of 40 m', () => {
    expect(plan.lineAzimDeg).toBe(0);
    expect(plan.spacingM).toBe(10);
    const survey = plan.lines.filter(({ kind }) => kind === 'survey');
    expect(survey.map(({ x0 }) => x0)).toEqual([5, 15, 25, 35].map((x) => expect.closeTo(x, 9)));
    expect(survey.map(({ lengthM }) => lengthM)).toEqual([100, 100, 100, 100].map((l) => expect.closeTo(l, 9)));
    const ties = plan.lines.filter(({ kind }) => kind === 'tie');
    expect(ties.map(({ y0 }) => Math.round(y0)).toSorted((a, b) => a - b)).toEqual([25, 75]);
    expect(ties.map(({ lengthM }) => lengthM)).toEqual([40, 40].map((l) => expect.closeTo(l, 9)));
  });
  it('is walked to and fro, ties after', () => {
    expect(plan.lines.map(({ visit }) => visit)).toEqual([1, 2, 3, 4, 5, 6]);
    expect(plan.lines.slice(0, 4).map(({ azimDeg }) => Math.round(azimDeg))).toEqual([0, 180, 0, 180]);
    expect(plan.notes[0]).toMatch(/^4 survey lines 10 m apart and 2 tie lines on 0\.4 ha: 480 m of lines and \d+ m of ways between them, in 1 outing\.$/);
  });
  it('follows a stated azimuth', () => {
    const east = planSurvey(testSite(rectangle(0, 0, 40, 100)), null, { spacingM: 10, azimuthDeg: 90, tieRatio: 0 });
    expect(count(east, 'survey')).toBe(10);
    expect(count(east, 'tie')).toBe(0);
    expect(total(east, 'survey')).toBeCloseTo(400, 6);
  });
});

describe('concave ground with a pond', () => {
  const site = testSite(tract, pond);
  const spacingM = 8;
  const plan = planSurvey(site, null, { spacingM });
  it('leaves no point of the ground farther than half a spacing from a line, but for what it says', () => {
    const { west, south, east, north } = areaBounds(site.open);
    let [inside, far, farthest] = [0, 0, 0];
    for (let i = 0; i < 20_000; i++) {
      const [a, b] = evenly(i);
      const [x, y] = [west + a * (east - west), south + b * (north - south)];
      if (!pointInArea(site.open, x, y)) continue;
      inside++;
      const distance = Math.min(...plan.lines.filter(({ kind }) => kind === 'survey').map((line) => toSegment(x, y, line)));
      if (distance > spacingM / 2) far++;
      farthest = Math.max(farthest, distance);
    }
    expect(inside).toBeGreaterThan(10_000);
    expect(far / inside).toBeLessThan(0.005);
    expect(farthest).toBeLessThan(spacingM);
  });
  it('keeps every point of every line on open ground', () => {
    for (const { x0, y0, x1, y1 } of plan.lines) {
      for (let t = 0.0005; t < 1; t += 0.01) expect(pointInArea(site.open, x0 + t * (x1 - x0), y0 + t * (y1 - y0))).toBe(true);
    }
  });
  it('walks every line once, numbered', () => {
    expect(plan.lines.map(({ lineNo }) => lineNo).toSorted((a, b) => a - b)).toEqual(plan.lines.map((_, i) => i + 1));
    expect(plan.lines.map(({ visit }) => visit)).toEqual(plan.lines.map((_, i) => i + 1));
  });
  it('has the same lines when everything is turned', () => {
    for (const by of [17, 61.3, 142]) {
      const other = planSurvey(testSite(turned(tract, by), turned(pond, by)), null, { spacingM });
      expect(count(other, 'survey')).toBe(count(plan, 'survey'));
      expect(count(other, 'tie')).toBe(count(plan, 'tie'));
      expect(total(other, 'survey')).toBeCloseTo(total(plan, 'survey'), 1);
      expect(total(other, 'tie')).toBeCloseTo(total(plan, 'tie'), 1);
      expect(Math.abs(Math.sin(((other.lineAzimDeg - plan.lineAzimDeg - by) * Math.PI) / 180))).toBeLessThan(1e-6);
    }
  });
  it('says which ways lead round, and none leaves the ground', () => {
    const ways = new OpenWays(site.open);
    const kinds = plan.lines.slice(1).map((line, i) => ways.way(plan.lines[i]!.x1, plan.lines[i]!.y1, line.x0, line.y0).kind);
    expect(kinds).not.toContain('outside');
    expect(plan.notes.some((note) => note.includes('round ground that may not be walked'))).toBe(kinds.includes('round'));
  });
  it('counts the lines that no tie crosses', () => {
    const ties = plan.lines.filter(({ kind }) => kind === 'tie');
    const crosses = (a: PlanLine, b: PlanLine): boolean => {
      const side = (l: PlanLine, x: number, y: number): number => Math.sign((l.x1 - l.x0) * (y - l.y0) - (l.y1 - l.y0) * (x - l.x0));
      return side(a, b.x0, b.y0) !== side(a, b.x1, b.y1) && side(b, a.x0, a.y0) !== side(b, a.x1, a.y1);
    };
    const untied = plan.lines.filter((line) => line.kind === 'survey' && !ties.some((tie) => crosses(line, tie))).length;
    expect(untied).toBeGreaterThan(0);
    expect(plan.notes.find((note) => note.includes('no tie line'))).toMatch(new RegExp(`^${untied} survey lines? (is|are) crossed by no tie line`));
    expect(planSurvey(site, null, { spacingM, tieRatio: 0 }).notes.some((note) => note.includes('no tie line'))).toBe(false);
  });
  it('saves ways against walking line by line', () => {
    expect(plan.notes.find((note) => note.includes('saves'))).toMatch(/saves [\d.]+ k?m of ways/);
  });
});

describe('outings', () => {
  it('are cut where the way would be too long', () => {
    const plan = planSurvey(testSite(rectangle(0, 0, 40, 100)), null, { spacingM: 10, tieRatio: 0, sortieLengthM: 215 });
    expect(plan.lines.map(({ sortie }) => sortie)).toEqual([1, 1, 2, 2]);
    const long = planSurvey(testSite(rectangle(0, 0, 40, 100)), null, { spacingM: 10, tieRatio: 0, sortieLengthM: 50 });
    expect(long.lines.map(({ sortie }) => sortie)).toEqual([1, 2, 3, 4]);
  });
});

function code(run: () => unknown): string {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.code;
  }
  return 'none';
}

describe('what cannot be planned', () => {
  it('is a UserError', () => {
    const site = testSite(rectangle(0, 0, 40, 100));
    expect(code(() => planSurvey(site, null, { area: 'records' }))).toBe('input_missing');
    expect(code(() => planSurvey(testSite(rectangle(0, 0, 3, 3)), null, {}))).toBe('no_data');
  });
});
