import { addDipole } from '../../../src/field/dipole.js';
import { addPole, type Vector3 } from '../../../src/field/pole.js';
import { projectedAnomaly } from '../../../src/field/totalField.js';
import type { Grid } from '../../../src/raster/types.js';

/** Field of a source at a place of the grid's surface, `lift` metres above it. */
export type Source = (x: number, y: number, lift: number) => Vector3;

/** A pole (A·m, physics sign) or a dipole (A·m²) at east, north of the middle of the grid and depth below its surface. */
export const pole = (m: number, [px, py, depth]: readonly [number, number, number]): Source => (x, y, lift) => {
  const b = [0, 0, 0];
  addPole(b, m, x - px, y - py, depth + lift);
  return b;
};
export const dipole = ([mx, my, mz]: readonly number[], [px, py, depth]: readonly [number, number, number]): Source => (x, y, lift) => {
  const b = [0, 0, 0];
  addDipole(b, mx!, my!, mz!, x - px, y - py, depth + lift);
  return b;
};

/** Unit vector of a field: easting, northing, up. */
export function unitOf(inclinationDeg: number, declinationDeg: number): [number, number, number] {
  const rad = Math.PI / 180;
  const cos = Math.cos(inclinationDeg * rad);
  return [cos * Math.sin(declinationDeg * rad), cos * Math.cos(declinationDeg * rad), -Math.sin(inclinationDeg * rad)];
}

export const along = (unit: readonly number[]) => (b: Vector3): number => projectedAnomaly(b, unit);
export const downwards = (b: Vector3): number => -b[2]!;

/** A square grid about 0, 0. The southern and western edge lie at −side/2. */
export function makeGrid(cells: number, cellM: number, value: (x: number, y: number) => number): Grid & { values: Float64Array } {
  const values = new Float64Array(cells * cells);
  for (let j = 0; j < cells; j++) {
    for (let i = 0; i < cells; i++) values[j * cells + i] = value((i - (cells - 1) / 2) * cellM, ((cells - 1) / 2 - j) * cellM);
  }
  return { width: cells, height: cells, west: (-cells * cellM) / 2, north: (cells * cellM) / 2, cellM, values };
}

/** The largest difference as a share of the largest wanted value, over cells at least `band` cells from the edge. NaN counts as infinite unless both are. */
export function worstShare(got: ArrayLike<number>, wanted: Grid, band = 0): number {
  const { width, height, values } = wanted;
  let peak = 0, worst = 0;
  for (let n = 0; n < values.length; n++) if (Math.abs(values[n]!) > peak) peak = Math.abs(values[n]!);
  for (let j = band; j < height - band; j++) {
    for (let i = band; i < width - band; i++) {
      const n = j * width + i;
      if (Number.isNaN(got[n]!) && Number.isNaN(values[n]!)) continue;
      const difference = Math.abs(got[n]! - values[n]!);
      worst = Math.max(worst, Number.isNaN(difference) ? Infinity : difference);
    }
  }
  return worst / peak;
}
