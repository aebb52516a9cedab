import type { CellMeans } from './cellMeans.js';
import type { SolveTile } from './solveTile.js';
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

/** Surface of the whole ground through the means of wide cells, solved as a tile of its own; `range` is that of the readings. */
export async function coarseSurface(means: CellMeans, { frame, trend, tension, spacingM, range, solve }: {
  frame: GridFrame; trend: Trend; tension: number; spacingM: number; range: number; solve: SolveTile;
}): Promise<CoarseSurface> {
  const { width, height, west, north, cellM } = frame;
  const { values } = await solve({
    // Copies, since a thread takes what it is given.
    frame, own: { left: 0, top: 0, width, height }, x: means.x.slice(), y: means.y.slice(), value: means.value.slice(), weight: new Float64Array(0),
    trend, rimNode: new Int32Array(0), rimValue: new Float64Array(0), tension, spacingM, reachM: Infinity,
    tolerance: COARSE_TOLERANCE * range, maxSteps: COARSE_STEPS,
  });
  return { frame, z: Float64Array.from(values, (value, k) => {
    const j = Math.floor(k / width);
    return value - trendAt(trend, west + (k - j * width + 0.5) * cellM, north - (j + 0.5) * cellM);
  }) };
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
