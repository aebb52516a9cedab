import type { CellMeans } from './cellMeans.js';
import { emptyPins } from './pins.js';
import { solvePlate } from './solvePlate.js';
import { trendAt, type Trend } from './trend.js';
import type { GridFrame } from './types.js';

/** A surface on wide cells, less the trend; values at cell centres, row-major. */
export interface CoarseSurface {
  readonly frame: GridFrame;
  readonly z: Float64Array;
}

/** It only supplies the rim of tiles, whose influence dies out before the cells that are kept. */
const COARSE_TOLERANCE = 1e-3;
const COARSE_STEPS = 10;

/** Surface of the whole ground through the means of wide cells. */
export function coarseSurface(means: CellMeans, { frame, trend, tension, spacingM }: {
  frame: GridFrame; trend: Trend; tension: number; spacingM: number;
}): CoarseSurface {
  const { width, height, west, north, cellM } = frame;
  const pins = emptyPins(means.cell.length);
  let low = Infinity;
  let high = -Infinity;
  for (let n = 0; n < means.cell.length; n++) {
    const k = means.cell[n]!;
    const j = Math.floor(k / width);
    const value = means.value[n]! - trendAt(trend, means.x[n]!, means.y[n]!);
    pins.node[n] = k;
    pins.value[n] = value;
    pins.weight[n] = means.count[n]!;
    pins.dx[n] = (means.x[n]! - west) / cellM - 0.5 - (k - j * width);
    pins.dy[n] = (north - means.y[n]!) / cellM - 0.5 - j;
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  const { z } = solvePlate(
    { width, height, alpha: 1 - tension, tau: tension * (cellM / spacingM) ** 2, pins, watch: null },
    { tolerance: COARSE_TOLERANCE * Math.max(high - low, Number.MIN_VALUE), maxSteps: COARSE_STEPS },
  );
  return { frame, z };
}

/**
 * The surface at a place by cubic convolution; nodes beyond the rim count as the rim's.
 * Source: Keys (1981), IEEE Trans. Acoustics, Speech and Signal Processing 29, 1153-1160 (a = −½).
 */
export function surfaceAt({ frame: { width, height, west, north, cellM }, z }: CoarseSurface, x: number, y: number): number {
  const u = (x - west) / cellM - 0.5;
  const v = (north - y) / cellM - 0.5;
  const i = Math.floor(u);
  const j = Math.floor(v);
  let sum = 0;
  for (let b = -1; b <= 2; b++) {
    const row = Math.min(height - 1, Math.max(0, j + b)) * width;
    let across = 0;
    for (let a = -1; a <= 2; a++) across += keys(u - i - a) * z[row + Math.min(width - 1, Math.max(0, i + a))]!;
    sum += keys(v - j - b) * across;
  }
  return sum;
}

function keys(t: number): number {
  const d = Math.abs(t);
  if (d < 1) return (1.5 * d - 2.5) * d * d + 1;
  return d < 2 ? ((-0.5 * d + 2.5) * d - 4) * d + 2 : 0;
}
