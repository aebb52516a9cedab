import type { Random } from '../numerics/random.js';
import type { Scenario } from './types.js';

const DAY_S = 86400;
/** Waves that make up the pulsations, and how far their periods spread about the middle one (a factor either way). */
const PULSATIONS = 12;
const PERIOD_SPREAD = 2.5;
/** The quiet daily wave of middle latitudes is lowest near local noon. (Chapman & Bartels 1940, from memory.) */
const LOWEST_LOCAL_S = 11.5 * 3600;

/**
 * Variation of the main field with time, nT, the same at rover and base: a daily wave of three harmonics and short
 * pulsations that come and go.
 */
export function timeVariation(setting: Scenario['variation'], lonDeg: number, random: Random): (timeS: number) => number {
  const waves = Array.from({ length: PULSATIONS }, () => ({
    rate: 2 * Math.PI / (setting.pulsation_s * PERIOD_SPREAD ** (2 * random.uniform() - 1)),
    phase: random.uniform() * 2 * Math.PI,
    // The envelope swings over several minutes.
    beat: 2 * Math.PI / (240 + 600 * random.uniform()),
    beatPhase: random.uniform() * 2 * Math.PI,
    size: setting.pulsation_nt * Math.sqrt(4 / PULSATIONS),
  }));
  const sunS = lonDeg * DAY_S / 360;
  return (timeS) => {
    const angle = 2 * Math.PI * (timeS + sunS - LOWEST_LOCAL_S) / DAY_S;
    let value = -setting.daily_nt / 2 * (0.75 * Math.cos(angle) + 0.35 * Math.cos(2 * angle) + 0.1 * Math.cos(3 * angle + 0.6));
    for (const { rate, phase, beat, beatPhase, size } of waves) {
      value += size * Math.sin(rate * timeS + phase) * Math.sin(beat * timeS + beatPhase);
    }
    return value;
  };
}
