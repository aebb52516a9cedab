import { median, quantile } from '../numerics/robust.js';
import type { NoiseModel } from '../detection/types.js';
import type { Readings } from '../readings/types.js';
import type { Survey } from './survey.js';

/** Sum of squares of the weights 1, −4, 6, −4, 1 of a fourth difference. */
const FOURTH_DIFFERENCE_NORM = 70;
/** Chance that a normal value lies within one standard deviation. */
const ONE_SIGMA = 0.6826894921;
const MAD_SCALE = 1.4826;
/** Fewer pairs than this tell nothing about a lag. */
const LEAST_PAIRS = 30;

/**
 * White noise of a reading by fourth differences along passes: their 68 % point over √70, so that spikes and sources
 * count little; at least the step that values are rounded to, over √12. NaN breaks a run. 0 where there are no data.
 *
 * Source: fourth differences as in airborne survey practice (Reeves 2005, Aeromagnetic Surveys, ch. 2).
 */
export function whiteNoise(readings: Readings): number {
  const { residual, line, count } = readings;
  const sizes: number[] = [];
  let quantum = Infinity;
  for (let i = 2; i + 2 < count; i++) {
    if (line[i - 2] !== line[i + 2]) continue;
    const d = residual[i - 2]! - 4 * residual[i - 1]! + 6 * residual[i]! - 4 * residual[i + 1]! + residual[i + 2]!;
    if (!Number.isFinite(d)) continue;
    sizes.push(Math.abs(d));
    const step = Math.abs(residual[i]! - residual[i - 1]!);
    // Rounding noise of the subtraction is no quantum.
    if (step > 1e-6 && step < quantum) quantum = step;
  }
  if (sizes.length === 0) return 0;
  const spread = quantile(Float64Array.from(sizes), ONE_SIGMA) / Math.sqrt(FOURTH_DIFFERENCE_NORM);
  return Math.max(spread, Number.isFinite(quantum) ? quantum / Math.sqrt(12) : 0);
}

/**
 * Correlated noise of the residual from its robust semivariogram along passes, blocks marked in `skip` left out:
 * γ(d) = white² + c² (1 − e^(−d/L)) fitted to half the squared median spread of differences at lags up to two windows.
 *
 * Source: robust semivariogram as in Cressie & Hawkins (1980), here with the median absolute difference; exponential
 * model, Chilès & Delfiner (2012), ch. 2.
 */
export function noiseModel(survey: Survey, value: Float64Array, { whiteSdNT, skip }: { readonly whiteSdNT: number; readonly skip: Uint8Array }): NoiseModel {
  const { blocks, reachM, windowM, motion } = survey;
  const lags: number[] = [];
  for (let lag = reachM / 3; lag <= 2 * windowM; lag *= 1.5) lags.push(lag);
  const gamma: number[] = [];
  const kept: number[] = [];
  const blockM = medianStep(survey);
  for (const lag of lags) {
    const step = Math.max(1, Math.round(lag / blockM));
    const differences: number[] = [];
    for (let i = 0; i + step < blocks.count; i++) {
      const j = i + step;
      if (skip[i] || skip[j] || blocks.pass[i] !== blocks.pass[j]) continue;
      differences.push(Math.abs(value[i]! - value[j]!));
    }
    if (differences.length < LEAST_PAIRS) continue;
    kept.push(step * blockM);
    gamma.push(Math.max(1e-12, (MAD_SCALE * median(Float64Array.from(differences))) ** 2 / 2));
  }
  const nugget = whiteSdNT ** 2 / Math.max(1, median(blocks.size));
  const { sillNT2, lengthM } = exponentialFit(kept, gamma, nugget, reachM);
  return {
    whiteSdNT, correlatedSdNT: Math.sqrt(sillNT2), correlationM: lengthM,
    positionSdM: motion.positionSdM, positionCorrelationS: motion.positionCorrelationS,
  };
}

function medianStep({ blocks, reachM }: Survey): number {
  const steps: number[] = [];
  for (let i = 1; i < blocks.count; i++) {
    if (blocks.pass[i] === blocks.pass[i - 1]) steps.push(Math.hypot(blocks.x[i]! - blocks.x[i - 1]!, blocks.y[i]! - blocks.y[i - 1]!));
  }
  return steps.length === 0 ? reachM : Math.max(1e-6, median(Float64Array.from(steps)));
}

/** Least squares of log γ over lengths on a grid; the sill that goes with each length is found by halving. */
function exponentialFit(lags: readonly number[], gamma: readonly number[], nugget: number, reachM: number): { sillNT2: number; lengthM: number } {
  let best = { sillNT2: nugget, lengthM: 4 * reachM, misfit: Infinity };
  if (lags.length === 0) return best;
  for (let lengthM = reachM; lengthM <= 64 * reachM; lengthM *= 1.25) {
    const shape = lags.map((lag) => 1 - Math.exp(-lag / lengthM));
    let logSill = Math.log(Math.max(1e-12, gamma[gamma.length - 1]! / shape[shape.length - 1]!));
    let misfit = Infinity;
    for (let step = 2; step > 0.01; step /= 2) {
      for (const move of [-step, step, -step, step]) {
        let sum = 0;
        for (let k = 0; k < lags.length; k++) sum += Math.log((nugget + Math.exp(logSill + move) * shape[k]!) / gamma[k]!) ** 2;
        if (sum < misfit) {
          misfit = sum;
          logSill += move;
        }
      }
    }
    if (misfit < best.misfit) best = { sillNT2: Math.exp(logSill), lengthM, misfit };
  }
  return best;
}
