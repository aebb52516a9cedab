import type { Random } from '../numerics/random.js';
import { writeCsv } from '../table/writeCsv.js';
import type { Scenario } from './types.js';

export interface BaseLogInput {
  readonly setting: Scenario['base'];
  readonly startS: number;
  readonly endS: number;
  readonly mainNT: number;
  readonly variation: (timeS: number) => number;
  readonly random: Random;
}

/** The base station's log as CSV, `utc,nt`. A false reading is a few hundred nT off. */
export function baseLog({ setting, startS, endS, mainNT, variation, random }: BaseLogInput): Uint8Array {
  // The base's clock ticks between the rover's.
  const firstS = startS - setting.lead_s + 0.37;
  const count = Math.max(0, Math.floor((endS + setting.lead_s - firstS) / setting.interval_s) + 1);
  const gapped = (timeS: number): boolean => setting.gaps.some(({ from_s, length_s }) => timeS >= startS + from_s && timeS < startS + from_s + length_s);
  const times = Float64Array.from({ length: count }, (_, i) => firstS + i * setting.interval_s).filter((timeS) => !gapped(timeS));
  const noise = random.fork('noise');
  const values = times.map((timeS) => mainNT + setting.offset_nt + variation(timeS) + setting.noise_nt * noise.normal());
  const faults = random.fork('faults');
  for (let k = 0; k < setting.spikes && values.length > 0; k++) {
    values[faults.integer(values.length)]! += (faults.uniform() < 0.5 ? -1 : 1) * (150 + 400 * faults.uniform());
  }
  return writeCsv([{ name: 'utc', utcS: times, decimals: 2 }, { name: 'nt', values, decimals: 2 }]);
}
