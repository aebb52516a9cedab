import { describe, expect, it } from 'vitest';
import { gridByMethod } from '../../src/grid/gridByMethod.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import { solveTile, type TileTask } from '../../src/grid/solveTile.js';
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

  it.each([null, { west: -10, south: -30, east: 11, north: 2 }])('fills the cells that the plate does and solves none, in bounds %j', async (bounds) => {
    const plate = (await gridByMethod(flat, { ...OPTIONS, bounds, method: 'tension' })).grid;
    let solved = 0;
    const tiled = { ...OPTIONS, bounds, tileCells: 8, overlapSpacings: 1, solve: (task: TileTask) => (solved++, solveTile(task)) };
    const sources = (await gridByMethod(flat, { ...tiled, method: 'sources' })).grid;
    expect(solved).toBe(0);
    expect(Array.from(sources.values, Number.isNaN)).toEqual(Array.from(plate.values, Number.isNaN));
    expect(sources).toMatchObject({ width: plate.width, height: plate.height, west: plate.west, north: plate.north, filled: plate.filled, pinned: plate.pinned, reachM: plate.reachM, spacingM: plate.spacingM, converged: true });
    expect(sources.notes[1]).toBe(plate.notes[1]);
    await gridByMethod(flat, { ...tiled, method: 'tension' });
    expect(solved).toBeGreaterThan(0);
  });

  it('complains where the bounds leave all readings out', async () => {
    const bounds = { west: 900, south: 900, east: 950, north: 950 };
    for (const method of ['tension', 'sources'] as const) await expect(gridByMethod(flat, { ...OPTIONS, bounds, method })).rejects.toMatchObject({ code: 'no_data' });
  });

  it('refuses a method that it does not know', async () => {
    await expect(gridByMethod(flat, { ...OPTIONS, method: 'kriging' as 'auto' })).rejects.toThrow(UserError);
  });
});
