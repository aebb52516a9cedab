import { roundingCovariance } from './localFrame.js';
import type { Covariance, GaussianPart, HalfAxes } from './types.js';

/**
 * Share of the variance, along a half axis of the digits, up to which their rounding is taken as Gaussian: the 95 % ellipse
 * of such a place holds 95.0 to 95.2 %. A larger share is kept as what it is, an even spread over a digit (Gaussian, a
 * place that rests on its digits alone would be held by 99.8 %).
 */
export const ROUNDING_SHARE = 0.25;

/**
 * A place whose error is the sum of a Gaussian one and of the rounding of its digits.
 *
 * @param cov Covariance of all but the digits, m².
 * @param halfDigits Half a digit along each of the coordinates' own axes, frame metres.
 */
export function gaussianWithDigits(place: Pick<GaussianPart, 'x' | 'y' | 'weight' | 'cov'>, halfDigits: HalfAxes): GaussianPart {
  const digits = roundingCovariance(halfDigits);
  const cov: Covariance = [place.cov[0] + digits[0], place.cov[1] + digits[1], place.cov[2] + digits[2]];
  const part: GaussianPart = { ...place, kind: 'gaussian', cov };
  return halfDigits.some((axis) => rules(axis, place.cov)) ? { ...part, rounding: halfDigits } : part;
}

/** Whether the rounding along one axis is more than its share of the variance there. */
function rules([east, north]: HalfAxes[number], [ee, en, nn]: Covariance): boolean {
  const length2 = east * east + north * north;
  if (length2 === 0) return false;
  const other = (ee * east * east + 2 * en * east * north + nn * north * north) / length2;
  const own = length2 / 3;
  return own > ROUNDING_SHARE * (own + other);
}
