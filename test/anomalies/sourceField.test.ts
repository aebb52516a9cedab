import { describe, expect, it } from 'vitest';
import { HALF_WIDTH_FACTORS } from '../../src/field/halfWidth.js';
import { anomalyAt, fieldOfSources } from '../../src/anomalies/sourceField.js';
import { dipole, line, pole, withValues, type Source } from '../../src/anomalies/sources.js';

const FIELD = [8000, 19000, -47000] as const;
const DOWN = [0, 0, -50000] as const;
const SUSPICION = { anchorX: 1, anchorY: -2, strengthSd: 100 };

describe('anomalyAt', () => {
  it('gives a pole of 1 A·m 100 nT at 1 m (µ0/4π) in a vertical field', () => {
    // Less B²/2F of the exact total field, which vanishes right above.
    expect(anomalyAt([pole([0, 0, -1], 1, SUSPICION)], DOWN, [0, 0, 0])).toBeCloseTo(100, 9);
  });

  // Breiner (1973), Telford et al. (1990): depth from the half-width at half the peak; weak sources, so that projection holds.
  it.each([
    ['pole', pole([0, 0, -3], 0.01, SUSPICION), HALF_WIDTH_FACTORS.pole],
    ['dipole', dipole([0, 0, -3], [0, 0, -0.01], SUSPICION), HALF_WIDTH_FACTORS.dipole],
    ['line', line([0, 0, -3], [0, -0.01], { ...SUSPICION, anchorX: 0, anchorY: 0 }), HALF_WIDTH_FACTORS.line],
  ] as const)('keeps the half-width rule of a %s', (_, source, factor) => {
    const peak = anomalyAt([source], DOWN, [0, 0, 0]);
    expect(anomalyAt([source], DOWN, [3 / factor, 0, 0]) / peak).toBeCloseTo(0.5, 5);
  });
});

describe('fieldOfSources', () => {
  const poleWithCollars = withValues(pole([0.3, -0.4, -1.2], 180, SUSPICION), Float64Array.of(0.3, -0.4, -1.2, 180, 30, -20, 10, 5));
  const all: Source[] = [poleWithCollars, dipole([4, 2, -0.6], [20, -10, 35], SUSPICION), line([1.5, 0.7, -1], [4, -6], SUSPICION)];
  const sensors = { x: Float64Array.of(1, 3, -2), y: Float64Array.of(0.5, 2.5, 4), z: Float64Array.of(1.7, 1.8, 1.6) };
  const setting = { field: FIELD, fixed: [dipole([-3, 3, -0.5], [5, 5, 5], SUSPICION)] };
  const base = fieldOfSources(all, setting, sensors);

  it('has derivatives by every parameter that agree with differences', () => {
    let column = 0;
    for (const [which, source] of all.entries()) {
      for (let k = 0; k < source.values.length; k++, column++) {
        const step = 1e-4 * Math.max(1, Math.abs(source.values[k]!));
        const moved = (sign: number) => {
          const values = source.values.slice();
          values[k]! += sign * step;
          return fieldOfSources(all.map((one, i) => (i === which ? withValues(one, values) : one)), setting, sensors).value;
        };
        const [up, down] = [moved(1), moved(-1)];
        for (let i = 0; i < 3; i++) {
          const expected = (up[i]! - down[i]!) / (2 * step);
          expect(base.columns[column * 3 + i]!).toBeCloseTo(expected, -Math.log10(1e-5 * Math.max(1, Math.abs(expected))));
        }
      }
    }
  });

  it('has slopes along each axis that agree with differences, fixed sources included', () => {
    const step = 1e-4;
    for (const [axis, slope] of [['x', base.slopeX], ['y', base.slopeY], ['z', base.slopeZ]] as const) {
      const moved = (sign: number) => fieldOfSources(all, setting, { ...sensors, [axis]: sensors[axis].map((value) => value + sign * step) }).value;
      const [up, down] = [moved(1), moved(-1)];
      for (let i = 0; i < 3; i++) expect(slope[i]!).toBeCloseTo((up[i]! - down[i]!) / (2 * step), 3);
    }
  });
});
