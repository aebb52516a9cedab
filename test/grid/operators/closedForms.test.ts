import { describe, expect, it } from 'vitest';
import type { Vector3 } from '../../../src/field/pole.js';
import { totalFieldAnomaly } from '../../../src/field/totalField.js';
import { analyticSignal } from '../../../src/grid/operators/analyticSignal.js';
import { horizontalDerivative } from '../../../src/grid/operators/horizontalDerivative.js';
import { reductionToPole } from '../../../src/grid/operators/reductionToPole.js';
import { tilt } from '../../../src/grid/operators/tilt.js';
import { upwardContinuation } from '../../../src/grid/operators/upwardContinuation.js';
import { verticalDerivative } from '../../../src/grid/operators/verticalDerivative.js';
import type { Grid } from '../../../src/raster/types.js';
import { along, dipole, downwards, makeGrid, pole, unitOf, worstShare, type Source } from './made.js';

/** Source 4 m below the sensor, cells of 1 m: four cells to the depth, as gridded readings have it at best. */
const DEPTH_M = 4;
const CELLS = 160;
const STEP_M = 1e-4;
const POLE_AM = -200;
const MOMENT = 1000;

/** Steep, flat, southern; at 30° amplitudes double and at −55° the sign turns. */
const FIELDS = [[65, -8], [30, 20], [-55, 12]] as const;

interface Case {
  readonly name: string;
  /** From the field's inclination and declination and a place to what comes out and what should. */
  run(field: readonly [number, number], place: readonly [number, number, number], cells: number): { got: ArrayLike<number>; wanted: Grid };
}

const onGrid = (cells: number, source: Source, part: (b: Vector3) => number, [dx, dy, lift] = [0, 0, 0]) =>
  makeGrid(cells, 1, (x, y) => part(source(x + dx!, y + dy!, lift!)));

/** Central difference of the closed form, h = 0.1 mm: right to 1e-8 here. */
function slope(cells: number, source: Source, part: (b: Vector3) => number, [dx, dy, dz]: readonly [number, number, number]) {
  const ahead = onGrid(cells, source, part, [dx * STEP_M, dy * STEP_M, dz * STEP_M]).values;
  const behind = onGrid(cells, source, part, [-dx * STEP_M, -dy * STEP_M, -dz * STEP_M]);
  return { ...behind, values: behind.values.map((value, n) => (ahead[n]! - value) / (2 * STEP_M)) };
}

const casesOf = (what: string, source: (unit: number[], place: readonly [number, number, number]) => Source): Case[] => [
  {
    name: `upward continuation of a ${what}`,
    run: (field, place, cells) => {
      const unit = unitOf(...field), made = source(unit, place);
      return { got: upwardContinuation(onGrid(cells, made, along(unit)), 2).values, wanted: onGrid(cells, made, along(unit), [0, 0, 2]) };
    },
  },
  {
    name: `vertical derivative of a ${what}`,
    run: (field, place, cells) => {
      const unit = unitOf(...field), made = source(unit, place);
      return { got: verticalDerivative(onGrid(cells, made, along(unit))).values, wanted: slope(cells, made, along(unit), [0, 0, -1]) };
    },
  },
  {
    name: `derivative towards north-north-east of a ${what}`,
    run: (field, place, cells) => {
      const unit = unitOf(...field), made = source(unit, place);
      const wanted = slope(cells, made, along(unit), [Math.sin(Math.PI / 8), Math.cos(Math.PI / 8), 0]);
      return { got: horizontalDerivative(onGrid(cells, made, along(unit)), 22.5).values, wanted };
    },
  },
];

const CASES: readonly Case[] = [
  ...casesOf('pole', (_, place) => pole(POLE_AM, place)),
  ...casesOf('dipole along the field', (unit, place) => dipole(unit.map((c) => MOMENT * c), place)),
  {
    name: 'reduction of a pole to its vertical field',
    run: ([inclinationDeg, declinationDeg], place, cells) => {
      const unit = unitOf(inclinationDeg, declinationDeg), made = pole(POLE_AM, place);
      return { got: reductionToPole(onGrid(cells, made, along(unit)), { inclinationDeg, declinationDeg }).values, wanted: onGrid(cells, made, downwards) };
    },
  },
  {
    name: 'reduction of a vertical dipole to its vertical field',
    run: ([inclinationDeg, declinationDeg], place, cells) => {
      const unit = unitOf(inclinationDeg, declinationDeg), made = dipole([0, 0, -MOMENT], place);
      return { got: reductionToPole(onGrid(cells, made, along(unit)), { inclinationDeg, declinationDeg }).values, wanted: onGrid(cells, made, downwards) };
    },
  },
  {
    name: 'reduction of a dipole along the field to the pole',
    run: ([inclinationDeg, declinationDeg], place, cells) => {
      const unit = unitOf(inclinationDeg, declinationDeg), made = dipole(unit.map((c) => MOMENT * c), place);
      const got = reductionToPole(onGrid(cells, made, along(unit)), { inclinationDeg, declinationDeg }, { magnetisation: 'along_field' }).values;
      return { got, wanted: onGrid(cells, dipole([0, 0, -MOMENT], place), downwards) };
    },
  },
];

describe('operators against closed forms (projected anomaly; Blakely 1995, ch. 12)', () => {
  it.each(CASES)('$name: within 1 % of the peak, edges included, where the source is five depths inside', ({ run }) => {
    const far = CELLS / 2 - 5 * DEPTH_M;
    for (const field of FIELDS) {
      for (const [x, y] of [[0, 0], [1.3, -0.4], [far, 10], [-20, -far]] as const) {
        const { got, wanted } = run(field, [x, y, DEPTH_M], CELLS);
        expect(worstShare(got, wanted), `${field} at ${x}, ${y}`).toBeLessThan(0.01);
      }
    }
  });

  it.each(CASES)('$name: where the source is one depth inside the edge, within 3.5 % beyond two depths', ({ run }) => {
    const near = CELLS / 2 - DEPTH_M;
    for (const field of FIELDS) {
      for (const [x, y] of [[near, 10], [-20, near], [30, -near]] as const) {
        const { got, wanted } = run(field, [x, y, DEPTH_M], CELLS);
        expect(worstShare(got, wanted, 2 * DEPTH_M), `${field} at ${x}, ${y}`).toBeLessThan(0.035);
      }
    }
  });

  it.each(CASES)('$name: on a grid of only twenty depths, within 1.5 % four depths inside the edge', ({ run }) => {
    for (const field of FIELDS) {
      const { got, wanted } = run(field, [20, -10, DEPTH_M], 20 * DEPTH_M);
      expect(worstShare(got, wanted, 1), `${field}`).toBeLessThan(0.015);
    }
  });

  it('does not reduce a pole as if it were magnetised along the field: 1/Θ² misses the peak by a tenth and more at 65°', () => {
    const field = { inclinationDeg: 65, declinationDeg: -8 };
    const made = pole(POLE_AM, [0, 0, DEPTH_M]);
    const grid = onGrid(CELLS, made, along(unitOf(65, -8)));
    expect(worstShare(reductionToPole(grid, field, { magnetisation: 'along_field' }).values, onGrid(CELLS, made, downwards))).toBeGreaterThan(0.1);
  });
});

describe('reduction to the pole of the exact anomaly |F + B| − |F|', () => {
  const totalNT = 52000;
  const reduced = (m: number, inclinationDeg: number) => {
    const unit = unitOf(inclinationDeg, -8), made = pole(m, [0, 0, DEPTH_M]);
    const main = unit.map((c) => totalNT * c);
    const grid = onGrid(CELLS, made, (b) => totalFieldAnomaly(b, main));
    const { values, warnings } = reductionToPole(grid, { inclinationDeg, declinationDeg: -8, totalNT });
    return { share: worstShare(values, onGrid(CELLS, made, downwards)), warnings };
  };

  it('is within 1.2 % for a source of 1,200 nT, and warns of one of 12,000 nT', () => {
    for (const inclinationDeg of [65, 30]) {
      const weak = reduced(-200, inclinationDeg);
      expect(weak.share).toBeLessThan(0.012);
      expect(weak.warnings).toEqual([]);
      const strong = reduced(-2000, inclinationDeg);
      expect(strong.share).toBeGreaterThan(0.03);
      expect(strong.warnings.join()).toContain('% of the main field');
    }
  });
});

/** Where the highest value lies, refined by a parabola through its neighbours. */
function peakOf({ width, height, cellM, values }: Grid): { east: number; north: number } {
  let best = 0;
  for (let n = 0; n < values.length; n++) if (values[n]! > values[best]!) best = n;
  const j = Math.floor(best / width), i = best % width;
  const shift = (step: number): number => {
    const a = values[best - step]!, b = values[best]!, c = values[best + step]!;
    return (a - c) / (2 * (a - 2 * b + c));
  };
  return { east: (i + shift(1) - (width - 1) / 2) * cellM, north: ((height - 1) / 2 - j - shift(width)) * cellM };
}

describe('analytic signal', () => {
  // Displacement over depth, from the closed form of the gradient along a fine line through the source.
  it.each([
    ['pole', 65, 0.088], ['dipole', 65, 0.146], ['pole', 30, 0.212], ['dipole', 30, 0.307], ['dipole', -30, -0.307],
  ])('of a %s at %i° peaks %f depths south of it', (what, inclinationDeg, displaced) => {
    const unit = unitOf(inclinationDeg, 0);
    const made = what === 'pole' ? pole(POLE_AM, [0, 0, 8]) : dipole(unit.map((c) => MOMENT * c), [0, 0, 8]);
    const { east, north } = peakOf(analyticSignal(onGrid(CELLS, made, along(unit))));
    expect(Math.abs(east)).toBeLessThan(0.01);
    // A parabola through three cells places so broad a peak to a tenth of a cell.
    expect(Math.abs(-north / 8 - displaced)).toBeLessThan(0.1 / 8);
  });

  it('is the length of the closed form\'s gradient within 1 % of the peak', () => {
    const unit = unitOf(65, -8), made = pole(POLE_AM, [3, -2, DEPTH_M]);
    const parts = ([[1, 0, 0], [0, 1, 0], [0, 0, -1]] as const).map((direction) => slope(CELLS, made, along(unit), direction));
    const wanted = { ...parts[0]!, values: parts[0]!.values.map((value, n) => Math.hypot(value, parts[1]!.values[n]!, parts[2]!.values[n]!)) };
    expect(worstShare(analyticSignal(onGrid(CELLS, made, along(unit))).values, wanted)).toBeLessThan(0.01);
  });
});

describe('tilt', () => {
  it('of a pole\'s vertical field is atan of (2 z² − r²)/(3 z r): 90° above, 0 at r = √2 z', () => {
    const z = DEPTH_M;
    const got = tilt(onGrid(CELLS, pole(POLE_AM, [0.5, 0.5, z]), downwards));
    const wanted = makeGrid(CELLS, 1, (x, y) => {
      const r = Math.hypot(x - 0.5, y - 0.5);
      return (Math.atan2(2 * z * z - r * r, 3 * z * r) * 180) / Math.PI;
    });
    // An angle far from the source rests on hardly any field; up to six depths away it holds.
    const band = CELLS / 2 - 6 * z;
    expect(worstShare(got.values, wanted, band)).toBeLessThan(0.01);
    const middle = (CELLS / 2 - 1) * CELLS + CELLS / 2;
    expect(got.values[middle]).toBeGreaterThan(89);
  });
});
