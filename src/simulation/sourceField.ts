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
 * `heightM` is above ground, which is flat. Sources are kept in flat columns, since each reading hears all of them.
 */
export function sourceField(main: LocalMainField, poles: Poles, dipoles: Dipoles): (x: number, y: number, heightM: number) => { anomalyNT: number; mainNT: number } {
  const f = new Float64Array(3);
  const b = new Float64Array(3);
  const p = Float64Array.from(poles.flat());
  const d = Float64Array.from(dipoles.flat());
  return (x, y, heightM) => {
    for (let k = 0; k < 3; k++) {
      f[k] = main.at[k]! + (x - main.originX) * main.perEast[k]! + (y - main.originY) * main.perNorth[k]!;
      b[k] = 0;
    }
    for (let i = 0; i < p.length; i += 4) addPole(b, p[i + 3]!, x - p[i]!, y - p[i + 1]!, heightM - p[i + 2]!);
    for (let i = 0; i < d.length; i += 6) addDipole(b, d[i + 3]!, d[i + 4]!, d[i + 5]!, x - d[i]!, y - d[i + 1]!, heightM - d[i + 2]!);
    return { anomalyNT: totalFieldAnomaly(b, f), mainNT: Math.hypot(f[0]!, f[1]!, f[2]!) };
  };
}
