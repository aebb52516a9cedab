import { describe, expect, it } from 'vitest';
import { gridByMethod } from '../../src/grid/gridByMethod.js';
import { gridByTriangles } from '../../src/grid/gridByTriangles.js';
import { gridReadings } from '../../src/grid/gridReadings.js';
import { linearOnTriangles, triangulate } from '../../src/grid/linearOnTriangles.js';
import { Random } from '../../src/numerics/random.js';
import type { Grid } from '../../src/raster/types.js';
import { grid } from '../../src/operations/grid.js';
import type { Task } from '../../src/operations/types.js';
import { hasPythonModule, runPython } from '../support/debianTools.js';
import { madeSurvey } from './support/madeSurvey.js';

const OPTIONS = { cellM: 2, spacingM: 10 };
const survey = madeSurvey({ seed: 12, spacingM: 10, depthM: 7, noiseNT: 0.5, azimuthDeg: 20, lines: 6 });

function centre({ width, west, north, cellM }: Grid, k: number): readonly [number, number] {
  return [west + ((k % width) + 0.5) * cellM, north - (Math.floor(k / width) + 0.5) * cellM];
}

describe('gridByTriangles', () => {
  it('has the frame of the plate, and of its cells those inside the hull', async () => {
    const plate = await gridReadings(survey, OPTIONS);
    const linear = gridByTriangles(survey, OPTIONS);
    const hull = linearOnTriangles(survey, plate);
    for (const key of ['width', 'height', 'west', 'north', 'cellM', 'reachM', 'spacingM'] as const) expect(linear[key]).toBe(plate[key]);
    linear.values.forEach((value, k) => {
      if (Number.isNaN(plate.values[k]!) || Number.isNaN(hull.values[k]!)) expect(value).toBeNaN();
      else expect(value).toBe(Math.fround(hull.values[k]!));
    });
    expect(linear.filled).toBe(linear.values.filter((value) => !Number.isNaN(value)).length);
    expect(linear.filled).toBeLessThan(plate.filled);
    expect(linear.pinned).toBeLessThanOrEqual(plate.pinned);
    expect(linear.notes[0]).toMatch(/linear on \d+ Delaunay triangles between \d+ places/);
    expect(linear.notes[1]).toContain(`${linear.filled} cells are filled`);
  });

  it('gives in bounds what it gives without, and advises on the cell', () => {
    const whole = gridByTriangles(survey, OPTIONS);
    const part = gridByTriangles(survey, { ...OPTIONS, bounds: { west: -10, south: -4, east: 12, north: 8 } });
    expect(part.width * part.height).toBe(11 * 6);
    part.values.forEach((value, k) => {
      const [x, y] = centre(part, k);
      expect(Math.abs(value - whole.values[Math.floor((whole.north - y) / 2) * whole.width + Math.floor((x - whole.west) / 2)]!)).toBeLessThan(1e-4);
    });
    expect(gridByTriangles(survey, { ...OPTIONS, cellM: 0.5 }).warnings.join()).toMatch(/finer/);
  });

  it('makes one of readings in one place, and of such as are hardly apart', () => {
    const random = new Random(4);
    const corners = [[0, 0], [40, 0], [0, 40], [40, 40], [20, 20]] as const;
    const samples = { x: [] as number[], y: [] as number[], value: [] as number[] };
    for (const [x, y] of corners) {
      for (let n = 0; n < 30; n++) {
        samples.x.push(x + (n % 3) * 1e-9 * random.normal());
        samples.y.push(y + (n % 3) * 1e-9 * random.normal());
        // A fifth of the readings are wild.
        samples.value.push(n % 5 === 0 ? 1e6 : 3 * x - y + 0.01 * random.normal());
      }
    }
    const { values, ...frame } = gridByTriangles(samples, { cellM: 1, spacingM: 40, reachM: 40 });
    values.forEach((value, k) => {
      if (Number.isNaN(value)) return;
      const [x, y] = centre({ ...frame, values }, k);
      expect(Math.abs(value - (3 * x - y))).toBeLessThan(0.05);
    });
    expect(values.filter((value) => !Number.isNaN(value)).length).toBe(40 * 40);
    expect(triangulate({ x: [0, 0, 0, 5, 0], y: [0, 0, 0, 0, 5], value: [1, 2, 9, 4, 4] }, 1).value).toEqual(Float64Array.of(2, 4, 4));
  });

  it('stays between the readings around wherever places are crowded, and fills the hull', () => {
    const random = new Random(6);
    const x = Float64Array.from({ length: 4_000 }, (_, n) => (n < 2_000 ? 60 * random.uniform() : 30 + 0.2 * random.normal()));
    const y = Float64Array.from({ length: 4_000 }, (_, n) => (n < 2_000 ? 60 * random.uniform() : 30 + 0.2 * random.normal()));
    const value = x.map(() => random.uniform());
    const { values, west, north, width } = gridByTriangles({ x, y, value }, { cellM: 1, spacingM: 5 });
    values.forEach((each, k) => {
      const [cx, cy] = [west + (k % width) + 0.5, north - Math.floor(k / width) - 0.5];
      if (Math.max(Math.abs(cx - 30), Math.abs(cy - 30)) > 25) return;
      expect(each).toBeGreaterThanOrEqual(0);
      expect(each).toBeLessThanOrEqual(1);
    });
  });

  it.each([1, 2, 3])('refuses %i readings that make no triangle', async (count) => {
    await expect(gridByMethod({ x: [0, 5, 10].slice(0, count), y: [0, 5, 10].slice(0, count), value: [1, 2, 3].slice(0, count) }, { cellM: 1, method: 'linear' })).rejects.toMatchObject({ code: 'no_data', message: expect.stringMatching(/one line/) });
  });

  it('has an error that holds its distance from the field of sources', async () => {
    const made = madeSurvey({ seed: 31, spacingM: 10, depthM: 6, noiseNT: 0.5 });
    const { grid: linear, error, method } = await gridByMethod(made, { ...OPTIONS, method: 'linear', error: true });
    expect(method).toBe('linear');
    expect(linear.notes.at(-1)).toMatch(/leave the field unknown/);
    const scores: number[] = [];
    linear.values.forEach((value, k) => {
      if (Number.isNaN(value)) expect(error!.values[k]).toBeNaN();
      const score = Math.abs(value - made.field(...centre(linear, k))) / error!.values[k]!;
      if (!Number.isNaN(score)) scores.push(score);
    });
    expect(scores.length).toBeGreaterThan(0.9 * linear.filled);
    expect(scores.filter((score) => score < 2).length / scores.length).toBeGreaterThan(0.93);
  });
});

const EAST_M = 500_000;
const NORTH_M = 4_400_000;

const SCRIPT = `
import json, sys
import numpy as np
from scipy.interpolate import LinearNDInterpolator
case = json.load(open(sys.argv[1]))
values = LinearNDInterpolator(np.c_[case['x'], case['y']], case['value'])(np.c_[case['cx'], case['cy']])
print(json.dumps([None if np.isnan(v) else v for v in values]))
`;

describe.skipIf(!hasPythonModule('scipy.interpolate'))('the grid operation with method "linear"', () => {
  it('is what SciPy makes of the same readings, cell by cell', async () => {
    // No two readings within a sixteenth of a cell, and no four on a circle: so the triangles are one and the same.
    const random = new Random(77);
    const x = survey.x.map((at) => at + EAST_M + 0.2 * random.normal());
    const y = survey.y.map((at) => at + NORTH_M + 0.2 * random.normal());
    const count = x.length;
    const readings = { count, x, y, heightM: new Float64Array(count).fill(2), line: survey.line, flag: new Uint8Array(count), residual: survey.value };
    expect(triangulate({ x, y, value: survey.value }, 2).x.length).toBe(count);
    const task = { parameters: { method: 'linear', weights: 'equal', error: false, cell_m: 2, spacing_m: 10 }, inputs: { readings }, warn: () => {}, progress: () => {} } as unknown as Task;
    const { residual } = await grid.run(task) as { residual: Grid };
    const cells = Array.from(residual.values, (_, k) => centre(residual, k));
    // Qhull lifts places on to a paraboloid and loses the triangles where they lie millions of metres off.
    const near = { x: Array.from(x, (at) => at - EAST_M), y: Array.from(y, (at) => at - NORTH_M), value: [...survey.value], cx: cells.map(([cx]) => cx - EAST_M), cy: cells.map(([, cy]) => cy - NORTH_M) };
    const run = runPython(['-c', SCRIPT, '{case.json}'], { 'case.json': new TextEncoder().encode(JSON.stringify(near)) });
    expect(run.stderr).toBe('');
    const theirs = JSON.parse(run.stdout) as Array<number | null>;
    const reach = 7.5;
    let compared = 0;
    residual.values.forEach((value, k) => {
      const nearest = Math.min(...Array.from(x, (at, n) => Math.hypot(at - cells[k]![0], y[n]! - cells[k]![1])));
      if (theirs[k] === null || nearest > reach) return expect(value).toBeNaN();
      // A 32-bit value near 1,000 nT is good to 6e-5.
      expect(Math.abs(value - theirs[k]!)).toBeLessThan(1e-4);
      compared++;
    });
    expect(compared).toBeGreaterThan(500);
  });
});

describe.skipIf(!hasPythonModule('scipy.interpolate'))('linearOnTriangles', () => {
  it.each([40, 300, 2000])('equals SciPy\'s LinearNDInterpolator within 1e-9 inside the hull of %i places in general position', (count) => {
    const random = new Random(count);
    const samples = { x: new Float64Array(count), y: new Float64Array(count), value: new Float64Array(count) };
    for (let n = 0; n < count; n++) {
      samples.x[n] = 100 * random.uniform();
      samples.y[n] = 80 * random.uniform();
      samples.value[n] = random.normal();
    }
    const frame = { width: 100, height: 80, west: 0, north: 80, cellM: 1 };
    const { values } = linearOnTriangles(samples, frame);
    // Places closer than a sixteenth of a cell become one; SciPy gets what is left, so that both see the same triangles.
    const { x, y, value } = triangulate(samples, frame.cellM);
    const cells = Array.from(values, (_, k) => centre({ ...frame, values }, k));
    const input = { x: [...x], y: [...y], value: [...value], cx: cells.map(([cx]) => cx), cy: cells.map(([, cy]) => cy) };
    const run = runPython(['-c', SCRIPT, '{case.json}'], { 'case.json': new TextEncoder().encode(JSON.stringify(input)) });
    expect(run.stderr).toBe('');
    const theirs = JSON.parse(run.stdout) as Array<number | null>;
    expect([...values.keys()].filter((k) => Number.isNaN(values[k]!) !== (theirs[k] === null))).toEqual([]);
    expect([...values.keys()].filter((k) => Math.abs(values[k]! - (theirs[k] ?? NaN)) > 1e-9)).toEqual([]);
    expect(theirs.filter((each) => each !== null).length).toBeGreaterThan(5000);
  });
});
