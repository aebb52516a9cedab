import { choleskySolve, tryCholesky } from '../../numerics/cholesky.js';
import { layerCovariance, layerKernel, type Layer } from './layer.js';
import type { PlacedReadings } from './placedReadings.js';

/** The readings of one window with the layer that explains them. */
export interface Patch {
  readonly layer: Layer;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly up: Float64Array;
  /** Lower factor of the readings' covariance, in units of the layer's variance. */
  readonly factor: Float64Array;
  /** Inverse covariance times the readings less `mean`. */
  readonly weights: Float64Array;
  readonly mean: number;
  /** −2 log likelihood, the layer's variance at its best, constants left out. */
  readonly misfit: number;
}

/** Noise is at least this share of the readings' standard deviation: below it the factor would hold rounding alone. */
const LEAST_NOISE = 1e-3;
/** The noise grows by this until the covariance has a factor; it has one at the first try save for readings in the same place. */
const NOISE_GROWTH = 10;

/** `noiseNT`: standard deviation of the error of the most accurate reading. */
export function solvePatch(readings: PlacedReadings, chosen: Int32Array, { layer, noiseNT }: { readonly layer: Layer; readonly noiseNT: number }): Patch {
  const count = chosen.length;
  const pick = (from: Float64Array): Float64Array => Float64Array.from(chosen, (n) => from[n]!);
  const [x, y, up, value, weight] = [pick(readings.x), pick(readings.y), pick(readings.up), pick(readings.value), pick(readings.weight)];
  const mean = value.reduce((sum, v) => sum + v, 0) / count;
  const variance = value.reduce((sum, v) => sum + (v - mean) ** 2, 0) / count;
  const data = value.map((v) => v - mean);
  const factor = new Float64Array(count * count);
  // Readings that are all alike leave nothing to explain; any layer does.
  for (let least = LEAST_NOISE ** 2; ; least *= NOISE_GROWTH) {
    for (let a = 0; a < count; a++) {
      for (let b = 0; b <= a; b++) {
        const dx = x[a]! - x[b]!;
        const dy = y[a]! - y[b]!;
        factor[a * count + b] = layerCovariance(layer, dx * dx + dy * dy, up[a]! + up[b]!);
      }
      factor[a * count + a]! += Math.max(least, variance > 0 ? noiseNT ** 2 / weight[a]! / variance : 1);
    }
    if (tryCholesky(factor, count)) break;
    if (least > 1) throw new Error('solvePatch: the covariance of the readings has no factor');
  }
  const weights = choleskySolve(factor, count, data);
  let squares = 0;
  let logs = 0;
  for (let a = 0; a < count; a++) {
    squares += data[a]! * weights[a]!;
    logs += Math.log(factor[a * count + a]!);
  }
  return { layer, x, y, up, factor, weights, mean, misfit: variance > 0 ? count * Math.log(squares / count) + 2 * logs : 0 };
}

/** The field at a place on the level, nT. */
export function patchValue({ layer, x, y, up, weights, mean }: Patch, atX: number, atY: number): number {
  let sum = mean;
  for (let a = 0; a < weights.length; a++) {
    const dx = x[a]! - atX;
    const dy = y[a]! - atY;
    sum += weights[a]! * layerCovariance(layer, dx * dx + dy * dy, up[a]!);
  }
  return sum;
}

/** What the readings leave open at a place on the level. */
export interface Openness {
  /** Variance of the field there, given the readings, in units of the layer's variance. */
  variance: number;
  /** Squared strength of the layer beneath as the readings have it, and what it would be on average for a variance of 1. */
  strength: number;
  expected: number;
}

/** `work` holds two numbers for each reading of the patch. */
export function patchOpenness({ layer, x, y, up, factor, weights }: Patch, [atX, atY]: readonly [number, number], work: Float64Array): Openness {
  const count = weights.length;
  let variance = layerCovariance(layer, 0, 0);
  let strength = 0;
  let expected = 0;
  for (let a = 0; a < count; a++) {
    const dx = x[a]! - atX;
    const dy = y[a]! - atY;
    const squared = dx * dx + dy * dy;
    let field = layerCovariance(layer, squared, up[a]!);
    let source = layerKernel(layer, squared, up[a]!);
    strength += source * weights[a]!;
    const row = a * count;
    for (let b = 0; b < a; b++) {
      const f = factor[row + b]!;
      field -= f * work[2 * b]!;
      source -= f * work[2 * b + 1]!;
    }
    const pivot = factor[row + a]!;
    field /= pivot;
    source /= pivot;
    work[2 * a] = field;
    work[2 * a + 1] = source;
    variance -= field * field;
    expected += source * source;
  }
  return { variance: Math.max(0, variance), strength: strength * strength, expected };
}
