import { describe, expect, it } from 'vitest';
import { mainFieldAt } from '../../src/field/mainField.js';
import { madSd } from '../../src/numerics/robust.js';
import { Random } from '../../src/numerics/random.js';
import { makeChunks } from '../../src/readings/chunks.js';
import { courses } from '../../src/readings/courses.js';
import { headingEffect } from '../../src/readings/headingEffect.js';
import { decimalYearOf, mainFieldAlong } from '../../src/readings/mainFieldAlong.js';
import { regionalField } from '../../src/readings/regionalField.js';
import { findRuns } from '../../src/readings/runs.js';
import { timeDrift } from '../../src/readings/timeDrift.js';
import { CORNER, START_S, testSite, walked, type Walked } from './support.js';

type FieldAt = (walk: Walked, i: number) => number;

function chunks(walk: Walked, field: FieldAt, lengthM = 2.5) {
  const count = walk.x.length;
  const runs = findRuns({ ...walk, count });
  const values = Float64Array.from(walk.x, (_, i) => field(walk, i));
  return makeChunks(values, { ...walk, courseDeg: courses(walk, runs), flag: new Uint8Array(count) }, { runs, lengthM });
}

/** Vertical field of a casing 3 m under the sensor, of 1,500 nT, at two places of the parcel. */
function steel({ x, y }: Walked, i: number): number {
  return [[60, 40], [140, 130]].reduce((sum, [a, b]) => {
    const r2 = (x[i]! - CORNER[0] - a!) ** 2 + (y[i]! - CORNER[1] - b!) ** 2;
    return sum + 1500 * (1 + r2 / 9) ** -1.5;
  }, 0);
}

describe('headingEffect', () => {
  const noise = new Random(5);
  const ground: FieldAt = (walk, i) => 0.4 * (walk.x[i]! - CORNER[0]) - 0.2 * (walk.y[i]! - CORNER[1]) + steel(walk, i) + 0.2 * noise.normal();

  it('finds the first harmonic along lines to and fro, under a slope and over steel', () => {
    const effect = headingEffect(chunks(walked(), (walk, i) => ground(walk, i) + 1.5 * walk.way[i]!));
    if (effect.kind !== 'estimated') throw new Error(effect.reason);
    // To north less to south: twice the harmonic. The steel's tails lie on one side of the comparisons and may bend it a little.
    expect(Math.abs((effect.effectNT(0) - effect.effectNT(180)) / 2 - 1.5)).toBeLessThan(0.1);
    expect(effect.effectNT(NaN)).toBe(0);
    expect(effect.summary).toContain('along the lines');
    expect(effect.summary).not.toContain('second');
  });

  it('finds the second harmonic too where tie lines cross', () => {
    const lines = walked();
    const ties = walked({ lines: 10, spacingM: 20 });
    const swap = { ...ties, x: ties.y.map((y) => y - CORNER[1] + CORNER[0]), y: ties.x.map((x) => x - CORNER[0] + CORNER[1]) };
    const count = lines.x.length + ties.x.length;
    const both: Walked = {
      x: Float64Array.of(...lines.x, ...swap.x), y: Float64Array.of(...lines.y, ...swap.y),
      timeS: Float64Array.of(...lines.timeS, ...ties.timeS.map((t) => t + 20_000)), line: Int32Array.of(...lines.line, ...ties.line.map((k) => k + 20)),
      way: new Int8Array(count),
    };
    const n = lines.x.length;
    const course = (i: number): number => (i < n ? (lines.way[i] === 1 ? 0 : 180) : ties.way[i - n] === 1 ? 90 : 270);
    const wanted = (deg: number): number => 1.2 * Math.cos((deg - 40) * Math.PI / 180) + 0.9 * Math.cos(2 * deg * Math.PI / 180);
    const effect = headingEffect(chunks(both, (walk, i) => ground(walk, i) + wanted(course(i))));
    if (effect.kind !== 'estimated') throw new Error(effect.reason);
    for (const deg of [90, 180, 270]) {
      expect(effect.effectNT(deg) - effect.effectNT(0)).toBeCloseTo(wanted(deg) - wanted(0), 0.7);
    }
  });

  it('finds none where there is none', () => {
    const effect = headingEffect(chunks(walked(), ground));
    if (effect.kind !== 'estimated') throw new Error(effect.reason);
    expect(Math.abs(effect.effectNT(0))).toBeLessThan(0.1);
  });

  it('says why where all lines are walked the same way', () => {
    const walk = walked();
    const oneWay = { ...walk, y: walk.y.map((y, i) => (walk.way[i] === 1 ? y : 2 * CORNER[1] + 200 - y)) };
    const effect = headingEffect(chunks(oneWay, ground));
    expect(effect.kind).toBe('none');
  });
});

describe('mainFieldAlong', () => {
  it('stays within 0.1 nT of the model over 120 km and a year', () => {
    const site = testSite();
    const random = new Random(8);
    const count = 300;
    const x = Float64Array.from({ length: count }, () => CORNER[0] + 120_000 * random.uniform());
    const y = Float64Array.from({ length: count }, () => CORNER[1] - 120_000 * random.uniform());
    const timeS = Float64Array.from({ length: count }, () => START_S + 300 * 86_400 * random.uniform());
    const main = mainFieldAlong({ x, y, timeS, flag: new Uint8Array(count) }, site, 250);
    for (let i = 0; i < count; i++) {
      const { lonDeg, latDeg } = site.toWgs84.place(...site.frame.inverse(x[i]!, y[i]!));
      expect(Math.abs(main[i]! - mainFieldAt(lonDeg, latDeg, 250, decimalYearOf(timeS[i]!)).totalNT)).toBeLessThan(0.1);
    }
  });

  it('takes the survey\'s date without times, and leaves flagged readings out', () => {
    const site = testSite();
    const x = Float64Array.from([CORNER[0] + 100, NaN]);
    const y = Float64Array.from([CORNER[1] + 100, NaN]);
    const main = mainFieldAlong({ x, y, timeS: new Float64Array(2).fill(NaN), flag: Uint8Array.from([0, 5]) }, site, 0);
    expect(main[0]).toBeCloseTo(site.mainField.totalNT, 3);
    expect(main[1]).toBeNaN();
  });

  it.each([['2026-01-01T00:00:00Z', 2026], ['2026-04-14T12:00:00Z', 2026 + 103.5 / 365], ['2028-12-31T00:00:00Z', 2029]])('counts %s as %d', (iso, year) => {
    expect(decimalYearOf(Date.parse(iso) / 1000)).toBeCloseTo(year, 9);
  });
});

describe('regionalField', () => {
  it('gives a plane back exactly, in the middle and at the edge', () => {
    const plane = (x: number, y: number): number => 30 + 0.3 * (x - CORNER[0]) - 0.1 * (y - CORNER[1]);
    const made = chunks(walked(), (walk, i) => plane(walk.x[i]!, walk.y[i]!));
    const surface = regionalField(made, made.field, 100);
    for (const [dx, dy] of [[100, 100], [6, 3], [150, 198]] as const) {
      // Slopes are held by a ridge of a thousandth.
      expect(Math.abs(surface(CORNER[0] + dx, CORNER[1] + dy) - plane(CORNER[0] + dx, CORNER[1] + dy))).toBeLessThan(0.15);
    }
  });

  it('goes through under steel and follows long waves', () => {
    const wave = (x: number): number => 10 * Math.sin((x - CORNER[0]) * 2 * Math.PI / 400);
    const made = chunks(walked(), (walk, i) => wave(walk.x[i]!) + steel(walk, i));
    const surface = regionalField(made, made.field, 100);
    for (const [dx, dy] of [[60, 40], [140, 130], [100, 100], [30, 150]] as const) {
      // 0.3 % of the steel's peak: its tail, which 30 m away is still 1.5 nT.
      expect(Math.abs(surface(CORNER[0] + dx, CORNER[1] + dy) - wave(CORNER[0] + dx))).toBeLessThan(4);
    }
  });

  it('knows nothing far from all readings', () => {
    const made = chunks(walked(), () => 5);
    expect(regionalField(made, made.field, 100)(CORNER[0] + 900, CORNER[1])).toBeNaN();
  });
});

describe('timeDrift', () => {
  it('takes a wave in time off that a surface alone would leave as stripes', () => {
    const random = new Random(6);
    const made = chunks(walked(), (walk, i) => 8 * Math.sin(2 * Math.PI * (walk.timeS[i]! - START_S) / 1500) + 0.05 * (walk.x[i]! - CORNER[0]) + steel(walk, i) + 0.2 * random.normal());
    const left = (field: Float64Array): number => {
      const surface = regionalField(made, field, 100);
      return madSd(field.map((value, i) => value - surface(made.x[i]!, made.y[i]!)));
    };
    const drift = timeDrift(made, { windowS: 300, regionalM: 100 });
    expect(left(made.field)).toBeGreaterThan(3);
    expect(left(made.field.map((value, i) => value - drift(made.timeS[i]!)))).toBeLessThan(1);
  });

  it('leaves a pipeline along a line where it is', () => {
    const made = chunks(walked(), (walk, i) => 80 * (1 + ((walk.x[i]! - CORNER[0] - 105) / 3) ** 2) ** -1);
    const drift = timeDrift(made, { windowS: 5 * 167, regionalM: 100 });
    // One line is on top of it: its own median would be all 80 nT.
    expect(Math.max(...made.timeS.map((time) => Math.abs(drift(time))))).toBeLessThan(4);
  });
});
