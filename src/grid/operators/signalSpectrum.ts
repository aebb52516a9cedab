import type { RadialSpectrum } from './radialSpectrum.js';

/** What part of a radial spectrum is signal, as a function of the wave number. */
export interface SignalSpectrum {
  /** Power of the signal at wave number k, radians a metre, same scale as the radial spectrum. */
  power(k: number): number;
  /** Beyond this wave number noise is stronger than signal. */
  readonly cut: number;
  /** Depth of the sources below the surface that the decline of the spectrum tells of, metres. */
  readonly depthM: number;
}

/** Rings between this share of the cut and the cut tell the decline. */
const DECLINE_FROM = 0.4;

/**
 * Measured power less the noise up to the wave number where noise takes over; from there on the exponential
 * e^(−2 k depth) that the rings before it tell of. null where noise is stronger from the first ring on.
 *
 * Source: Spector & Grant (1970), Geophysics 35, 293-302.
 */
export function signalSpectrum({ step, power, waves }: RadialSpectrum, noise: number): SignalSpectrum | null {
  const variance = noise * noise;
  let last = 0;
  while (last + 1 < power.length && power[last + 1]! > 2 * variance) last++;
  if (last < 1) return null;
  const sums = { w: 0, k: 0, p: 0, kk: 0, kp: 0 };
  for (let ring = Math.min(last - 1, Math.ceil(DECLINE_FROM * last)); ring <= last; ring++) {
    if (ring < 1) continue;
    const w = waves[ring]!, k = ring * step, p = Math.log(power[ring]! - variance);
    sums.w += w;
    sums.k += w * k;
    sums.p += w * p;
    sums.kk += w * k * k;
    sums.kp += w * k * p;
  }
  const spread = sums.kk - (sums.k * sums.k) / sums.w;
  const slope = spread > 0 ? (sums.kp - (sums.k * sums.p) / sums.w) / spread : 0;
  const level = (sums.p - slope * sums.k) / sums.w;
  return {
    cut: last * step,
    depthM: -slope / 2,
    power(k) {
      const at = k / step;
      // The first ring stands for all longer waves; the mean belongs to them.
      if (at >= last) return Math.exp(level + slope * k);
      const ring = Math.max(1, Math.floor(at));
      if (ring >= last || at <= 1) return power[ring]! - variance;
      return (ring + 1 - at) * (power[ring]! - variance) + (at - ring) * (power[ring + 1]! - variance);
    },
  };
}
