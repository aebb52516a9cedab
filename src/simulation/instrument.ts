import type { Random } from '../numerics/random.js';
import type { Scenario } from './types.js';

/** Heading effect, nT: first and second harmonic of the sensor's direction. */
export function headingEffect(setting: Scenario['heading'], yawDeg: number): number {
  const angle = yawDeg * Math.PI / 180;
  return setting.first_nt * Math.cos(angle - setting.first_phase_deg * Math.PI / 180)
    + setting.second_nt * Math.cos(2 * angle - setting.second_phase_deg * Math.PI / 180);
}

/** What the sensor writes for a true field: white noise, now and then a spike, or nothing at all (NaN, or a zero). */
export function sensorReadings(trueNT: Float64Array, setting: Scenario['sensor'], random: Random): Float64Array {
  const noise = random.fork('noise');
  const faults = random.fork('faults');
  const out = new Float64Array(trueNT.length);
  let dropped = 0;
  let blank = NaN;
  for (let i = 0; i < trueNT.length; i++) {
    out[i] = trueNT[i]! + setting.noise_nt * noise.normal();
    if (faults.uniform() < setting.spike_share) {
      out[i]! += (faults.uniform() < 0.5 ? -1 : 1) * setting.spike_nt * (0.3 + faults.uniform());
    }
    if (dropped === 0 && faults.uniform() < setting.dropout_share) {
      dropped = 1 + faults.integer(setting.dropout_run);
      // Some instruments leave the field empty, some write a zero.
      blank = faults.uniform() < 0.5 ? NaN : 0;
    }
    if (dropped > 0) {
      out[i] = blank;
      dropped -= 1;
    }
  }
  return out;
}
