import { samplesBounds } from '../gridFrame.js';
import type { GridFrame } from '../types.js';
import { DEEP_SPACINGS } from './layer.js';
import { layerDepthM } from './layerDepth.js';
import { fieldError, type OpennessMaps } from './fieldError.js';
import { patchOpenness, patchValue, solvePatch, type Openness, type Patch } from './patch.js';
import { placeReadings, readingsWithin, type HighSamples, type PlacedReadings } from './placedReadings.js';

export interface SourcesOptions {
  /** Distance between lines, metres. */
  readonly spacingM: number;
  /** Standard deviation of a reading's error; of the most accurate where the samples have errors of their own. */
  readonly noiseNT: number;
  /** Likeliest depth of the layer below the level of the readings' heights; NaN: from the readings. */
  readonly depthM?: number;
  /** 1 at cells whose value is wanted; null for all. */
  readonly wanted?: ArrayLike<number> | null;
  /** Whether the standard error is wanted too; it costs about as much again as the field. */
  readonly error?: boolean;
}

export const SOURCES_DEFAULTS = Object.freeze({ depthM: NaN, wanted: null, error: false });

export interface SourcesGrid {
  /** Field on the level from which heights count, nT; NaN where it is not wanted. */
  readonly values: Float32Array;
  /** Standard error of the field, nT; NaN where the readings leave it unknown. Null where it was not asked for. */
  readonly error: Float32Array | null;
  /** Likeliest depth of the layer. */
  readonly depthM: number;
}

/** Window beyond a block on all sides, in spacings: two lines further. */
const MARGIN_SPACINGS = 1.5;
/** Readings are averaged over squares no larger than this share of the layer's depth, so that peaks keep their height (2 %)… */
const SQUARE_PER_DEPTH = 0.5;
/** … and of the spacing, and no smaller than that, since the work grows with the cube of their number. */
const LARGEST_SQUARE = 1 / 5;
const SMALLEST_SQUARE = 1 / 10;
/**
 * Depth of the layer that the field is taken from, over the likeliest: where lines are further apart than that, too deep a
 * layer bridges them with more than is there, and one too shallow costs little. It falls from 1 at a spacing of one depth
 * by SHALLOWER for each further depth, to LEAST_DEPTH. Measured: the worst of 40 surveys is 1.14 times as wrong as linear
 * triangles instead of 1.23, all together are as good. What is left open is judged by the likeliest.
 */
const SHALLOWER = 0.3;
const LEAST_DEPTH = 0.85;
/** The layer keeps this far below the lowest sensor, in spacings, where the likeliest does. */
const BELOW_SPACINGS = 0.1;
/** Readings in a window at most, where they are crowded. */
const MOST = 220;
/** A lone reading has no neighbours to tell a field from. */
const LEAST = 2;

/**
 * Field of equivalent sources on the level from which the readings' heights count: a layer of sources below all readings,
 * of least norm under the stated noise, solved window by window (a block of one spacing and two lines around it) and
 * blended bilinearly, so that no seam shows and the work grows with the area. Where lines are further apart than the
 * sources are deep, it falls towards the local mean between them instead of bridging; the layer knows no direction, so
 * detail that the lines show along themselves reaches no further across than it would in a field.
 *
 * Source: Dampney (1969), Geophysics 34, 39-53; layer.ts and layerDepth.ts for the covariance and the depth.
 */
export function gridBySources(samples: HighSamples, frame: GridFrame, options: SourcesOptions): SourcesGrid {
  const { spacingM, noiseNT, wanted, error, depthM: stated } = { ...SOURCES_DEFAULTS, ...options };
  const { width, height, west, north, cellM } = frame;
  const depthM = stated > 0 ? stated : layerDepthM(samples, { spacingM, noiseNT });
  const squareM = Math.min(LARGEST_SQUARE * spacingM, Math.max(SMALLEST_SQUARE * spacingM, SQUARE_PER_DEPTH * depthM));
  const readings = placeReadings(samples, samplesBounds(samples), squareM);
  const lowestM = readings.up.reduce((least, up) => Math.min(least, up), 0);
  const likeliest = { depthM, deepM: DEEP_SPACINGS * spacingM };
  const share = Math.min(1, Math.max(LEAST_DEPTH, 1 - SHALLOWER * (spacingM / depthM - 1)));
  const layer = { ...likeliest, depthM: Math.max(share * depthM, Math.min(depthM, BELOW_SPACINGS * spacingM - lowestM)) };
  const side = Math.max(2, Math.round(spacingM / cellM));
  const reachM = side * cellM + MARGIN_SPACINGS * spacingM;

  const sum = new Float64Array(width * height);
  const parts = new Float64Array(width * height);
  const maps: OpennessMaps | null = error ? {
    variance: new Float32Array(sum.length).fill(NaN), strength: new Float32Array(sum.length), expected: new Float32Array(sum.length), ...occupiedCells(readings, frame),
  } : null;
  const is = (k: number): boolean => wanted === null || wanted[k] === 1;
  for (let bj = 0; (bj - 1) * side < height; bj++) {
    for (let bi = 0; (bi - 1) * side < width; bi++) {
      const block = { i: bi * side, j: bj * side, side };
      if (!anyWanted(frame, block, is)) continue;
      const x = west + block.i * cellM;
      const y = north - block.j * cellM;
      const chosen = readingsWithin(readings, { west: x - reachM, east: x + reachM, south: y - reachM, north: y + reachM }, MOST);
      if (chosen.length < LEAST) continue;
      const patch = solvePatch(readings, chosen, { layer, noiseNT });
      addBlock(patch, { frame, block, is }, { sum, parts });
      if (maps) mapBlock(solvePatch(readings, chosen, { layer: likeliest, noiseNT }), { frame, block, is }, maps);
    }
  }
  const values = Float32Array.from(sum, (s, k) => (parts[k]! > 0 ? s / parts[k]! : NaN));
  return { values, error: maps && fieldError(maps, { width, height, spacing: spacingM / cellM, depth: depthM / cellM, noiseNT }), depthM };
}

/** 1 at cells that hold readings, and what a reading there is worth of the most accurate. */
function occupiedCells({ x, y, weight, count }: PlacedReadings, { width, height, west, north, cellM }: GridFrame): Pick<OpennessMaps, 'occupied' | 'accuracy'> {
  const weights = new Float64Array(width * height);
  const counts = new Float64Array(width * height);
  for (let n = 0; n < x.length; n++) {
    const i = Math.floor((x[n]! - west) / cellM);
    const j = Math.floor((north - y[n]!) / cellM);
    if (!(i >= 0 && i < width && j >= 0 && j < height)) continue;
    weights[j * width + i]! += weight[n]!;
    counts[j * width + i]! += count[n]!;
  }
  return { occupied: Float32Array.from(counts, (held) => (held > 0 ? 1 : 0)), accuracy: Float32Array.from(counts, (held, k) => (held > 0 ? weights[k]! / held : 0)) };
}

/** A block's middle, at a corner of cells, and the number of cells to the next block's. */
interface Block {
  readonly i: number;
  readonly j: number;
  readonly side: number;
}

interface Place {
  readonly frame: GridFrame;
  readonly block: Block;
  readonly is: (k: number) => boolean;
}

function anyWanted({ width, height }: GridFrame, { i, j, side }: Block, is: (k: number) => boolean): boolean {
  for (let b = Math.max(0, j - side); b < Math.min(height, j + side); b++) {
    for (let a = Math.max(0, i - side); a < Math.min(width, i + side); a++) if (is(b * width + a)) return true;
  }
  return false;
}

function addBlock(patch: Patch, { frame: { width, height, west, north, cellM }, block: { i, j, side }, is }: Place, { sum, parts }: { sum: Float64Array; parts: Float64Array }): void {
  for (let b = Math.max(0, j - side); b < Math.min(height, j + side); b++) {
    const down = 1 - Math.abs(b + 0.5 - j) / side;
    for (let a = Math.max(0, i - side); a < Math.min(width, i + side); a++) {
      const k = b * width + a;
      if (!is(k)) continue;
      const part = down * (1 - Math.abs(a + 0.5 - i) / side);
      sum[k]! += part * patchValue(patch, west + (a + 0.5) * cellM, north - (b + 0.5) * cellM);
      parts[k]! += part;
    }
  }
}

/** What is left open changes slowly with the window: each cell takes it from the nearest block alone. */
function mapBlock(patch: Patch, { frame: { width, height, west, north, cellM }, block: { i, j, side }, is }: Place, maps: OpennessMaps): void {
  const work = new Float64Array(2 * patch.weights.length);
  const half = side >> 1;
  for (let b = Math.max(0, j - half); b < Math.min(height, j - half + side); b++) {
    for (let a = Math.max(0, i - half); a < Math.min(width, i - half + side); a++) {
      const k = b * width + a;
      if (!is(k)) continue;
      const open: Openness = patchOpenness(patch, [west + (a + 0.5) * cellM, north - (b + 0.5) * cellM], work);
      maps.variance[k] = open.variance;
      maps.strength[k] = open.strength;
      maps.expected[k] = open.expected;
    }
  }
}
