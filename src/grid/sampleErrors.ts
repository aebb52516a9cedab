import { UserError } from '../errors.js';
import type { Samples } from './types.js';

/** Errors further apart than this are no errors, and their squares would be no numbers. */
const MOST_RATIO = 1e100;

/**
 * Smallest and largest standard error of the samples that count; null where none are stated. Throws UserError
 * `value_invalid` for one that is no positive number: a sample whose error nobody knows has no weight.
 */
export function sdRange({ x, y, value, sd }: Samples): readonly [least: number, most: number] | null {
  if (!sd) return null;
  let least = Infinity;
  let most = 0;
  for (let n = 0; n < x.length; n++) {
    if (!Number.isFinite(x[n]! + y[n]! + value[n]!)) continue;
    if (!(sd[n]! > 0 && sd[n]! < Infinity)) throw invalid(`${sd[n]} for reading ${n + 1}`, 'a positive number');
    least = Math.min(least, sd[n]!);
    most = Math.max(most, sd[n]!);
  }
  if (most / least > MOST_RATIO) throw invalid(`${least} to ${most}`, `errors of which none is more than ${MOST_RATIO} times another`);
  return [least, most];
}

/**
 * Weight of each sample, the square of the smallest error over its own: 1 for the most accurate, so that equal errors
 * change no number at all. Empty where no errors are stated; of no meaning for samples that do not count.
 */
export function sampleWeights(samples: Samples): Float64Array {
  const range = sdRange(samples);
  return range ? Float64Array.from(samples.sd!, (sd) => (range[0] / sd) ** 2) : new Float64Array(0);
}

function invalid(found: string, wanted: string): UserError {
  return new UserError({ code: 'value_invalid', where: 'grid, standard error of a reading', found, wanted, advice: 'leave out readings without one, or state none at all' });
}
