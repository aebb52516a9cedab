import { describe, expect, it } from 'vitest';
import { blur } from '../../../src/grid/sources/fieldError.js';
import { gridBySources } from '../../../src/grid/sources/gridBySources.js';
import { layerDepthM } from '../../../src/grid/sources/layerDepth.js';
import { lineNoise } from '../../../src/grid/sources/lineNoise.js';
import { Random } from '../../../src/numerics/random.js';
import { madeSurvey } from '../support/madeSurvey.js';

const survey = madeSurvey({ seed: 77, spacingM: 10, depthM: 6, noiseNT: 0.5 });
const samples = { x: survey.x, y: survey.y, value: survey.value };
const frame = { width: 50, height: 50, west: -50, north: 50, cellM: 2 };
const options = { spacingM: 10, noiseNT: 0.5, error: true };
const plain = gridBySources(samples, frame, options);

describe('gridBySources', () => {
  it('follows scale, level and place of the data, the error with it', () => {
    const moved = gridBySources(
      { x: survey.x.map((x) => x + 1_000), y: survey.y.map((y) => y - 400), value: survey.value.map((v) => 700 - 20 * v) },
      { ...frame, west: frame.west + 1_000, north: frame.north - 400 }, { ...options, noiseNT: 10 },
    );
    expect(moved.depthM).toBe(plain.depthM);
    for (let k = 0; k < plain.values.length; k++) {
      expect(Math.abs(moved.values[k]! - (700 - 20 * plain.values[k]!))).toBeLessThan(0.05);
      if (Number.isNaN(plain.error![k]!)) expect(moved.error![k]).toBeNaN();
      else expect(moved.error![k]! / plain.error![k]!).toBeCloseTo(20, 1);
    }
  });

  it('shows no seam: windows laid elsewhere change it by less than it is wrong', () => {
    // Two columns and a row more to the north-west move all blocks.
    const other = gridBySources(samples, { ...frame, width: 52, height: 51, west: frame.west - 4, north: frame.north + 2 }, { ...options, depthM: plain.depthM });
    let squares = 0;
    let wrong = 0;
    for (let j = 0; j < 50; j++) {
      for (let i = 0; i < 50; i++) {
        const value = plain.values[j * 50 + i]!;
        squares += (value - other.values[(j + 1) * 52 + i + 2]!) ** 2;
        wrong += (value - survey.field(frame.west + 2 * i + 1, frame.north - 2 * j - 1)) ** 2;
      }
    }
    expect(Math.sqrt(squares / wrong)).toBeLessThan(0.25);
  });

  it('fills what is wanted and nothing else', () => {
    const wanted = Uint8Array.from({ length: 2_500 }, (_, k) => (k % 3 === 0 ? 1 : 0));
    const some = gridBySources(samples, frame, { ...options, wanted });
    some.values.forEach((value, k) => {
      if (wanted[k] === 1) expect(value).toBeCloseTo(plain.values[k]!, 3);
      else expect(value).toBeNaN();
    });
  });

  it('does not know the field in the middle of lines far apart', () => {
    const lines = { x: [] as number[], y: [] as number[], value: [] as number[] };
    for (const x of [-20, 20]) {
      for (let y = -48; y <= 48; y++) {
        lines.x.push(x);
        lines.y.push(y);
        lines.value.push(survey.field(x, y));
      }
    }
    const { error } = gridBySources(lines, frame, { spacingM: 40, noiseNT: 0.5, depthM: 6, error: true });
    for (let j = 10; j < 40; j++) {
      expect(error![j * 50 + 25]).toBeNaN();
      expect(error![j * 50 + 15]).toBeGreaterThan(0);
    }
  });
});

describe('layerDepthM', () => {
  it.each([4, 8, 16])('finds poles and dipoles %d m down, within half their depth', (depthM) => {
    const made = madeSurvey({ seed: 5, spacingM: 10, depthM, noiseNT: 0.2 });
    const found = layerDepthM(made, { spacingM: 10, noiseNT: 0.2 });
    expect(found).toBeGreaterThan(depthM / 1.5);
    expect(found).toBeLessThan(depthM * 1.5);
  });

  it('keeps the layer below the lowest sensor', () => {
    const made = madeSurvey({ seed: 5, spacingM: 10, depthM: 4, noiseNT: 0.2 });
    const up = made.up.map((_, n) => (n % 50 === 0 ? -6 : 0));
    expect(layerDepthM({ ...made, up }, { spacingM: 10, noiseNT: 0.2 })).toBeGreaterThan(6);
  });
});

describe('lineNoise', () => {
  const random = new Random(3);
  const noisy = Float64Array.from({ length: 20_000 }, (_, n) => 300 * Math.sin(n / 40) + 2 * random.normal() + (n % 500 === 0 ? 900 : 0));

  it('is the white noise under a smooth field with spikes', () => {
    expect(lineNoise(noisy)).toBeGreaterThan(1.9);
    expect(lineNoise(noisy)).toBeLessThan(2.1);
  });

  it('does not reach from one line to the next', () => {
    const line = Int32Array.from({ length: 20 }, (_, n) => Math.floor(n / 4));
    expect(lineNoise(noisy.slice(0, 20), line)).toBeNaN();
    expect(lineNoise(noisy.slice(0, 4))).toBeNaN();
  });
});

describe('blur', () => {
  it('is the sum of Gaussians', () => {
    const [width, height, sigma] = [23, 17, 1.7];
    const values = Float32Array.from({ length: width * height }, (_, k) => (k * 37) % 11);
    const blurred = blur(values, { width, height, sigma });
    for (const [i, j] of [[0, 0], [11, 8], [22, 3]] as const) {
      let sum = 0;
      values.forEach((value, k) => {
        const dx = (k % width) - i;
        const dy = Math.floor(k / width) - j;
        if (Math.max(Math.abs(dx), Math.abs(dy)) <= 6) sum += value * Math.exp(-(dx * dx + dy * dy) / (2 * sigma * sigma));
      });
      expect(blurred[j * width + i]).toBeCloseTo(sum, 6);
    }
  });
});
