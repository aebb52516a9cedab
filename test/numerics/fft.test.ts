import { describe, expect, it } from 'vitest';
import { fftLanes, fftWork } from '../../src/numerics/fft.js';
import { inverseRealFft2, realFft2, spectrumStride, type FftSize } from '../../src/numerics/fft2.js';
import { fftGoodSize } from '../../src/numerics/fftGoodSize.js';
import { fftPlan } from '../../src/numerics/fftPlan.js';
import { Random } from '../../src/numerics/random.js';
import { hasPythonModule, runPython } from '../support/debianTools.js';

const RELATIVE = 1e-9;

function noise(count: number): Float64Array {
  const random = new Random(count);
  return Float64Array.from({ length: count }, () => random.normal());
}

function layOut(values: Float64Array, { width, height }: FftSize): Float64Array {
  const field = new Float64Array(height * spectrumStride(width));
  for (let j = 0; j < height; j++) field.set(values.subarray(j * width, (j + 1) * width), j * spectrumStride(width));
  return field;
}

const worst = (a: Float64Array, b: ArrayLike<number>) => a.reduce((most, value, k) => Math.max(most, Math.abs(value - b[k]!)), 0);
const peak = (a: ArrayLike<number>) => Array.from(a).reduce((most, value) => Math.max(most, Math.abs(value)), 0);

/** The definition itself. */
function directTransform(values: Float64Array, { width, height }: FftSize): Float64Array {
  const stride = spectrumStride(width);
  const out = new Float64Array(height * stride);
  for (let l = 0; l < height; l++) {
    for (let k = 0; k <= width / 2; k++) {
      for (let j = 0; j < height; j++) {
        for (let i = 0; i < width; i++) {
          const angle = -2 * Math.PI * (((k * i) % width) / width + ((l * j) % height) / height);
          out[l * stride + 2 * k]! += values[j * width + i]! * Math.cos(angle);
          out[l * stride + 2 * k + 1]! += values[j * width + i]! * Math.sin(angle);
        }
      }
    }
  }
  return out;
}

describe('complex FFT', () => {
  it.each([1, 2, 3, 4, 5, 6, 7, 8, 12, 15, 16, 20, 22, 26, 30, 49, 60, 64, 77, 100])('of %i points is the sum that defines it, side by side too', (n) => {
    const lanes = 6;
    const data = noise(n * lanes);
    const dst = { data: new Float64Array(n * lanes), offset: 0, unit: lanes, lanes };
    const plan = fftPlan(n);
    fftLanes(plan, { data, offset: 0, unit: lanes, lanes }, { dst, work: fftWork(plan, lanes) });
    const wanted = new Float64Array(n * lanes);
    for (let k = 0; k < n; k++) {
      for (let j = 0; j < n; j++) {
        const c = Math.cos((-2 * Math.PI * ((j * k) % n)) / n);
        const s = Math.sin((-2 * Math.PI * ((j * k) % n)) / n);
        for (let lane = 0; lane < lanes; lane += 2) {
          wanted[k * lanes + lane]! += data[j * lanes + lane]! * c - data[j * lanes + lane + 1]! * s;
          wanted[k * lanes + lane + 1]! += data[j * lanes + lane]! * s + data[j * lanes + lane + 1]! * c;
        }
      }
    }
    expect(worst(dst.data, wanted)).toBeLessThan(RELATIVE * peak(wanted));
  });
});

describe('real two-dimensional FFT', () => {
  it.each([
    [2, 1], [2, 2], [4, 3], [6, 5], [8, 8], [10, 7], [12, 16], [14, 9], [22, 4], [24, 20], [34, 3],
  ])('of %i × %i values is the sum that defines it', (width, height) => {
    const values = noise(width * height);
    const field = layOut(values, { width, height });
    realFft2(field, { width, height });
    const wanted = directTransform(values, { width, height });
    expect(worst(field, wanted)).toBeLessThan(RELATIVE * peak(wanted));
  });

  it.each([
    [2, 1], [4, 1], [2, 7], [36, 25], [38, 23], [64, 48], [90, 250], [128, 128], [100, 243],
  ])('of %i × %i values comes back, and keeps its energy (Parseval)', (width, height) => {
    const values = noise(width * height);
    const field = layOut(values, { width, height });
    realFft2(field, { width, height });
    const stride = spectrumStride(width);
    let energy = 0;
    for (let l = 0; l < height; l++) {
      for (let k = 0; k <= width / 2; k++) {
        const twice = k === 0 || k === width / 2 ? 1 : 2;
        energy += twice * (field[l * stride + 2 * k]! ** 2 + field[l * stride + 2 * k + 1]! ** 2);
      }
    }
    const wanted = values.reduce((sum, value) => sum + value * value, 0);
    expect(Math.abs(energy / (width * height) / wanted - 1)).toBeLessThan(RELATIVE);
    inverseRealFft2(field, { width, height });
    const back = values.map((_, n) => field[Math.floor(n / width) * stride + (n % width)]!);
    expect(worst(back, values)).toBeLessThan(RELATIVE * peak(values));
  });

  it('refuses an odd width and a field of another size', () => {
    expect(() => realFft2(new Float64Array(5 * 3), { width: 3, height: 3 })).toThrow(/not even/);
    expect(() => inverseRealFft2(new Float64Array(16), { width: 4, height: 4 })).toThrow(/size/);
  });

  const SCIPY = hasPythonModule('scipy.fft');
  it.skipIf(!SCIPY).each([[256, 256], [250, 162], [1024, 90], [46, 59]])('of %i × %i values is SciPy\'s (python3-scipy)', (width, height) => {
    const values = noise(width * height);
    const field = layOut(values, { width, height });
    realFft2(field, { width, height });
    const script = `import sys, numpy as np, scipy.fft as fft
values = np.fromfile(sys.argv[1]).reshape(${height}, ${width})
wanted = fft.rfft2(values).view(float)
ours = np.fromfile(sys.argv[2]).reshape(${height}, ${width + 2})
back = fft.irfft2(ours.view(complex), s=values.shape)
print(abs(ours - wanted).max() / abs(wanted).max(), abs(back - values).max())`;
    const bytes = (array: Float64Array) => new Uint8Array(array.buffer);
    const run = runPython(['-c', script, '{values}', '{ours}'], { values: bytes(values), ours: bytes(field) });
    expect(run.stderr).toBe('');
    const [forward, backward] = run.stdout.trim().split(' ').map(Number);
    expect(forward).toBeLessThan(RELATIVE);
    expect(backward).toBeLessThan(RELATIVE);
  });
});

describe('fftGoodSize', () => {
  it.each([[1, 2], [2, 2], [3, 4], [5, 6], [7, 8], [11, 12], [13, 16], [17, 18], [21, 24], [31, 32], [97, 100], [2049, 2160], [4097, 4320]])('of %i is %i', (least, wanted) => {
    // Counted upwards one by one, which is the definition.
    let plain = least + (least % 2);
    const smooth = (n: number): boolean => n === 1 || [2, 3, 5].some((p) => n % p === 0 && smooth(n / p));
    while (!smooth(plain)) plain += 2;
    expect(fftGoodSize(least)).toBe(plain);
    expect(plain).toBe(wanted);
  });
});
