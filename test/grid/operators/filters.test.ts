import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { downwardContinuation } from '../../../src/grid/operators/downwardContinuation.js';
import { lineFilter } from '../../../src/grid/operators/lineFilter.js';
import { radialSpectrum } from '../../../src/grid/operators/radialSpectrum.js';
import { waveFilter } from '../../../src/grid/operators/waveFilter.js';
import { Random } from '../../../src/numerics/random.js';
import { along, makeGrid, pole, unitOf, worstShare } from './made.js';

const CELLS = 160;
/** Cells of the rim where a wave that the grid cuts off is not whole. */
const RIM = 30;

describe('wave filters', () => {
  it('Gaussian: a bump of width s comes out as one of √(s² + 2 ln 2/k₀²), lower by the ratio of their squares', () => {
    const s = 5, wavelengthM = 40;
    const wide2 = s * s + 2 * Math.LN2 * (wavelengthM / (2 * Math.PI)) ** 2;
    const bump = (s2: number, peak: number) => makeGrid(CELLS, 1, (x, y) => peak * Math.exp(-(x * x + y * y) / (2 * s2)));
    expect(worstShare(waveFilter(bump(s * s, 100), wavelengthM).values, bump(wide2, (100 * s * s) / wide2))).toBeLessThan(0.01);
  });

  it.each([
    ['gaussian', 1, 0.5], ['gaussian', 2, 0.5 ** 0.25], ['gaussian', 0.5, 0.5 ** 4],
    ['butterworth', 1, 0.5], ['butterworth', 2, 256 / 257], ['butterworth', 0.5, 1 / 257],
  ] as const)('%s: a wave of %f times the cut-off keeps %f', (shape, ratio, kept) => {
    const wave = makeGrid(CELLS, 1, (x, y) => Math.cos((2 * Math.PI * (0.6 * x + 0.8 * y)) / (10 * ratio)));
    const wanted = { ...wave, values: wave.values.map((value) => kept * value) };
    const { values } = waveFilter(wave, 10, { shape });
    let worst = 0;
    for (let j = RIM; j < CELLS - RIM; j++) for (let i = RIM; i < CELLS - RIM; i++) worst = Math.max(worst, Math.abs(values[j * CELLS + i]! - wanted.values[j * CELLS + i]!));
    expect(worst).toBeLessThan(0.01);
  });

  it('long and short add up to the grid', () => {
    const random = new Random(5);
    const grid = makeGrid(50, 1, (x) => 10 + x + random.normal());
    for (const shape of ['gaussian', 'butterworth'] as const) {
      const short = waveFilter(grid, 12, { shape, keep: 'short' }).values;
      const sum = waveFilter(grid, 12, { shape }).values.map((value, n) => value + short[n]!);
      expect(worstShare(sum, grid)).toBeLessThan(1e-9);
    }
  });

  it('refuses a wave that the cells cannot carry, warns of one longer than the grid', () => {
    const grid = makeGrid(20, 1, (x) => x);
    expect(() => waveFilter(grid, 1.5)).toThrow(UserError);
    expect(waveFilter(grid, 100).warnings.join()).toContain('longer than the grid');
  });
});

describe('line filter', () => {
  it.each([0, 30, 90, 135])('takes stripes along azimuth %i° out and leaves waves along it', (azimuthDeg) => {
    const a = (azimuthDeg * Math.PI) / 180;
    const wave = (east: number, north: number) => makeGrid(CELLS, 1, (x, y) => Math.cos((2 * Math.PI * (east * x + north * y)) / 9));
    const stripes = wave(Math.cos(a), -Math.sin(a)), beads = wave(Math.sin(a), Math.cos(a));
    const zero = { ...stripes, values: stripes.values.map(() => 0) };
    const inside = (got: Float64Array, wanted: Float64Array) => {
      let worst = 0;
      for (let j = RIM; j < CELLS - RIM; j++) for (let i = RIM; i < CELLS - RIM; i++) worst = Math.max(worst, Math.abs(got[j * CELLS + i]! - wanted[j * CELLS + i]!));
      return worst;
    };
    // Where the grid cuts a stripe off it has an end, and an end has waves in all directions: a few per cent reach this far in.
    expect(inside(lineFilter(stripes, azimuthDeg).values, zero.values)).toBeLessThan(0.04);
    expect(inside(lineFilter(beads, azimuthDeg).values, beads.values)).toBeLessThan(0.05);
  });

  it('takes as much of a slanting wave as the cosine\'s power says, and no long waves where told so', () => {
    const at45 = makeGrid(CELLS, 1, (x, y) => Math.cos((2 * Math.PI * (x + y) * Math.SQRT1_2) / 9));
    const ratio = (got: Float64Array) => {
      const n = (CELLS / 2) * CELLS + CELLS / 2;
      return got[n]! / at45.values[n]!;
    };
    // cos⁴ 45° = 1/4 is taken.
    expect(ratio(lineFilter(at45, 0, { degree: 4 }).values)).toBeCloseTo(0.75, 2);
    expect(ratio(lineFilter(at45, 0, { degree: 4, wavelengthM: 4 }).values)).toBeCloseTo(1, 2);
  });

  it('refuses a degree or a length of no use', () => {
    const grid = makeGrid(8, 1, (x) => x);
    expect(() => lineFilter(grid, 0, { degree: 0 })).toThrow(UserError);
    expect(() => lineFilter(grid, 0, { wavelengthM: -1 })).toThrow(UserError);
  });
});

describe('radial spectrum', () => {
  it('of white noise is its variance in every ring, gaps or not', () => {
    const random = new Random(9);
    for (const gap of [0, 0.3]) {
      const { power, waves } = radialSpectrum(makeGrid(200, 2, () => (random.uniform() < gap ? NaN : 3 * random.normal())));
      for (let ring = 5; ring < power.length - 5; ring++) if (waves[ring]! > 400) expect(power[ring]! / 9).toBeGreaterThan(0.7);
      const all = power.reduce((sum, p, ring) => sum + p * waves[ring]!, 0) / waves.reduce((sum, w) => sum + w, 0);
      expect(all / 9).toBeCloseTo(1, 1);
    }
  });
});

describe('downward continuation', () => {
  const unit = unitOf(65, -8);
  const field = (lift: number, [x, y] = [1, -2]) => makeGrid(CELLS, 1, (gx, gy) => along(unit)(pole(-200, [x!, y!, 4])(gx, gy, lift)));
  const noisy = (noise: number) => {
    const random = new Random(21);
    const grid = field(0);
    return { ...grid, values: grid.values.map((value) => value + noise * random.normal()) };
  };

  it.each([[0.01, 0.5, 0.01], [0.01, 1, 0.01], [0.01, 2, 0.01], [0.1, 1, 0.01], [1, 1, 0.04]])('with noise of %f nT, %f m down, is the closed form within %f of the peak', (noise, depthM, share) => {
    expect(worstShare(downwardContinuation(noisy(noise), depthM, { noise }).values, field(-depthM))).toBeLessThan(share);
  });

  it('foretells its error: what it states is within half of what it is', () => {
    for (const [noise, depthM] of [[0.1, 1], [0.1, 2], [1, 0.5], [1, 1.5]] as const) {
      const { values, notes } = downwardContinuation(noisy(noise), depthM, { noise });
      const stated = Number(/expected error ([\d.]+) %/.exec(notes[0]!)![1]);
      const wanted = field(-depthM).values;
      let error = 0, all = 0;
      for (let n = 0; n < values.length; n++) {
        error += (values[n]! - wanted[n]!) ** 2;
        all += wanted[n]! ** 2;
      }
      const real = 100 * Math.sqrt(error / all);
      expect(Math.abs(Math.log(stated / real)), `${noise} nT, ${depthM} m: ${stated} against ${real}`).toBeLessThan(Math.log(1.5));
    }
  });

  it('is refused deeper than noise allows, at and below the source, and names a depth that is allowed', () => {
    for (const depthM of [3, 4, 5, 100, 1e4]) {
      try {
        downwardContinuation(noisy(1), depthM, { noise: 1 });
        expect.unreachable();
      } catch (error) {
        expect(error).toBeInstanceOf(UserError);
        const limit = Number(/at most ([\d.]+) m/.exec((error as UserError).complaint.wanted)![1]);
        expect(limit).toBeLessThan(2.5);
        if (depthM < 100) {
          expect(limit).toBeGreaterThan(1.5);
          expect(() => downwardContinuation(noisy(1), limit - 0.01, { noise: 1 })).not.toThrow();
        }
      }
    }
  });

  it('is refused where there is nothing but noise, and without a noise level', () => {
    const random = new Random(2);
    const noise = makeGrid(60, 1, () => random.normal());
    expect(() => downwardContinuation(noise, 1, { noise: 1.2 })).toThrow(/signal above the noise/);
    expect(() => downwardContinuation(noise, 1, { noise: 0 })).toThrow(UserError);
    expect(() => downwardContinuation(noise, -1, { noise: 1 })).toThrow(UserError);
  });
});
