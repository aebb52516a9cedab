import { symmetricEigen2 } from '../numerics/eigen2.js';

/** A plane that is taken off values before a surface is laid through them, and put back after. Frame metres. */
export interface Trend {
  readonly x: number;
  readonly y: number;
  /** Value at (x, y). */
  readonly level: number;
  readonly perEastM: number;
  readonly perNorthM: number;
  /** Whether the places lie on one line (or in one place): then the plane is level. */
  readonly onLine: boolean;
}

export interface Means {
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  readonly value: ArrayLike<number>;
}

/** Least-squares plane; the mean where the standard deviation of the places across their line is below `lineWidthM`. */
export function fitTrend({ x, y, value }: Means, lineWidthM: number): Trend {
  const n = x.length;
  let mx = 0;
  let my = 0;
  let mz = 0;
  for (let s = 0; s < n; s++) {
    mx += x[s]! / n;
    my += y[s]! / n;
    mz += value[s]! / n;
  }
  let xx = 0;
  let xy = 0;
  let yy = 0;
  let xz = 0;
  let yz = 0;
  for (let s = 0; s < n; s++) {
    const dx = x[s]! - mx;
    const dy = y[s]! - my;
    const dz = value[s]! - mz;
    xx += dx * dx;
    xy += dx * dy;
    yy += dy * dy;
    xz += dx * dz;
    yz += dy * dz;
  }
  const flat = { x: mx, y: my, level: mz, perEastM: 0, perNorthM: 0, onLine: true };
  if (symmetricEigen2([xx / n, xy / n, yy / n]).minorVariance < lineWidthM ** 2) return flat;
  const determinant = xx * yy - xy * xy;
  return { ...flat, perEastM: (xz * yy - yz * xy) / determinant, perNorthM: (yz * xx - xz * xy) / determinant, onLine: false };
}

export function trendAt({ x, y, level, perEastM, perNorthM }: Trend, atX: number, atY: number): number {
  return level + perEastM * (atX - x) + perNorthM * (atY - y);
}
