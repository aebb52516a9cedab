import { plateAtRim, type PlateLevel } from './plateLevel.js';

/**
 * The sweeps over all nodes that the solver consists of, on a surface, whose right side is zero. Sums of the rows above and
 * below roll along with the column, so that a node costs seven reads instead of fourteen. Nodes less than two from the rim
 * go through the tables.
 */

/** out = −A z at free nodes, 0 at pinned ones. */
export function plateResidual(level: PlateLevel, z: Float64Array, out: Float32Array): void {
  for (let j = 0; j < level.height; j++) plateResidualRow(level, z, { out, j });
}

export function plateResidualRow(level: PlateLevel, z: Float64Array, { out, j }: { out: Float32Array; j: number }): void {
  const { width, height, alpha, tau, relaxation } = level;
  const start = j * width;
  const rimRow = j < 2 || j >= height - 2 || width < 5;
  for (let i = 0; i < width; i++) {
    if (i === 2 && !rimRow) i = width - 2;
    out[start + i] = relaxation[start + i] === 0 ? 0 : -plateAtRim(level, z, start + i);
  }
  if (rimRow) return;
  const a0 = 20 * alpha + 4 * tau;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
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
    out[k] = relaxation[k] === 0 ? 0 : -sum;
    nearLeft = near;
    near = nearRight;
    left2 = left;
    left = centre;
    centre = right;
    right = right2;
  }
}

/** One Gauss–Seidel sweep of row `j` on A z = 0, from west to east; pinned nodes stay. */
export function smoothRow(level: PlateLevel, z: Float64Array, j: number): void {
  const { width, height, alpha, tau, relaxation } = level;
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
    const step = relaxation[k]!;
    // All that does not wait for the node before comes first.
    const known = a0 * centre + a1 * (right + near) + a2 * (nearLeft + nearRight)
      + alpha * (left2 + right2 + z[k + up2]! + z[k + down2]!);
    const value = (centre - step * known) - (step * a1) * left;
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
  const step = level.relaxation[k]!;
  if (step !== 0) z[k]! -= step * plateAtRim(level, z, k);
}
