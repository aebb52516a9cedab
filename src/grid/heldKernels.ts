import { plateAtRim, type PlateLevel } from './plateLevel.js';

/** The sweeps of plateKernels.ts for a correction: the operator is that of the plate and of the hold, and no node is pinned. */

/** out = right − (A + H) z. */
export function heldResidual(level: PlateLevel, z: Float64Array, out: Float32Array): void {
  for (let j = 0; j < level.height; j++) heldResidualRow(level, z, { out, j });
}

export function heldResidualRow(level: PlateLevel, z: Float64Array, { out, j }: { out: Float32Array; j: number }): void {
  const { width, height, alpha, tau, hold, right: b } = level;
  const { self, east, south, southEast, southWest } = hold;
  const start = j * width;
  const rimRow = j < 2 || j >= height - 2 || width < 5;
  for (let i = 0; i < width; i++) {
    if (i === 2 && !rimRow) i = width - 2;
    out[start + i] = b[start + i]! - heldAtRim(level, z, start + i);
  }
  if (rimRow) return;
  const a0 = 20 * alpha + 4 * tau;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  const end = start + width - 2;
  let n = start + 2 - width;
  let s = start + 2 + width;
  let northLeft = z[n - 1]!;
  let north = z[n]!;
  let southLeft = z[s - 1]!;
  let below = z[s]!;
  let left2 = z[start]!;
  let left = z[start + 1]!;
  let centre = z[start + 2]!;
  let right = z[start + 3]!;
  for (let k = start + 2; k < end; k++, n++, s++) {
    const northRight = z[n + 1]!;
    const southRight = z[s + 1]!;
    const right2 = z[k + 2]!;
    const rest = b[k]! - (a0 + self[k]!) * centre - (a1 + east[k]!) * right - (a1 + south[n]!) * north - (a1 + south[k]!) * below
      - (a2 + southEast[n - 1]!) * northLeft - (a2 + southWest[n + 1]!) * northRight - (a2 + southWest[k]!) * southLeft - (a2 + southEast[k]!) * southRight
      - alpha * (left2 + right2 + z[n - width]! + z[s + width]!);
    out[k] = rest - (a1 + east[k - 1]!) * left;
    northLeft = north;
    north = northRight;
    southLeft = below;
    below = southRight;
    left2 = left;
    left = centre;
    centre = right;
    right = right2;
  }
}

/** One Gauss–Seidel sweep of row `j` on (A + H) z = right. */
export function heldSmoothRow(level: PlateLevel, z: Float64Array, j: number): void {
  const { width, height, alpha, tau, hold, relaxation, right: b } = level;
  const { self, east, south, southEast, southWest } = hold;
  const start = j * width;
  const rimRow = j < 2 || j >= height - 2 || width < 5;
  for (let i = 0; i < width; i++) {
    if (i === 2 && !rimRow) i = width - 2;
    z[start + i]! += relaxation[start + i]! * (b[start + i]! - heldAtRim(level, z, start + i));
  }
  if (rimRow) return;
  const a0 = 20 * alpha + 4 * tau;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  const end = start + width - 2;
  let n = start + 2 - width;
  let s = start + 2 + width;
  let northLeft = z[n - 1]!;
  let north = z[n]!;
  let southLeft = z[s - 1]!;
  let below = z[s]!;
  let left2 = z[start]!;
  let left = z[start + 1]!;
  let centre = z[start + 2]!;
  let right = z[start + 3]!;
  for (let k = start + 2; k < end; k++, n++, s++) {
    const northRight = z[n + 1]!;
    const southRight = z[s + 1]!;
    const right2 = z[k + 2]!;
    const rest = b[k]! - (a0 + self[k]!) * centre - (a1 + east[k]!) * right - (a1 + south[n]!) * north - (a1 + south[k]!) * below
      - (a2 + southEast[n - 1]!) * northLeft - (a2 + southWest[n + 1]!) * northRight - (a2 + southWest[k]!) * southLeft - (a2 + southEast[k]!) * southRight
      - alpha * (left2 + right2 + z[n - width]! + z[s + width]!);
    // What waits for the node before is kept short.
    const step = relaxation[k]!;
    const value = (centre + step * rest) - (step * (a1 + east[k - 1]!)) * left;
    z[k] = value;
    northLeft = north;
    north = northRight;
    southLeft = below;
    below = southRight;
    left2 = left;
    left = value;
    centre = right;
    right = right2;
  }
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
