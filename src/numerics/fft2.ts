import { fftLanes, fftWork } from './fft.js';
import { fftPlan, rootsOfUnity } from './fftPlan.js';

/** Rows and columns of real values. The width is even, any height does; 2, 3 and 5 as only prime factors are fast (fftGoodSize). */
export interface FftSize {
  readonly width: number;
  readonly height: number;
}

/**
 * Columns that are transformed side by side. So many complex numbers are half a kilobyte of each row: lines of the cache
 * are used in full, and each page of memory is looked up seldom. Measured at 2048² and 4096², 4 to 32 columns: the more
 * the better or equal, and work space grows with them.
 */
const COLUMNS = 32;

/** Numbers in a row of the spectrum: width/2 + 1 complex ones. */
export function spectrumStride(width: number): number {
  return width + 2;
}

/**
 * Discrete Fourier transform of real values, in place: X[l][k] = Σ x[j][i] e^(−2πi (k i/width + l j/height)), unscaled,
 * for k = 0 … width/2 and l = 0 … height − 1; the other half follows from X[−l][−k] = conj X[l][k].
 *
 * @param field `height` rows of `spectrumStride(width)` numbers. Before: a row's values, then two that do not matter.
 *   After: a row's complex numbers, re and im as neighbours. A NaN makes the whole spectrum NaN.
 *
 * Source: two real samples as one complex number, Press et al. (2007), Numerical Recipes, 12.3.
 */
export function realFft2(field: Float64Array, size: FftSize): void {
  const { row, half, work, roots } = rowTools(field, size);
  const stride = spectrumStride(size.width);
  const dst = { data: row, offset: 0, unit: 2, lanes: 2 };
  for (let at = 0; at < field.length; at += stride) {
    fftLanes(half, { data: field, offset: at, unit: 2, lanes: 2 }, { dst, work });
    takeApart(row, roots, { spectrum: field, at });
  }
  transformColumns(field, size);
}

/** Real values from their half spectrum, in place: the inverse of `realFft2`, scale included. The two last numbers of a row are left over. */
export function inverseRealFft2(field: Float64Array, size: FftSize): void {
  const { width, height } = size;
  const { row, half, work, roots } = rowTools(field, size);
  const other = new Float64Array(width);
  const stride = spectrumStride(width);
  const scale = 1 / (width * height);
  transformColumns(field, size);
  // Forward passes only: the backward transform of the columns is the forward one read from the other end, so row j
  // and row height − j change places.
  for (let j = 0; j <= height >> 1; j++) {
    const to = j * stride;
    const from = ((height - j) % height) * stride;
    putTogether(row, roots, { spectrum: field, at: from, scale });
    if (from !== to) putTogether(other, roots, { spectrum: field, at: to, scale });
    fftLanes(half, { data: row, offset: 0, unit: 2, lanes: 2 }, { dst: { data: field, offset: to, unit: 2, lanes: 2 }, work });
    if (from !== to) fftLanes(half, { data: other, offset: 0, unit: 2, lanes: 2 }, { dst: { data: field, offset: from, unit: 2, lanes: 2 }, work });
  }
}

function rowTools(field: Float64Array, { width, height }: FftSize) {
  if (width % 2 !== 0 || width < 2) throw new Error(`a real FFT of width ${width}, which is not even`);
  const wanted = spectrumStride(width) * height;
  if (field.length !== wanted) throw new Error(`an FFT over ${field.length} numbers where the size says ${wanted}`);
  const half = fftPlan(width / 2);
  return { half, work: fftWork(half, 2), row: new Float64Array(width), roots: rootsOfUnity(width, (half.n >> 1) + 1) };
}

function transformColumns(spectrum: Float64Array, { width, height }: FftSize): void {
  const plan = fftPlan(height);
  const unit = spectrumStride(width);
  const work = fftWork(plan, 2 * COLUMNS);
  for (let offset = 0; offset < unit; offset += 2 * COLUMNS) {
    const block = { data: spectrum, offset, unit, lanes: Math.min(2 * COLUMNS, unit - offset) };
    fftLanes(plan, block, { dst: block, work });
  }
}

/** From the transform Z of x[2n] + i x[2n+1] to that of x: X_k = E + W^k O, X_(half−k) = conj(E − W^k O), W = e^(−2πi/width). */
function takeApart(z: Float64Array, roots: Float64Array, { spectrum, at }: { readonly spectrum: Float64Array; readonly at: number }): void {
  const width = z.length;
  const re = z[0]!, im = z[1]!;
  spectrum[at] = re + im;
  spectrum[at + 1] = 0;
  spectrum[at + width] = re - im;
  spectrum[at + width + 1] = 0;
  for (let a = 2, b = width - 2; a <= b; a += 2, b -= 2) {
    const ar = z[a]!, ai = z[a + 1]!, br = z[b]!, bi = z[b + 1]!, wr = roots[a]!, wi = roots[a + 1]!;
    const er = 0.5 * (ar + br), ei = 0.5 * (ai - bi), or = 0.5 * (ai + bi), oi = 0.5 * (br - ar);
    const tr = wr * or - wi * oi, ti = wr * oi + wi * or;
    spectrum[at + a] = er + tr;
    spectrum[at + a + 1] = ei + ti;
    spectrum[at + b] = er - tr;
    spectrum[at + b + 1] = ti - ei;
  }
}

interface Half {
  readonly spectrum: Float64Array;
  readonly at: number;
  readonly scale: number;
}

/** The way back, conjugated so that a forward transform of z gives x[2n] + i x[2n+1]. */
function putTogether(z: Float64Array, roots: Float64Array, { spectrum, at, scale }: Half): void {
  const width = z.length;
  for (let a = 0, b = width; a <= b; a += 2, b -= 2) {
    const ar = scale * spectrum[at + a]!, ai = scale * spectrum[at + a + 1]!, br = scale * spectrum[at + b]!, bi = scale * spectrum[at + b + 1]!;
    const sr = ar + br, si = bi - ai, dr = ar - br, di = -ai - bi, wr = roots[a]!, wi = roots[a + 1]!;
    const tr = wr * dr - wi * di, ti = wr * di + wi * dr;
    z[a] = sr - ti;
    z[a + 1] = si + tr;
    if (b < width) {
      z[b] = sr + ti;
      z[b + 1] = tr - si;
    }
  }
}
