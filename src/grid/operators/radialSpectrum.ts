import { realFft2, spectrumStride } from '../../numerics/fft2.js';
import { fftGoodSize } from '../../numerics/fftGoodSize.js';
import type { Grid } from '../../raster/types.js';
import { planeAt, rimPlane } from './rimPlane.js';

/** Power by wave number, mean over rings around 0. Ring r holds the waves nearest to `r · step` radians a metre. */
export interface RadialSpectrum {
  readonly step: number;
  /** Mean power of a ring in the grid's unit squared, scaled so that independent noise of variance v gives v. */
  readonly power: Float64Array;
  /** Waves in each ring, counting both directions. */
  readonly waves: Float64Array;
}

/** Share of width and height over which each edge is led to zero, so that its step does not pass for short waves. */
const TAPER_SHARE = 0.2;

/** The radially averaged power spectrum of a grid less the plane of its rim; gaps count as zero. Source: Spector & Grant (1970), Geophysics 35, 293-302. */
export function radialSpectrum(grid: Grid): RadialSpectrum {
  const { cellM } = grid;
  const width = fftGoodSize(grid.width);
  const height = fftGoodSize(grid.height);
  const stride = spectrumStride(width);
  const numbers = new Float64Array(height * stride);
  const planeValue = planeAt(rimPlane(grid), grid);
  const across = taper(grid.width);
  const along = taper(grid.height);
  let weight = 0;
  for (let j = 0; j < grid.height; j++) {
    for (let i = 0; i < grid.width; i++) {
      const value = grid.values[j * grid.width + i]!;
      if (Number.isNaN(value)) continue;
      const w = across[i]! * along[j]!;
      numbers[j * stride + i] = w * (value - planeValue(i, j));
      weight += w * w;
    }
  }
  realFft2(numbers, { width, height });
  const perColumn = (2 * Math.PI) / (width * cellM);
  const perRow = (2 * Math.PI) / (height * cellM);
  const step = Math.max(perColumn, perRow);
  const rings = Math.ceil(Math.hypot((perColumn * width) / 2, (perRow * height) / 2) / step) + 1;
  const power = new Float64Array(rings);
  const waves = new Float64Array(rings);
  for (let l = 0; l < height; l++) {
    const north = Math.min(l, height - l) * perRow;
    for (let k = 0; k <= width / 2; k++) {
      const ring = Math.round(Math.hypot(k * perColumn, north) / step);
      const both = k === 0 || 2 * k === width ? 1 : 2;
      const at = l * stride + 2 * k;
      power[ring]! += (both * (numbers[at]! ** 2 + numbers[at + 1]! ** 2)) / weight;
      waves[ring]! += both;
    }
  }
  for (let ring = 0; ring < rings; ring++) if (waves[ring]! > 0) power[ring]! /= waves[ring]!;
  return { step, power, waves };
}

/** 1 in the middle, falling as a cosine to near 0 at both ends. */
function taper(count: number): Float64Array {
  const length = Math.max(1, TAPER_SHARE * count);
  return Float64Array.from({ length: count }, (_, n) => {
    const end = Math.min(n, count - 1 - n) + 0.5;
    return end >= length ? 1 : 0.5 - 0.5 * Math.cos((Math.PI * end) / length);
  });
}
