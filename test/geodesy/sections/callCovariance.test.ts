import { describe, expect, it } from 'vitest';
import { Random } from '../../../src/numerics/random.js';
import { CALL_DEFAULTS, placeFromCalls } from '../../../src/geodesy/sections/placeFromCalls.js';
import { sectionGeometry } from '../../../src/geodesy/sections/sectionGeometry.js';
import type { AliquotPart, FootageCalls, Section } from '../../../src/geodesy/sections/types.js';
import { calls, FT, MADE_FRAME, madeSection, SQUARE, type Feet } from './madeSection.js';

/** Leaning, its lines bent, quarter corners on two lines alone. */
const CROOKED: readonly Feet[] = [
  [-2640, -2640], [700, -2690], [2600, -2700], [2650, -60], [2690, 2580], [1500, 2600], [-900, 2650], [-2550, 2700], [-2600, 30],
];

function moved(section: Section, shifts: ReadonlyArray<readonly [number, number]>): Section {
  const ring = section.frameVertices.map(([x, y], i) => [x + shifts[i]![0], y + shifts[i]![1]]);
  return sectionGeometry({ type: 'Polygon', coordinates: [[...ring, ring[0]!]] }, MADE_FRAME);
}

const CASES: ReadonlyArray<readonly [string, FootageCalls, AliquotPart]> = [
  ['the section', calls([660, 'N'], [1980, 'E']), { steps: [] }],
  ['the section, from the bent south line', calls([500, 'S'], [2000, 'W']), { steps: [] }],
  ['a quarter', calls([330, 'S'], [990, 'W']), { steps: ['NE'] }],
  ['a quarter-quarter', calls([330, 'N'], [200, 'E']), { steps: ['SW', 'NE'] }],
  ['a half of a half', calls([200, 'S'], [2200, 'E']), { steps: ['N2', 'N2'] }],
  ['the third step', calls([100, 'N'], [150, 'W']), { steps: ['SE', 'SE', 'NW'] }],
];

describe('the Jacobians of a called place', () => {
  const section = madeSection(CROOKED);
  for (const [name, called, part] of CASES) {
    it(`are those of finite differences: ${name}`, () => {
      const at = placeFromCalls(section, called, part);
      for (const k of [0, 1] as const) {
        const [plus, minus] = [0.5, -0.5].map((by) => {
          const changed = called.map((call, i) => (i === k ? { ...call, distanceM: call.distanceM + by } : call)) as unknown as FootageCalls;
          return placeFromCalls(section, changed, part);
        }) as [typeof at, typeof at];
        expect(Math.hypot(plus.x - minus.x - at.byCall[k][0], plus.y - minus.y - at.byCall[k][1])).toBeLessThan(1e-4);
      }
      section.frameVertices.forEach((vertex, i) => {
        for (const axis of [0, 1] as const) {
          const [plus, minus] = [0.25, -0.25].map((by) =>
            placeFromCalls(moved(section, section.frameVertices.map((_, k) => [k === i && axis === 0 ? by : 0, k === i && axis === 1 ? by : 0])), called, part),
          ) as [typeof at, typeof at];
          const stated = at.byVertex.find((v) => v.x === vertex[0] && v.y === vertex[1])?.jacobian ?? [0, 0, 0, 0];
          // 5e-4: the second order of half a metre on lines of hundreds.
          expect(Math.hypot((plus.x - minus.x) / 0.5 - stated[axis]!, (plus.y - minus.y) / 0.5 - stated[2 + axis]!)).toBeLessThan(5e-4);
        }
      });
    });
  }

  it('move the place with the layer when all of it moves', () => {
    for (const [, called, part] of CASES) {
      const sum = [0, 0, 0, 0];
      for (const { jacobian } of placeFromCalls(section, called, part).byVertex) jacobian.forEach((value, i) => (sum[i]! += value));
      [1, 0, 0, 1].forEach((want, i) => expect(Math.abs(sum[i]! - want)).toBeLessThan(1e-3));
    }
  });
});

describe('the covariance of a called place', () => {
  it('of a square, by hand: rounding, measuring, and two corners of each line', () => {
    const options = { measureSdM: 2, measureSdShare: 0, vertexSdM: 5 };
    const called: FootageCalls = [{ distanceM: 660 * FT, resolutionM: 10 * FT, from: 'N' }, { distanceM: 1320 * FT, resolutionM: 330 * FT, from: 'W' }];
    const { cov, roundingCov, measurementCov, layerCov } = placeFromCalls(madeSection(SQUARE), called, undefined, options);
    // A quarter of the way along the north line its error is 25 (9 + 1)/16; an eighth along the west line 25 (49 + 1)/64.
    const want = [25 * (50 / 64), 25 * (10 / 16)];
    expect(Math.abs(roundingCov[0] / ((330 * FT) ** 2 / 12) - 1)).toBeLessThan(2e-3);
    expect(Math.abs(roundingCov[2] / ((10 * FT) ** 2 / 12) - 1)).toBeLessThan(0.1);
    expect(Math.abs(measurementCov[0] - 4)).toBeLessThan(2e-3);
    expect(Math.abs(layerCov[0] - want[0]!)).toBeLessThan(0.02);
    expect(Math.abs(layerCov[2] - want[1]!)).toBeLessThan(0.02);
    cov.forEach((value, i) => expect(Math.abs(value - roundingCov[i]! - measurementCov[i]! - layerCov[i]!)).toBeLessThan(1e-9));
  });

  it('grows with the length of a call by the stated share', () => {
    const section = madeSection(SQUARE);
    const far = placeFromCalls(section, calls([2500, 'N'], [0, 'E'])).measurementCov;
    expect(Math.abs(far[2] - CALL_DEFAULTS.measureSdM ** 2 - (2500 * FT * CALL_DEFAULTS.measureSdShare) ** 2)).toBeLessThan(0.01);
    expect(Math.abs(far[0] - CALL_DEFAULTS.measureSdM ** 2)).toBeLessThan(0.01);
  });

  for (const [name, , part] of CASES.slice(0, 5)) {
    it(`is what comes of doing it: corners moved, distances measured wrong and rounded to 20 ft: ${name}`, () => {
      const random = new Random(7);
      const truth = madeSection(CROOKED);
      const resolutionM = 20 * FT;
      const options = { measureSdM: 4, measureSdShare: 1 / 200, vertexSdM: 3 };
      const [ns, ew] = part.steps.length === 0 ? [1100, 1700] : [200, 500];
      const sums = [0, 0, 0, 0, 0];
      let stated = [0, 0, 0];
      const trials = 3000;
      for (let trial = 0; trial < trials; trial++) {
        // The well's true distances vary, so that rounding is as it falls; its true place is by the true lines.
        const distances = [ns! + random.uniform() * 40, ew! + random.uniform() * 40].map((feet) => feet * FT);
        const sides = ['N', 'E'] as const;
        const exact = distances.map((distanceM, i) => ({ distanceM, resolutionM, from: sides[i]! })) as unknown as FootageCalls;
        const written = distances.map((distanceM, i) => {
          const measured = distanceM + random.normal() * Math.hypot(options.measureSdM, options.measureSdShare * distanceM);
          return { distanceM: Math.round(measured / resolutionM) * resolutionM, resolutionM, from: sides[i]! };
        }) as unknown as FootageCalls;
        const layer = moved(truth, truth.frameVertices.map(() => [random.normal() * options.vertexSdM, random.normal() * options.vertexSdM]));
        const there = placeFromCalls(truth, exact, part);
        const here = placeFromCalls(layer, written, part, options);
        const [dx, dy] = [here.x - there.x, here.y - there.y];
        [dx, dy, dx * dx, dx * dy, dy * dy].forEach((value, i) => (sums[i]! += value / trials));
        stated = stated.map((value, i) => value + here.cov[i]! / trials);
      }
      // Standard error of a variance from 3,000 trials: 2.6 %; of the mean, 0.1 to 0.2 m.
      expect(Math.abs(sums[2]! / stated[0]! - 1)).toBeLessThan(0.1);
      expect(Math.abs(sums[4]! / stated[2]! - 1)).toBeLessThan(0.1);
      expect(Math.abs(sums[3]! - stated[1]!) / Math.sqrt(stated[0]! * stated[2]!)).toBeLessThan(0.08);
      expect(Math.hypot(sums[0]!, sums[1]!)).toBeLessThan(0.5);
    });
  }
});
