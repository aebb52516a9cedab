import { describe, expect, it } from 'vitest';
import { gridByMethod } from '../../src/grid/gridByMethod.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import { UserError } from '../../src/errors.js';
import type { Grid } from '../../src/raster/types.js';
import { madeSurvey, type MadeSurvey } from './support/madeSurvey.js';

const SPACING_M = 4;
const OPTIONS = { cellM: 0.8, spacingM: SPACING_M };

/** Root mean square of grid less exact field on the level, over the filled cells. */
function rmse({ width, west, north, cellM, values }: Grid, survey: MadeSurvey): number {
  let sum = 0;
  let count = 0;
  values.forEach((value, k) => {
    if (Number.isNaN(value)) return;
    sum += (value - survey.field(west + ((k % width) + 0.5) * cellM, north - (Math.floor(k / width) + 0.5) * cellM)) ** 2;
    count++;
  });
  return Math.sqrt(sum / count);
}

describe('gridByMethod', () => {
  const flat = madeSurvey({ seed: 5, spacingM: SPACING_M, depthM: 5, noiseNT: 0.5 });

  it('is gridReadings where tension is asked for', async () => {
    expect((await gridByMethod(flat, { ...OPTIONS, method: 'tension' })).grid).toEqual(await gridReadings(flat, OPTIONS));
  });

  it('halves the error of a plate that ignores heights, where they vary by a metre', async () => {
    let [ofSources, ofPlate] = [0, 0];
    for (let seed = 1; seed <= 5; seed++) {
      const survey = madeSurvey({ seed, spacingM: SPACING_M, depthM: 5, noiseNT: 0.5, bobM: 1 });
      const result = await gridByMethod(survey, { ...OPTIONS, method: 'auto' });
      expect(result.method).toBe('sources');
      ofSources += rmse(result.grid, survey) ** 2;
      ofPlate += rmse((await gridByMethod(survey, { ...OPTIONS, method: 'tension' })).grid, survey) ** 2;
    }
    expect(Math.sqrt(ofSources / ofPlate)).toBeLessThan(0.5);
  });

  it('has a plane back, and a constant with no error', async () => {
    const samples = { x: flat.x, y: flat.y, value: flat.x.map((x, n) => 300 + 2 * x - flat.y[n]!) };
    const { grid } = await gridByMethod(samples, { ...OPTIONS, method: 'sources', noiseNt: 0.1 });
    grid.values.forEach((value, k) => {
      if (Number.isNaN(value)) return;
      const x = grid.west + ((k % grid.width) + 0.5) * grid.cellM;
      const y = grid.north - (Math.floor(k / grid.width) + 0.5) * grid.cellM;
      // Beyond the outermost lines the field goes back towards the mean; the slope over the reach is 6.7 nT.
      expect(Math.abs(value - (300 + 2 * x - y))).toBeLessThan(3);
    });
    const level = await gridByMethod({ ...samples, value: samples.value.map(() => 7) }, { ...OPTIONS, method: 'sources', error: true });
    for (const value of level.grid.values) if (!Number.isNaN(value)) expect(value).toBeCloseTo(7, 5);
    for (const value of level.error!.values) if (!Number.isNaN(value)) expect(value).toBeCloseTo(0, 5);
  });

  it('leaves the same cells empty as the plate does', async () => {
    const [plate, sources] = await Promise.all((['tension', 'sources'] as const).map(async (method) => (await gridByMethod(flat, { ...OPTIONS, method })).grid.values));
    expect(Array.from(sources!, Number.isNaN)).toEqual(Array.from(plate!, Number.isNaN));
  });

  it('refuses a method that it does not know', async () => {
    await expect(gridByMethod(flat, { ...OPTIONS, method: 'kriging' as 'auto' })).rejects.toThrow(UserError);
  });
});
