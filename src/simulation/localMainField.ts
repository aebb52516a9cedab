import { mainFieldInFrame } from '../field/mainField.js';
import { convergenceDeg } from '../geodesy/convergence.js';
import type { Crs, DatumShift } from '../geodesy/types.js';
import type { LocalMainField } from './sourceField.js';

/** Over this distance the main field is as good as linear, and far above rounding. */
const ARM_M = 2000;

/** Main field (World Magnetic Model) at a place of the frame and its slope there, in the frame's axes. */
export function localMainField(
  frame: Crs, [originX, originY]: readonly [number, number],
  { toWgs84, heightM, decimalYear }: { toWgs84: DatumShift; heightM: number; decimalYear: number },
): LocalMainField {
  const vector = (x: number, y: number): [number, number, number] => {
    const { lonDeg, latDeg } = toWgs84.place(...frame.inverse(x, y));
    const { totalNT, unit } = mainFieldInFrame({ lonDeg, latDeg, heightM, decimalYear, convergenceDeg: convergenceDeg(frame, x, y) });
    return [unit[0] * totalNT, unit[1] * totalNT, unit[2] * totalNT];
  };
  const slope = (a: readonly number[], b: readonly number[]): [number, number, number] => [
    (a[0]! - b[0]!) / (2 * ARM_M), (a[1]! - b[1]!) / (2 * ARM_M), (a[2]! - b[2]!) / (2 * ARM_M),
  ];
  return {
    originX, originY, at: vector(originX, originY),
    perEast: slope(vector(originX + ARM_M, originY), vector(originX - ARM_M, originY)),
    perNorth: slope(vector(originX, originY + ARM_M), vector(originX, originY - ARM_M)),
  };
}
