import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { checkOperation } from '../../src/operations/checkOperation.js';
import { readParameters } from '../../src/operations/readParameters.js';
import { transform } from '../../src/operations/transform.js';
import type { Grid } from '../../src/raster/types.js';
import { along, downwards, makeGrid, pole, unitOf, worstShare } from '../grid/operators/made.js';

/** Declination 9° west of true north, grid north 2° east of it: the field runs 11° west of grid north. */
const MAIN_FIELD = { totalNT: 52000, inclinationDeg: 66, declinationDeg: -9, convergenceDeg: 2, unit: unitOf(66, -11) };
const SOURCE = pole(-200, [0, 0, 5]);
const RESIDUAL = makeGrid(120, 1, (x, y) => along(MAIN_FIELD.unit)(SOURCE(x, y, 0)));

async function run(given: Record<string, unknown>, site: unknown = { mainField: MAIN_FIELD }) {
  const parameters = readParameters(given, transform.parameters, { where: 'survey.json, transform', resolve: (path) => path });
  const warnings: string[] = [], said: string[] = [];
  const outputs = await transform.run({ site, parameters, inputs: { residual: RESIDUAL }, seed: 1, warn: (m: string) => warnings.push(m), progress: (m: string) => said.push(m) } as never);
  return { grid: outputs['transform'] as Grid & { unit: string }, warnings, said };
}

const complaintOf = async (given: Record<string, unknown>, site?: unknown) => {
  const error = await run(given, site).catch((reason: unknown) => reason);
  expect(error).toBeInstanceOf(UserError);
  return (error as UserError).complaint;
};

describe('transform', () => {
  it('is an operation that the list takes, and stands aside unless the survey file asks for it', () => {
    expect(checkOperation(transform, 'built in')).toBe(transform);
    expect(transform.parameters.required).toEqual(['kind']);
  });

  it.each([
    ['upward', { height_m: '5 ft' }, 'nT'], ['downward', { height_m: 1, noise_nt: 0.1 }, 'nT'], ['vertical_derivative', {}, 'nT/m'],
    ['horizontal_derivative', { azimuth_deg: 90 }, 'nT/m'], ['reduction_to_pole', {}, 'nT'], ['analytic_signal', {}, 'nT/m'], ['tilt', {}, 'deg'],
    ['long_wave', { wavelength_m: 20 }, 'nT'], ['short_wave', { wavelength_m: 20, shape: 'butterworth', order: 2 }, 'nT'],
    ['line_filter', { azimuth_deg: 15, wavelength_m: 10, degree: 4 }, 'nT'],
  ])('makes %s', async (kind, more, unit) => {
    const { grid, said } = await run({ kind, ...more });
    expect([grid.width, grid.height, grid.west, grid.north, grid.cellM]).toEqual([120, 120, -60, 60, 1]);
    expect(grid.values.every(Number.isFinite)).toBe(true);
    expect(grid.unit).toBe(unit);
    expect(said).toHaveLength(1);
  });

  it('names every kind of its schema above', () => {
    expect(transform.parameters.properties.kind!.enum).toHaveLength(10);
  });

  it('reduces to the pole with the declination from grid north', async () => {
    const { grid } = await run({ kind: 'reduction_to_pole' });
    expect(worstShare(grid.values, makeGrid(120, 1, (x, y) => downwards(SOURCE(x, y, 0))))).toBeLessThan(0.005);
  });

  it.each([
    [{ kind: 'upward' }, 'key_missing', 'height_m'], [{ kind: 'downward', height_m: 1 }, 'key_missing', 'noise_nt'],
    [{ kind: 'line_filter' }, 'key_missing', 'azimuth_deg'], [{ kind: 'long_wave' }, 'key_missing', 'wavelength_m'],
    [{ kind: 'tilt', height_m: 3 }, 'key_invalid', 'height_m'], [{ kind: 'upward', height_m: 3, wavelength_m: 3 }, 'key_invalid', 'wavelength_m'],
    [{ kind: 'sideways' }, 'key_invalid', 'sideways'], [{}, 'key_missing', 'kind'], [{ kind: 'upward', height_m: '3' }, 'quantity_invalid', 'height_m'],
    [{ kind: 'downward', height_m: 8, noise_nt: 1 }, 'value_invalid', 'height_m'],
  ])('answers %j', async (given, code, word) => {
    const complaint = await complaintOf(given);
    expect(complaint.code).toBe(code);
    expect(JSON.stringify(complaint)).toContain(word);
  });

  it('refuses the pole near the equator and advises', async () => {
    const complaint = await complaintOf({ kind: 'reduction_to_pole' }, { mainField: { ...MAIN_FIELD, inclinationDeg: 2 } });
    expect(complaint.code).toBe('field_out_of_range');
    expect(complaint.advice).toContain('analytic signal');
    const { warnings } = await run({ kind: 'reduction_to_pole' }, { mainField: { ...MAIN_FIELD, inclinationDeg: 12 } });
    expect(warnings.join()).toContain('12.0°');
  });
});
