import { describe, expect, it } from 'vitest';
import { grid } from '../../src/operations/grid.js';
import { solveTile, type TileTask } from '../../src/grid/solveTile.js';
import type { GridResult } from '../../src/grid/types.js';
import type { Grid } from '../../src/raster/types.js';
import type { StreamedGrid, Task } from '../../src/operations/types.js';
import { Random } from '../../src/numerics/random.js';
import type { Readings } from '../../src/readings/types.js';
import { madeSurvey } from './support/madeSurvey.js';

/** Ten lines 6 m apart, a reading a metre; every tenth reading flagged and wild. */
function readings(): Readings {
  const x: number[] = [], y: number[] = [], line: number[] = [], flag: number[] = [], residual: number[] = [];
  for (let l = 0; l < 10; l++) {
    for (let k = 0; k < 60; k++) {
      x.push(l * 6);
      y.push(l % 2 ? 60 - k : k);
      line.push(l);
      flag.push(k % 10 === 5 ? 2 : 0);
      residual.push(k % 10 === 5 ? 1e6 : 10 + x.at(-1)!);
    }
  }
  return { count: x.length, x: Float64Array.from(x), y: Float64Array.from(y), heightM: new Float64Array(x.length).fill(2), line: Int32Array.from(line), flag: Uint8Array.from(flag), residual: Float64Array.from(residual) } as unknown as Readings;
}

async function run(parameters: Record<string, unknown>): Promise<{ residual: GridResult; error: Grid | undefined; warnings: string[]; notes: string[] }> {
  const warnings: string[] = [], notes: string[] = [];
  const task = { parameters, inputs: { readings: readings() }, warn: (m: string) => warnings.push(m), progress: (m: string) => notes.push(m) } as unknown as Task;
  const { residual, residual_error: error } = await grid.run(task);
  return { residual: residual as GridResult, error: error as Grid | undefined, warnings, notes };
}

describe('the grid operation', () => {
  const defaults = Object.fromEntries(Object.entries(grid.parameters.properties).filter(([, s]) => s.default !== undefined).map(([key, s]) => [key, s.default]));

  it('judges cell and reach by the lines and leaves flagged readings out', async () => {
    const { residual, warnings, notes } = await run(defaults);
    expect(residual.spacingM).toBeCloseTo(6, 6);
    expect(residual.cellM).toBe(1);
    expect(residual.reachM).toBeCloseTo(4.5, 6);
    expect(warnings).toEqual([]);
    expect(notes.length).toBeGreaterThan(0);
    expect(residual.filled).toBeGreaterThan(55 * 60);
    for (let k = 0; k < residual.values.length; k++) {
      const value = residual.values[k]!;
      if (Number.isNaN(value)) continue;
      expect(value).toBeCloseTo(10 + residual.west + (k % residual.width) + 0.5, 3);
    }
  });

  it('leaves the error out unless it is asked for, and tells of the sources where it is', async () => {
    const plain = await run(defaults);
    expect(plain.error).toBeUndefined();
    const { residual, error, notes } = await run({ ...defaults, method: 'auto', error: true, noise_nt: 0.3 });
    expect(error!.values.length).toBe(residual.values.length);
    expect(notes.join(' ')).toMatch(/noise of a reading 0.3 nT|in tension/);
    expect(notes.join(' ')).toMatch(/below the sensor/);
    for (let k = 0; k < residual.values.length; k++) if (Number.isNaN(residual.values[k]!)) expect(error!.values[k]).toBeNaN();
  });

  it('says where no line is long enough to weigh its readings by', async () => {
    const still = await run({ ...defaults, weights: 'line' });
    expect(still.warnings).toEqual([expect.stringMatching(/No line is long enough/)]);
    expect(still.residual.values).toEqual((await run(defaults)).residual.values);
  });

  it('takes what it is told', async () => {
    const { residual, warnings } = await run({ ...defaults, cell_m: 0.5, reach_m: 2, tension: 0, spacing_m: 6 });
    expect(residual.cellM).toBe(0.5);
    expect(residual.reachM).toBe(2);
    expect(residual.tension).toBe(0);
    expect(warnings.join()).toMatch(/finer/);
  });
});

describe('the grid operation with weights', () => {
  /** Ground walked with two sensors, one ten times noisier, on lines of their own in the same places. */
  const made = madeSurvey({ seed: 21, spacingM: 6, depthM: 12, noiseNT: 0 });
  const half = made.x.length;
  const count = 2 * half;
  const random = new Random(40);
  const readings = {
    count, x: Float64Array.from([...made.x, ...made.x]), y: Float64Array.from([...made.y, ...made.y]), heightM: new Float64Array(count).fill(2),
    line: Int32Array.from([...made.line, ...made.line.map((line) => 10 + line)]), flag: new Uint8Array(count),
    residual: Float64Array.from([...made.value, ...made.value], (value, n) => value + (n < half ? 0.5 : 5) * random.normal()),
  };
  async function rmse(parameters: object): Promise<{ nT: number; notes: string[] }> {
    const notes: string[] = [];
    const task = { parameters: { error: false, spacing_m: 6, cell_m: 1.5, ...parameters }, inputs: { readings }, warn: () => {}, progress: (note: string) => notes.push(note) } as unknown as Task;
    const { residual: { width, west, north, cellM, values } } = await grid.run(task) as { residual: Grid };
    let [sum, filled] = [0, 0];
    values.forEach((value, k) => {
      if (Number.isNaN(value)) return;
      sum += (value - made.field(west + ((k % width) + 0.5) * cellM, north - (Math.floor(k / width) + 0.5) * cellM)) ** 2;
      filled++;
    });
    return { nT: Math.sqrt(sum / filled), notes };
  }

  it.each([['auto', 0.7], ['sources', 0.9]])('lets a noisy line count little, and says so, with method %s', async (method, gain) => {
    const equal = await rmse({ method, weights: 'equal' });
    const line = await rmse({ method, weights: 'line' });
    expect(line.nT / equal.nT).toBeLessThan(gain);
    expect(equal.notes.join()).not.toMatch(/noise of their line/);
    const [, least, most] = line.notes[0]!.match(/^Readings count by the noise of their line, ([\d.]+) to ([\d.]+) nT\.$/)!;
    expect(Number(least)).toBeGreaterThan(0.3);
    expect(Number(least)).toBeLessThan(0.6);
    expect(Number(most)).toBeGreaterThan(4.5);
    expect(Number(most)).toBeLessThan(8);
  });

  it('does not take a noise for all beside them', async () => {
    await expect(rmse({ method: 'sources', weights: 'line', noise_nt: 1 })).rejects.toThrow(/grid, noise_nt: found 1 and an error of each reading/);
  });
});

describe('the grid operation beyond what fits into memory', () => {
  /** Two short lines 8.1 km apart: 66 million cells of a metre, nearly all of them empty. */
  const far = { count: 40, x: new Float64Array(40), y: new Float64Array(40), heightM: new Float64Array(40).fill(2), line: new Int32Array(40), flag: new Uint8Array(40), residual: new Float64Array(40) };
  for (let n = 0; n < 40; n++) {
    far.line[n] = n < 20 ? 0 : 1;
    far.x[n] = (n < 20 ? 0 : 8100) + (n % 20);
    far.y[n] = n < 20 ? 0 : 8100;
    far.residual[n] = Math.sin(n);
  }
  const given = { cell_m: 1, spacing_m: 5, reach_m: 4, tension: 0.25, tolerance: 1e-4, max_steps: 2 };
  const task = (parameters: object, said: string[] = [], solved: string[] = []): Task => ({
    parameters: { ...given, ...parameters }, inputs: { readings: far }, warn: (m: string) => said.push(m), progress: (m: string) => said.push(m),
    solveTile: (tile: TileTask) => (solved.push(`${tile.own.width} × ${tile.own.height}`), solveTile(tile)),
  }) as unknown as Task;

  it.each([
    [{ method: 'sources', error: false }, /grid, method: found "sources" for a grid of 8127 × 8108 cells, wanted at most 64 million cells with it; state a larger cell_m, .*take "tension"/],
    [{ method: 'linear', error: false }, /grid, method: found "linear" for a grid of .*take "tension"/],
    [{ method: 'auto', error: true }, /grid, error: found true for a grid of 8127 × 8108 cells, .*leave it out/],
    [{ method: 'auto', error: false, cell_m: 0.1 }, /grid: found 81\d+ × 81\d+ cells .* wanted at most 4000 million cells/],
  ])('refuses %o', async (parameters, says) => {
    await expect(grid.run(task(parameters))).rejects.toThrow(says);
  });

  it('makes it in tension as its rows are read, tile by tile, and then says so', async () => {
    const said: string[] = [], solved: string[] = [];
    const { residual, residual_error: error } = await grid.run(task({ method: 'auto', error: false, spacing_m: 10 }, said, solved)) as { residual: StreamedGrid; residual_error: undefined };
    expect(error).toBeUndefined();
    expect('values' in residual).toBe(false);
    expect(said).toEqual([expect.stringMatching(/finer/), expect.stringMatching(/more than 64 million cells .* in tension/)]);
    expect(solved).toEqual([]);
    let filled = 0;
    for (let first = 0; first < residual.height; first += 1024) {
      const rows = await residual.readRows(first, Math.min(1024, residual.height - first));
      for (const value of rows) if (!Number.isNaN(value)) filled++;
    }
    // The wide surface that the tiles' rims rest on, then the tiles with readings.
    expect(solved).toEqual(['1017 × 1014', '959 × 1024', '1024 × 940']);
    const { notes, warnings } = residual.remarks!();
    expect(warnings).toEqual([said[0], expect.stringMatching(/stopped after 2 steps/), said[1]]);
    expect(notes.join(' ')).toContain(`${filled} cells are filled`);
    expect(filled).toBeGreaterThan(2 * 20 * 8);
  });
});
