import type { Grid } from '../../raster/types.js';
import type { Plane } from './types.js';

/** A rim that is narrower than this share of the longer way across does not tell a slope in that direction (a single row or column of cells). */
const LEAST_SPREAD = 1e-6;

/**
 * The plane through the rim of a grid by least squares: through the cells with a value that have a neighbour without, or
 * none. What is left is near zero where the grid ends, so that it can be led to zero outside without a step. Where the
 * rim tells no slope, the plane is level. Without any value all of it is 0.
 */
export function rimPlane({ width, height, cellM, values }: Grid): Plane {
  const sums = { n: 0, x: 0, y: 0, z: 0, xx: 0, xy: 0, yy: 0, xz: 0, yz: 0 };
  const isSet = (i: number, j: number): boolean => i >= 0 && j >= 0 && i < width && j < height && !Number.isNaN(values[j * width + i]!);
  for (let j = 0; j < height; j++) {
    for (let i = 0; i < width; i++) {
      const z = values[j * width + i]!;
      if (Number.isNaN(z) || (isSet(i - 1, j) && isSet(i + 1, j) && isSet(i, j - 1) && isSet(i, j + 1))) continue;
      const x = (i - (width - 1) / 2) * cellM;
      const y = ((height - 1) / 2 - j) * cellM;
      sums.n++;
      sums.x += x;
      sums.y += y;
      sums.z += z;
      sums.xx += x * x;
      sums.xy += x * y;
      sums.yy += y * y;
      sums.xz += x * z;
      sums.yz += y * z;
    }
  }
  const { n } = sums;
  if (n === 0) return { level: 0, east: 0, north: 0 };
  const mx = sums.x / n, my = sums.y / n, mz = sums.z / n;
  const xx = sums.xx / n - mx * mx, xy = sums.xy / n - mx * my, yy = sums.yy / n - my * my;
  const xz = sums.xz / n - mx * mz, yz = sums.yz / n - my * mz;
  const det = xx * yy - xy * xy;
  if (!(det > LEAST_SPREAD * (xx + yy) ** 2)) return { level: mz, east: 0, north: 0 };
  const east = (yy * xz - xy * yz) / det;
  const north = (xx * yz - xy * xz) / det;
  return { level: mz - east * mx - north * my, east, north };
}

/** Calls back for every cell with the plane's value there. */
export function planeAt({ level, east, north }: Plane, { width, height, cellM }: Omit<Grid, 'values'>): (i: number, j: number) => number {
  return (i, j) => level + east * cellM * (i - (width - 1) / 2) + north * cellM * ((height - 1) / 2 - j);
}
