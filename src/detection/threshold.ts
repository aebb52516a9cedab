import { normalCdf, normalQuantile } from '../numerics/special.js';

const M2_PER_HA = 10_000;

/**
 * Side of an independent look in units of the distance from sensor to source. The matched filter's output over a pole
 * at distance z is a random field with correlation (1 + r²/4z²)^(−3/2) in white noise, so a plane holds
 * λ (2π)^(−3/2) t e^(−t²/2) peaks above t per unit of area, λ = 3/(4z²); set equal to looks times the tail of one look,
 * e^(−t²/2)/(t √2π), that is one look to 8πz²/3t², a side of 0.69 z at t = 4.2.
 *
 * Source: Adler (1981), The Geometry of Random Fields, theorem 6.9.3 (peaks of a Gaussian field above a high level).
 */
export const LOOK_SIDE_SHARE = 0.7;

export interface FalseAlarmOptions {
  /** False alarms by noise alone that are put up with on a hectare. */
  readonly falseAlarmsPerHa: number;
  /** Distance from the sensor to the source, metres: typical height plus typical depth. */
  readonly distanceM: number;
}

/** Independent looks on a hectare. */
export function looksPerHa(distanceM: number): number {
  return M2_PER_HA / (LOOK_SIDE_SHARE * distanceM) ** 2;
}

/** False alarm chance of one look: false alarms wanted per hectare ÷ looks per hectare. */
export function falseAlarmChance({ falseAlarmsPerHa, distanceM }: FalseAlarmOptions): number {
  const chance = falseAlarmsPerHa / looksPerHa(distanceM);
  if (!(chance > 0 && chance < 1)) throw new Error(`falseAlarmChance: ${falseAlarmsPerHa} false alarms per hectare at ${distanceM} m give a chance of ${chance} a look`);
  return chance;
}

/** Deflection at which a look counts as a detection, two-sided: Φ⁻¹(1 − P_FA/2). */
export function detectionThreshold(options: FalseAlarmOptions): number {
  return -normalQuantile(falseAlarmChance(options) / 2);
}

/**
 * Chance that a source of deflection d is detected by a two-sided test: Φ(d − t) + Φ(−d − t).
 * Source: Kay (1998), Fundamentals of Statistical Signal Processing II, ch. 4; Van Trees (1968).
 */
export function detectionProbability(deflection: number, threshold: number): number {
  const wrongSide = deflection + threshold > FAR_SIGMAS ? 0 : normalCdf(-deflection - threshold);
  return deflection - threshold > FAR_SIGMAS ? 1 : normalCdf(deflection - threshold) + wrongSide;
}

/** A normal variable is beyond this with a chance that a double cannot add to 1. */
const FAR_SIGMAS = 8.3;
