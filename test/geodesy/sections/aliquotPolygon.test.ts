import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { Random } from '../../../src/numerics/random.js';
import { aliquotPolygon, planeRing } from '../../../src/geodesy/sections/aliquotPolygon.js';
import { partLines } from '../../../src/geodesy/sections/partLines.js';
import type { AliquotStep, PlanePoint, Section } from '../../../src/geodesy/sections/types.js';
import { feetOf, FT, madeSection, SQUARE, type Feet } from './madeSection.js';

const ACRE_FT2 = 43_560;

function areaFt2(section: Section, ...steps: AliquotStep[]): number {
  const ring = planeRing(partLines(section, { steps }));
  const [x0, y0] = ring[0]!;
  let twice = 0;
  ring.forEach(([ax, ay]: PlanePoint, i) => {
    const [bx, by] = ring[(i + 1) % ring.length]!;
    twice += (ax - x0) * (by - y0) - (bx - x0) * (ay - y0);
  });
  return twice / 2 / FT ** 2;
}

function corners(section: Section, ...steps: AliquotStep[]): number[][] {
  return aliquotPolygon(section, { steps }).slice(0, -1).map(([x, y]) => feetOf(x, y).map((v) => Math.round(v * 100) / 100 + 0));
}

describe('aliquotPolygon of a square mile', () => {
  const section = madeSection(SQUARE);

  it('has 640, 160, 40 and 10 acres', () => {
    expect(areaFt2(section) / ACRE_FT2).toBeCloseTo(640, 3);
    expect(areaFt2(section, 'SE') / ACRE_FT2).toBeCloseTo(160, 3);
    expect(areaFt2(section, 'NW', 'SE') / ACRE_FT2).toBeCloseTo(40, 3);
    expect(areaFt2(section, 'N2', 'S2', 'NE') / ACRE_FT2).toBeCloseTo(40, 3);
    expect(areaFt2(section, 'W2', 'E2') / ACRE_FT2).toBeCloseTo(160, 3);
    expect(areaFt2(section, 'SW', 'SW', 'SW') / ACRE_FT2).toBeCloseTo(10, 3);
  });

  it('lies where its name says, closed and counter-clockwise', () => {
    expect(corners(section, 'NE')).toEqual([[0, 0], [2640, 0], [2640, 2640], [0, 2640]]);
    expect(corners(section, 'SW', 'NE')).toEqual([[-1320, -1320], [0, -1320], [0, 0], [-1320, 0]]);
    // The south half of the north-west quarter, with the corner that its sixteenth line runs through, and the north half of the south half.
    expect(corners(section, 'NW', 'S2')).toEqual([[-2640, 0], [0, 0], [0, 1320], [-1320, 1320], [-2640, 1320]]);
    expect(corners(section, 'S2', 'N2').filter(([e]) => Math.abs(e!) === 2640)).toEqual([[-2640, -1320], [2640, -1320], [2640, 0], [-2640, 0]]);
    const ring = aliquotPolygon(section, { steps: ['NE'] });
    expect(ring[0]).toEqual(ring.at(-1));
  });

  it('names one part in several ways alike', () => {
    for (const [a, b] of [[['N2', 'W2'], ['NW']], [['W2', 'N2'], ['NW']], [['NE', 'N2', 'E2'], ['NE', 'NE']], [['N2', 'NE'], ['NE', 'N2']]] as const) {
      expect(areaFt2(section, ...a)).toBeCloseTo(areaFt2(section, ...b), 3);
      const sorted = (ring: number[][]): string[] => ring.map((p) => p.join(' ')).toSorted();
      expect(sorted(corners(section, ...a))).toEqual(sorted(corners(section, ...b)));
    }
  });

  it('nests as deep as twelve steps and says so beyond', () => {
    const steps = Array.from({ length: 12 }, () => 'NE' as const);
    expect(areaFt2(section, ...steps)).toBeCloseTo(5280 ** 2 / 4 ** 12, 3);
    expect(() => areaFt2(section, ...steps, 'NE')).toThrow(UserError);
  });
});

describe('aliquotPolygon of made sections', () => {
  it('is the sum of its parts, to rounding, at any depth', () => {
    const random = new Random(11);
    const families: ReadonlyArray<readonly AliquotStep[]> = [['NE', 'NW', 'SE', 'SW'], ['N2', 'S2'], ['E2', 'W2']];
    for (let trial = 0; trial < 40; trial++) {
      const jitter = (by: number): number => (random.uniform() - 0.5) * 2 * by;
      const shape = SQUARE.flatMap(([e, n], i): Feet[] => {
        const next = SQUARE[(i + 1) % 4]!;
        const along = 0.5 + jitter(0.1);
        return [[e + jitter(60), n + jitter(60)], [e + along * (next[0] - e) + jitter(30), n + along * (next[1] - n) + jitter(30)]];
      });
      const section = madeSection(shape);
      for (let k = 0; k < 10; k++) {
        const steps = Array.from({ length: random.integer(4) }, () => families.flat()[random.integer(8)]!);
        const whole = areaFt2(section, ...steps);
        for (const family of families) {
          const sum = family.reduce((total, step) => total + areaFt2(section, ...steps, step), 0);
          expect(Math.abs(sum / whole - 1)).toBeLessThan(1e-9);
        }
      }
    }
  });

  it('meets in the crossing of the lines between opposite quarter corners, not in the mean of the corners', () => {
    // Quarter corners at (0, −2640), (2640, 100), (200, 2640), (−2640, 0). By hand: y = 50 + x·100/5280 and x = 100 + y·200/5280.
    const section = madeSection([[-2640, -2640], [0, -2640], [2640, -2640], [2640, 100], [2640, 2640], [200, 2640], [-2640, 2640], [-2640, 0]]);
    const k = (100 / 5280) * (200 / 5280);
    const y = (50 + 100 * (100 / 5280)) / (1 - k);
    const x = 100 + (y * 200) / 5280;
    const ring = corners(section, 'SW');
    expect(Math.min(...ring.map(([e, n]) => Math.hypot(e! - x, n! - y)))).toBeLessThan(0.01);
  });

  it('cuts a line in its middle where the layer has no vertex near it', () => {
    const section = madeSection([[-2640, -2640], [2640, -2640], [2640, 2640], [1320, 2640], [-2640, 2640]]);
    expect(section.quarters).toEqual({ N: null, S: null, E: null, W: null });
    expect(corners(section, 'NE')).toEqual([[0, 0], [2640, 0], [2640, 2640], [1320, 2640], [0, 2640]]);
  });

  it('takes the sixteenth corners of a closing tier where they stand', () => {
    // 80 chains and 40 links to the north: the excess falls into the last quarter mile.
    const east = [[2640, -2640], [2640, -1320], [2640, 0], [2640, 1320], [2640, 2800]] as const;
    const section = madeSection([[-2640, -2640], ...east, [-2640, 2800]]);
    expect(corners(section, 'NE', 'NE')).toContainEqual([2640, 1320]);
    expect(corners(section, 'NE', 'NE')).toContainEqual([2640, 2800]);
  });
});
