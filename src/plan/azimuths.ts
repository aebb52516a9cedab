import type { MainField } from '../site/types.js';

type Directions = Pick<MainField, 'declinationDeg' | 'convergenceDeg'>;

/** Azimuth from true north of a direction given from grid north, degrees in [0, 360): grid north lies the convergence east of true north. */
export function trueAzimuthDeg(gridAzimDeg: number, { convergenceDeg }: Directions): number {
  return fullTurn(gridAzimDeg + convergenceDeg);
}

/** What a compass shows for a direction given from grid north, degrees in [0, 360). */
export function magneticAzimuthDeg(gridAzimDeg: number, mainField: Directions): number {
  return fullTurn(gridAzimDeg + mainField.convergenceDeg - mainField.declinationDeg);
}

function fullTurn(azimDeg: number): number {
  return ((azimDeg % 360) + 360) % 360;
}
