import { describe, expect, it } from 'vitest';
import { gridByMethod, type GridMethod, type WalkedSamples } from '../../src/grid/gridByMethod.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import { Random } from '../../src/numerics/random.js';
import type { Grid } from '../../src/raster/types.js';
import { madeSurvey } from './support/madeSurvey.js';

const SPACING_M = 8;
const CELL_M = 2;
const OPTIONS = { cellM: CELL_M, spacingM: SPACING_M };
/** Standard deviations of the noise of a good instrument and of a poor one. */
const GOOD_NT = 0.5;
const POOR_NT = 5;
const METHODS = ['tension', 'sources', 'linear'] as const;

interface TwoSurveys {
  readonly alike: WalkedSamples;
  readonly weighted: WalkedSamples & { readonly sd: Float64Array };
  readonly field: (x: number, y: number) => number;
}

/** The same ground walked with the good instrument, and then with the poor one `shiftM` further east. */
function twoSurveys(seed: number, shiftM: number): TwoSurveys {
  const made = madeSurvey({ seed, spacingM: SPACING_M, depthM: 2 * SPACING_M, noiseNT: 0 });
  const random = new Random(900 + seed);
  const x = Float64Array.from([...made.x, ...made.x.map((at) => at + shiftM)]);
  const y = Float64Array.from([...made.y, ...made.y]);
  const line = Int32Array.from([...made.line, ...made.line.map((each) => 100 + each)]);
  const sd = Float64Array.from(x, (_, n) => (n < made.x.length ? GOOD_NT : POOR_NT));
  const value = x.map((at, n) => made.field(at, y[n]!) + sd[n]! * random.normal());
  return { alike: { x, y, line, value }, weighted: { x, y, line, value, sd }, field: made.field };
}

function cellAt({ width, west, north }: Grid, x: number, y: number): number {
  return Math.floor((north - y) / CELL_M) * width + Math.floor((x - west) / CELL_M);
}

/** Cells that hold readings of both instruments. */
function visitedByBoth(grid: Grid, { weighted: { x, y, sd } }: TwoSurveys): (k: number) => boolean {
  const [good, poor] = [GOOD_NT, POOR_NT].map((own) => new Set(Array.from(x, (at, n) => (sd[n] === own ? cellAt(grid, at, y[n]!) : -1))));
  return (k) => good!.has(k) && poor!.has(k);
}

/** Root mean square of grid less exact field for readings that count by their errors, over that for readings that all count alike. */
async function gain(method: GridMethod, shiftM: number, where: (grid: Grid, surveys: TwoSurveys) => (k: number) => boolean): Promise<number> {
  const squares = { alike: 0, weighted: 0 };
  for (const seed of [1, 2, 3, 4]) {
    const surveys = twoSurveys(seed, shiftM);
    for (const key of ['alike', 'weighted'] as const) {
      const { grid } = await gridByMethod(surveys[key], { ...OPTIONS, method });
      const counts = where(grid, surveys);
      grid.values.forEach((value, k) => {
        if (Number.isNaN(value) || !counts(k)) return;
        const x = grid.west + ((k % grid.width) + 0.5) * CELL_M;
        const y = grid.north - (Math.floor(k / grid.width) + 0.5) * CELL_M;
        squares[key] += (value - surveys.field(x, y)) ** 2;
      });
    }
  }
  expect(squares.weighted).toBeGreaterThan(0);
  return Math.sqrt(squares.weighted / squares.alike);
}

const everywhere = () => () => true;

describe('two instruments on the same ground, one ten times noisier', () => {
  it('sources lie a fifth nearer to the field along shared lines, on them and between', async () => {
    expect(await gain('sources', 0.3, everywhere)).toBeLessThan(0.8);
    expect(await gain('sources', 0.3, visitedByBoth)).toBeLessThan(0.75);
  });

  it('sources lie a third nearer where the poor instrument walked half way between the lines of the good one', async () => {
    expect(await gain('sources', SPACING_M / 2, everywhere)).toBeLessThan(0.65);
  });

  it('the plate lies a fifth nearer in the cells that both visited', async () => {
    expect(await gain('tension', 0.3, visitedByBoth)).toBeLessThan(0.8);
  });

  it('triangles lie a tenth nearer around places where both read', async () => {
    expect(await gain('linear', 0, visitedByBoth)).toBeLessThan(0.9);
  });

  it('auto leaves the plate for sources, since a plate weighs nothing but readings that share a cell', async () => {
    const { alike, weighted } = twoSurveys(1, 0.3);
    expect((await gridByMethod(alike, OPTIONS)).method).toBe('tension');
    expect((await gridByMethod(weighted, OPTIONS)).method).toBe('sources');
    expect((await gridByMethod({ ...alike, sd: weighted.sd.map(() => 2) }, OPTIONS)).method).toBe('tension');
  });
});

describe('errors of readings', () => {
  const { alike, weighted } = twoSurveys(7, 0);
  const count = alike.x.length;

  it.each(METHODS)('that are equal change nothing, to the bit: %s', async (method) => {
    const options = { ...OPTIONS, method, error: true };
    const plain = await gridByMethod(alike, { ...options, noiseNt: 0.7 });
    const equal = await gridByMethod({ ...alike, sd: new Float64Array(count).fill(0.7) }, options);
    expect(equal).toEqual(plain);
  });

  it.each(['tension', 'linear'] as const)('count by their ratios alone: %s', async (method) => {
    const options = { ...OPTIONS, method };
    const plain = (await gridByMethod(weighted, options)).grid.values;
    const scaled = (await gridByMethod({ ...weighted, sd: weighted.sd.map((sd) => 3.7 * sd) }, options)).grid.values;
    const range = Math.max(...Array.from(alike.value)) - Math.min(...Array.from(alike.value));
    scaled.forEach((value, k) => {
      if (Number.isNaN(plain[k]!)) expect(value).toBeNaN();
      else expect(Math.abs(value - plain[k]!)).toBeLessThan(1e-6 * range);
    });
    expect(plain).not.toEqual((await gridByMethod(alike, options)).grid.values);
  });

  it('are stated with the noise of sources, and make the error of cells larger where readings are poor', async () => {
    // The western half is walked with the good instrument, the eastern with the poor one.
    const made = madeSurvey({ seed: 3, spacingM: SPACING_M, depthM: 2 * SPACING_M, noiseNT: 0 });
    const sd = made.x.map((x) => (x < 0 ? GOOD_NT : POOR_NT));
    const random = new Random(5);
    const value = made.value.map((v, n) => v + sd[n]! * random.normal());
    const { grid, error } = await gridByMethod({ x: made.x, y: made.y, value, sd }, { ...OPTIONS, method: 'sources', error: true });
    expect(grid.notes[0]).toContain('noise of a reading 0.5 to 5 nT');
    const scores = { good: [] as number[], poor: [] as number[] };
    const stated = { good: 0, poor: 0 };
    grid.values.forEach((v, k) => {
      const x = grid.west + ((k % grid.width) + 0.5) * CELL_M;
      const half = x < -SPACING_M ? 'good' : x > SPACING_M ? 'poor' : null;
      if (half === null || !(error!.values[k]! > 0)) return;
      const y = grid.north - (Math.floor(k / grid.width) + 0.5) * CELL_M;
      scores[half].push((v - made.field(x, y)) / error!.values[k]!);
      stated[half] += error!.values[k]!;
    });
    expect(stated.poor / scores.poor.length).toBeGreaterThan(2 * (stated.good / scores.good.length));
    for (const half of ['good', 'poor'] as const) {
      const within = scores[half].filter((score) => Math.abs(score) < 2).length / scores[half].length;
      expect(within, half).toBeGreaterThan(0.9);
    }
  });

  it.each([NaN, 0, -1, Infinity])('of %f are refused by every method', async (bad) => {
    const sd = new Float64Array(count).fill(1);
    sd[17] = bad;
    for (const method of METHODS) await expect(gridByMethod({ ...alike, sd }, { ...OPTIONS, method }), method).rejects.toMatchObject({ code: 'value_invalid' });
    await expect(gridReadings({ ...alike, sd }, OPTIONS)).rejects.toMatchObject({ code: 'value_invalid' });
  });

  it('do not go with a noise that is stated for all', async () => {
    await expect(gridByMethod(weighted, { ...OPTIONS, noiseNt: 1 })).rejects.toMatchObject({ code: 'value_invalid' });
  });
});
