import { addDipole } from '../field/dipole.js';
import { addPole } from '../field/pole.js';
import { totalFieldAnomaly } from '../field/totalField.js';
import type { Dipoles, Poles } from './steelSources.js';

/** The main field as it varies over a parcel: vector at an origin and its change per metre, frame axes, nT. */
export interface LocalMainField {
  readonly originX: number;
  readonly originY: number;
  readonly at: readonly [number, number, number];
  readonly perEast: readonly [number, number, number];
  readonly perNorth: readonly [number, number, number];
}

/**
 * What poles and dipoles do to the total field: |F + B| − |F|, exact, with |F| itself beside it.
 * `heightM` is above ground, which is flat.
 */
export function sourceField(main: LocalMainField, poles: Poles, dipoles: Dipoles): (x: number, y: number, heightM: number) => { anomalyNT: number; mainNT: number } {
  const f = new Float64Array(3);
  const b = new Float64Array(3);
  return (x, y, heightM) => {
    for (let k = 0; k < 3; k++) {
      f[k] = main.at[k]! + (x - main.originX) * main.perEast[k]! + (y - main.originY) * main.perNorth[k]!;
      b[k] = 0;
    }
    for (const [px, py, pz, m] of poles) addPole(b, m, x - px, y - py, heightM - pz);
    for (const [px, py, pz, mx, my, mz] of dipoles) addDipole(b, mx, my, mz, x - px, y - py, heightM - pz);
    return { anomalyNT: totalFieldAnomaly(b, f), mainNT: Math.hypot(f[0]!, f[1]!, f[2]!) };
  };
}
