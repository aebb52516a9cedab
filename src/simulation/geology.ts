import type { Random } from '../numerics/random.js';
import type { Scenario } from './types.js';

/** Waves for each smooth field: enough that no single wave can be made out. */
const WAVES = 24;
/** Wavelengths spread about the stated one by this factor either way. */
const SPREAD = 1.6;

/**
 * Field of soil and rock, nT, at a place given in frame metres from the parcel's middle: a slope, and random Fourier
 * fields of stated rms. It is added to the total field as it is: at its size projection and exact field agree.
 */
export function geologyField(setting: Scenario['geology'], random: Random): (x: number, y: number) => number {
  const slope = setting.slope_nt_km / 1000;
  const azimuth = setting.slope_azimuth_deg * Math.PI / 180;
  const waves = setting.waves.flatMap(({ rms_nt, wavelength_m }) => Array.from({ length: WAVES }, () => {
    const k = 2 * Math.PI / (wavelength_m * SPREAD ** (2 * random.uniform() - 1));
    const direction = 2 * Math.PI * random.uniform();
    return [k * Math.sin(direction), k * Math.cos(direction), 2 * Math.PI * random.uniform(), rms_nt * Math.sqrt(2 / WAVES)] as const;
  }));
  return (x, y) => {
    let value = slope * (x * Math.sin(azimuth) + y * Math.cos(azimuth));
    for (const [kx, ky, phase, size] of waves) value += size * Math.cos(kx * x + ky * y + phase);
    return value;
  };
}
