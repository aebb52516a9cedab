import { describe, expect, it } from 'vitest';
import { Random } from '../../src/numerics/random.js';
import { spreadCoarseTimes } from '../../src/readings/coarseTimes.js';
import { courses } from '../../src/readings/courses.js';
import { findLines } from '../../src/readings/findLines.js';
import { advancePositions } from '../../src/readings/positionLag.js';
import { robustFit } from '../../src/readings/robustFit.js';
import { sensorPlaces } from '../../src/readings/sensorPlaces.js';
import { findRuns } from '../../src/readings/runs.js';
import { walked } from './support.js';

describe('advancePositions', () => {
  const columns = { x: Float64Array.from([0, 1, 2, 4]), y: new Float64Array(4), timeS: Float64Array.from([0, 1, 2, 3]) };
  const run = [{ start: 0, end: 4 }];

  it('takes the place of a later time, and goes on at the end, by hand', () => {
    expect([...advancePositions(columns, run, 0.5).x]).toEqual([0.5, 1.5, 3, 5]);
    expect([...advancePositions(columns, run, -0.5).x]).toEqual([-0.5, 0.5, 1.5, 3]);
  });

  it('undoes itself where the speed is even', () => {
    const walk = walked({ lines: 2, spacingM: 40 });
    const runs = findRuns({ ...walk, count: walk.x.length });
    const back = advancePositions({ ...walk, ...advancePositions(walk, runs, 0.8) }, runs, -0.8);
    back.y.forEach((y, i) => expect(Math.abs(y - walk.y[i]!)).toBeLessThan(0.13));
  });

  it('leaves a run of one and rows without a time alone', () => {
    expect([...advancePositions({ ...columns, timeS: new Float64Array(4).fill(NaN) }, run, 1).x]).toEqual([0, 1, 2, 4]);
    expect([...advancePositions(columns, [{ start: 0, end: 1 }], 1).x]).toEqual([0, 1, 2, 4]);
  });
});

describe('sensorPlaces', () => {
  it('turns with the course, by hand', () => {
    const at = { x: new Float64Array(4), y: new Float64Array(4) };
    const { x, y } = sensorPlaces(at, Float64Array.from([0, 90, 180, NaN]), { sensorForwardM: 2, sensorRightM: 0.5 });
    [[0.5, 2], [2, -0.5], [-0.5, -2], [0, 0]].forEach(([e, n], i) => {
      expect(x[i]).toBeCloseTo(e!, 12);
      expect(y[i]).toBeCloseTo(n!, 12);
    });
  });
});

describe('courses, runs and lines', () => {
  it('know a straight course in each quadrant', () => {
    for (const azimuth of [0, 45, 100, 190, 300]) {
      const at = Float64Array.from({ length: 60 }, (_, i) => 0.3 * i);
      const x = at.map((d) => d * Math.sin(azimuth * Math.PI / 180));
      const y = at.map((d) => d * Math.cos(azimuth * Math.PI / 180));
      for (const course of courses({ x, y }, [{ start: 0, end: 60 }])) expect((course + 360) % 360).toBeCloseTo(azimuth, 6);
    }
  });

  it('have no course for one who stands', () => {
    expect([...courses({ x: new Float64Array(5), y: new Float64Array(5) }, [{ start: 0, end: 5 }])].every(Number.isNaN)).toBe(true);
  });

  it('part runs at pauses, leaps and lines', () => {
    const timeS = Float64Array.from([0, 0.1, 0.2, 9, 9.1, 9.2, 9.3, 9.4]);
    const x = Float64Array.from([0, 0.1, 0.2, 0.3, 0.4, 50, 50.1, 50.2]);
    const line = Int32Array.from([0, 0, 0, 0, 0, 0, 0, 1]);
    expect(findRuns({ count: 8, x, y: new Float64Array(8), timeS, line })).toEqual([
      { start: 0, end: 3 }, { start: 3, end: 5 }, { start: 5, end: 7 }, { start: 7, end: 8 },
    ]);
  });

  it('find the lines of a walk that goes on through its turns', () => {
    const x: number[] = [];
    const y: number[] = [];
    for (let k = 0; k < 6; k++) {
      for (let d = 0; d < 60; d += 0.5) {
        x.push(8 * k);
        y.push(k % 2 === 0 ? d : 60 - d);
      }
      for (let d = 0; d < 8; d += 0.5) {
        x.push(8 * k + d);
        y.push(k % 2 === 0 ? 60 : 0);
      }
    }
    const columns = { x: Float64Array.from(x), y: Float64Array.from(y) };
    const runs = [{ start: 0, end: x.length }];
    const { line, lineNames } = findLines({ ...columns, courseDeg: courses(columns, runs) }, runs);
    // Six lines; turns of 8 m may stand as short lines of their own.
    expect(lineNames.length).toBeGreaterThanOrEqual(6);
    expect(lineNames.length).toBeLessThanOrEqual(12);
    const middles = Array.from({ length: 6 }, (_, k) => line[k * 136 + 60]!);
    expect(new Set(middles).size).toBe(6);
    for (let k = 0; k < 6; k++) expect(line[k * 136 + 20]).toBe(middles[k]);
  });
});

describe('spreadCoarseTimes', () => {
  it('spreads whole seconds evenly, by hand', () => {
    const spread = spreadCoarseTimes(Float64Array.from([5, 5, 5, 5, 6, 6, 7, 7, 7, 7]));
    expect([...spread!]).toEqual([5, 5.25, 5.5, 5.75, 6, 6.5, 7, 7.25, 7.5, 7.75]);
  });

  it('does not stretch a second over a pause', () => {
    expect([...spreadCoarseTimes(Float64Array.from([5, 5, 6, 6, 90, 90]))!]).toEqual([5, 5.5, 6, 6.5, 90, 90.5]);
  });

  it('leaves fine times alone, with a double now and then', () => {
    expect(spreadCoarseTimes(Float64Array.from([0, 0.1, 0.2, 0.2, 0.3, 0.4]))).toBeNull();
  });
});

describe('robustFit', () => {
  it('finds a line through a third of gross outliers', () => {
    const random = new Random(4);
    const count = 600;
    const design = new Float64Array(2 * count);
    const target = new Float64Array(count);
    for (let i = 0; i < count; i++) {
      const x = i / count - 0.5;
      design.set([1, x], 2 * i);
      target[i] = 3 - 2 * x + 0.1 * random.normal() + (i % 3 === 0 ? 5 + 10 * random.uniform() : 0);
    }
    const fit = robustFit({ count, width: 2, design, target })!;
    expect(Math.abs(fit.parameters[0]! - 3)).toBeLessThan(0.03);
    expect(Math.abs(fit.parameters[1]! + 2)).toBeLessThan(0.1);
    expect(fit.sd[0]).toBeGreaterThan(0.003);
    expect(fit.sd[0]).toBeLessThan(0.02);
  });

  it('is exact on exact data and null where nothing tells', () => {
    const exact = robustFit({ count: 3, width: 2, design: Float64Array.from([1, 0, 1, 1, 1, 2]), target: Float64Array.from([1, 3, 5]) })!;
    expect(exact.parameters[1]).toBeCloseTo(2, 12);
    expect(robustFit({ count: 3, width: 2, design: Float64Array.from([1, 1, 1, 1, 1, 1]), target: Float64Array.from([1, 3, 5]) })).toBeNull();
    expect(robustFit({ count: 1, width: 2, design: Float64Array.from([1, 1]), target: Float64Array.from([1]) })).toBeNull();
  });
});
