import { plateAtRim, type PlateLevel } from './plateLevel.js';

/**
 * The sweeps over all nodes that the solver consists of. Sums of the rows above and below roll along with the column, so
 * that a node costs seven reads instead of fourteen. Nodes less than two from the rim go through the tables.
 */

/** Over-relaxation of the smoother: damps the short waves of the 13-point operator faster than 1 does (measured: 1.2 to 1.4 about alike, worse beyond). */
export const OMEGA = 1.3;

/** out = right − A z at free nodes, 0 at pinned ones. */
export function plateResidual(level: PlateLevel, z: Float64Array, out: Float32Array): void {
  for (let j = 0; j < level.height; j++) plateResidualRow(level, z, { out, j });
}

export function plateResidualRow(level: PlateLevel, z: Float64Array, { out, j }: { out: Float32Array; j: number }): void {
  const { width, height, alpha, tau, inverseDiagonal, right: b } = level;
  const a0 = 20 * alpha + 4 * tau;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  const start = j * width;
  const rimRow = j < 2 || j >= height - 2 || width < 5;
  const first = rimRow ? width : 2;
  for (let i = 0; i < first; i++) residualAtRim(level, z, out, start + i);
  if (rimRow) return;
  const end = start + width - 2;
  let k = start + 2;
  const up = -width;
  const up2 = -2 * width;
  const down2 = 2 * width;
  let nearLeft = z[k + up - 1]! + z[k + width - 1]!;
  let near = z[k + up]! + z[k + width]!;
  let left2 = z[k - 2]!;
  let left = z[k - 1]!;
  let centre = z[k]!;
  let right = z[k + 1]!;
  for (; k < end; k++) {
    const right2 = z[k + 2]!;
    const nearRight = z[k + up + 1]! + z[k + width + 1]!;
    const sum = a0 * centre + a1 * (left + right + near) + a2 * (nearLeft + nearRight)
      + alpha * (left2 + right2 + z[k + up2]! + z[k + down2]!);
    out[k] = inverseDiagonal[k] === 0 ? 0 : b[k]! - sum;
    nearLeft = near;
    near = nearRight;
    left2 = left;
    left = centre;
    centre = right;
    right = right2;
  }
  for (k = end; k < end + 2; k++) residualAtRim(level, z, out, k);
}

function residualAtRim(level: PlateLevel, z: Float64Array, out: Float32Array, k: number): void {
  out[k] = level.inverseDiagonal[k] === 0 ? 0 : level.right[k]! - plateAtRim(level, z, k);
}

/** One Gauss–Seidel sweep of row `j` from west to east on A z = right; pinned nodes stay. */
export function smoothRow(level: PlateLevel, z: Float64Array, j: number): void {
  const { width, height, alpha, tau, inverseDiagonal, right: b } = level;
  const start = j * width;
  if (j < 2 || j >= height - 2 || width < 5) {
    for (let k = start; k < start + width; k++) smoothAtRim(level, z, k);
    return;
  }
  const a0 = 20 * alpha + 4 * tau;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  for (let k = start; k < start + 2; k++) smoothAtRim(level, z, k);
  const end = start + width - 2;
  let k = start + 2;
  const up = -width;
  const up2 = -2 * width;
  const down2 = 2 * width;
  let nearLeft = z[k + up - 1]! + z[k + width - 1]!;
  let near = z[k + up]! + z[k + width]!;
  let left2 = z[k - 2]!;
  let left = z[k - 1]!;
  let centre = z[k]!;
  let right = z[k + 1]!;
  for (; k < end; k++) {
    const right2 = z[k + 2]!;
    const nearRight = z[k + up + 1]! + z[k + width + 1]!;
    const step = OMEGA * inverseDiagonal[k]!;
    // All that does not wait for the node before comes first.
    const known = b[k]! - a0 * centre - a1 * (right + near) - a2 * (nearLeft + nearRight)
      - alpha * (left2 + right2 + z[k + up2]! + z[k + down2]!);
    const value = (centre + step * known) - (step * a1) * left;
    z[k] = value;
    nearLeft = near;
    near = nearRight;
    left2 = left;
    left = value;
    centre = right;
    right = right2;
  }
  for (k = end; k < end + 2; k++) smoothAtRim(level, z, k);
}

function smoothAtRim(level: PlateLevel, z: Float64Array, k: number): void {
  const inverse = level.inverseDiagonal[k]!;
  if (inverse !== 0) z[k]! += OMEGA * inverse * (level.right[k]! - plateAtRim(level, z, k));
}
