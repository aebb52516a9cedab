import { OMEGA } from './plateKernels.js';
import { plateAtRim, type PlateLevel } from './plateLevel.js';

/** The sweeps of plateKernels.ts for a correction: the operator is that of the plate and of the hold, and no node is pinned. */

/** out = right − (A + H) z. */
export function heldResidual(level: PlateLevel, z: Float64Array, out: Float32Array): void {
  const { width, height, right } = level;
  for (let j = 0, k = 0; j < height; j++) {
    const rimRow = j < 2 || j >= height - 2;
    for (let i = 0; i < width; i++, k++) {
      const rim = rimRow || i < 2 || i >= width - 2;
      out[k] = right[k]! - (rim ? heldAtRim(level, z, k) : heldInside(level, z, k));
    }
  }
}

/** One Gauss–Seidel sweep on (A + H) z = right. */
export function heldSmooth(level: PlateLevel, z: Float64Array): void {
  const { width, height, right, inverseDiagonal } = level;
  for (let j = 0, k = 0; j < height; j++) {
    const rimRow = j < 2 || j >= height - 2;
    for (let i = 0; i < width; i++, k++) {
      const rim = rimRow || i < 2 || i >= width - 2;
      z[k]! += OMEGA * inverseDiagonal[k]! * (right[k]! - (rim ? heldAtRim(level, z, k) : heldInside(level, z, k)));
    }
  }
}

function heldInside({ width, alpha, tau, hold }: PlateLevel, z: Float64Array, k: number): number {
  const { self, east, south, southEast, southWest } = hold;
  const n = k - width;
  const s = k + width;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  return (20 * alpha + 4 * tau + self[k]!) * z[k]!
    + (a1 + east[k - 1]!) * z[k - 1]! + (a1 + east[k]!) * z[k + 1]! + (a1 + south[n]!) * z[n]! + (a1 + south[k]!) * z[s]!
    + (a2 + southEast[n - 1]!) * z[n - 1]! + (a2 + southWest[n + 1]!) * z[n + 1]! + (a2 + southWest[k]!) * z[s - 1]! + (a2 + southEast[k]!) * z[s + 1]!
    + alpha * (z[k - 2]! + z[k + 2]! + z[n - width]! + z[s + width]!);
}

function heldAtRim(level: PlateLevel, z: Float64Array, k: number): number {
  const { width, height, hold: { self, east, south, southEast, southWest } } = level;
  const j = (k / width) | 0;
  const i = k - j * width;
  let sum = plateAtRim(level, z, k) + self[k]! * z[k]!;
  if (i > 0) sum += east[k - 1]! * z[k - 1]!;
  if (i < width - 1) sum += east[k]! * z[k + 1]!;
  if (j > 0) {
    sum += south[k - width]! * z[k - width]!;
    if (i > 0) sum += southEast[k - width - 1]! * z[k - width - 1]!;
    if (i < width - 1) sum += southWest[k - width + 1]! * z[k - width + 1]!;
  }
  if (j < height - 1) {
    sum += south[k]! * z[k + width]!;
    if (i > 0) sum += southWest[k]! * z[k + width - 1]!;
    if (i < width - 1) sum += southEast[k]! * z[k + width + 1]!;
  }
  return sum;
}
