import { plateAtRim, type PlateLevel } from './plateLevel.js';

/**
 * The sweeps over all nodes that the solver consists of. Sums of the rows above and below roll along with the column, so
 * that a node costs seven reads instead of fourteen. Nodes less than two from the rim go through the tables.
 */

/** Over-relaxation of the smoother: damps the short waves of the 13-point operator faster than 1 does (measured). */
const OMEGA = 1.4;

/** out = A z + penalty z at free nodes, 0 at held ones; with `from`, out = from − that. */
export function applyPlate(level: PlateLevel, z: Float64Array, { out, from }: { out: Float64Array; from: Float64Array | null }): void {
  const { width, height, alpha, tau, inverseDiagonal, penalty } = level;
  const a0 = 20 * alpha + 4 * tau;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  const sign = from ? -1 : 1;
  for (let j = 0; j < height; j++) {
    const start = j * width;
    const rimRow = j < 2 || j >= height - 2 || width < 5;
    const first = rimRow ? width : 2;
    for (let i = 0; i < first; i++) applyAtRim(level, z, { out, from }, start + i);
    if (rimRow) continue;
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
      const sum = (a0 + penalty[k]!) * centre + a1 * (left + right + near) + a2 * (nearLeft + nearRight)
        + alpha * (left2 + right2 + z[k + up2]! + z[k + down2]!);
      out[k] = inverseDiagonal[k] === 0 ? 0 : (from ? from[k]! : 0) + sign * sum;
      nearLeft = near;
      near = nearRight;
      left2 = left;
      left = centre;
      centre = right;
      right = right2;
    }
    for (k = end; k < end + 2; k++) applyAtRim(level, z, { out, from }, k);
  }
}

function applyAtRim(level: PlateLevel, z: Float64Array, { out, from }: { out: Float64Array; from: Float64Array | null }, k: number): void {
  const sum = plateAtRim(level, z, k) + level.penalty[k]! * z[k]!;
  out[k] = level.inverseDiagonal[k] === 0 ? 0 : from ? from[k]! - sum : sum;
}

/** One Gauss–Seidel sweep from the north-west to the south-east on A z + penalty z = b. */
export function smoothForward(level: PlateLevel, z: Float64Array, b: Float64Array): void {
  const { width, height, alpha, tau, inverseDiagonal } = level;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  const keep = 1 - OMEGA;
  for (let j = 0; j < height; j++) {
    const start = j * width;
    const rimRow = j < 2 || j >= height - 2 || width < 5;
    const first = rimRow ? width : 2;
    for (let i = 0; i < first; i++) smoothAtRim(level, z, b, start + i);
    if (rimRow) continue;
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
      // All that does not wait for the node before comes first.
      const known = b[k]! - a1 * (right + near) - a2 * (nearLeft + nearRight) - alpha * (left2 + right2 + z[k + up2]! + z[k + down2]!);
      const held = OMEGA * inverseDiagonal[k]!;
      const value = keep * centre + held * known - held * a1 * left;
      z[k] = value;
      nearLeft = near;
      near = nearRight;
      left2 = left;
      left = value;
      centre = right;
      right = right2;
    }
    for (k = end; k < end + 2; k++) smoothAtRim(level, z, b, k);
  }
}

/** The same sweep backwards: after the forward one it makes the preconditioner symmetric. */
export function smoothBackward(level: PlateLevel, z: Float64Array, b: Float64Array): void {
  const { width, height, alpha, tau, inverseDiagonal } = level;
  const a1 = -8 * alpha - tau;
  const a2 = 2 * alpha;
  const keep = 1 - OMEGA;
  for (let j = height - 1; j >= 0; j--) {
    const start = j * width;
    const rimRow = j < 2 || j >= height - 2 || width < 5;
    const last = rimRow ? 0 : width - 2;
    for (let i = width - 1; i >= last; i--) smoothAtRim(level, z, b, start + i);
    if (rimRow) continue;
    let k = start + width - 3;
    const up = -width;
    const up2 = -2 * width;
    const down2 = 2 * width;
    let nearRight = z[k + up + 1]! + z[k + width + 1]!;
    let near = z[k + up]! + z[k + width]!;
    let right2 = z[k + 2]!;
    let right = z[k + 1]!;
    let centre = z[k]!;
    let left = z[k - 1]!;
    for (; k >= start + 2; k--) {
      const left2 = z[k - 2]!;
      const nearLeft = z[k + up - 1]! + z[k + width - 1]!;
      const known = b[k]! - a1 * (left + near) - a2 * (nearLeft + nearRight) - alpha * (left2 + right2 + z[k + up2]! + z[k + down2]!);
      const held = OMEGA * inverseDiagonal[k]!;
      const value = keep * centre + held * known - held * a1 * right;
      z[k] = value;
      nearRight = near;
      near = nearLeft;
      right2 = right;
      right = value;
      centre = left;
      left = left2;
    }
    for (let i = 1; i >= 0; i--) smoothAtRim(level, z, b, start + i);
  }
}

function smoothAtRim(level: PlateLevel, z: Float64Array, b: Float64Array, k: number): void {
  const inverse = level.inverseDiagonal[k]!;
  if (inverse === 0) return;
  z[k]! += OMEGA * inverse * (b[k]! - plateAtRim(level, z, k) - level.penalty[k]! * z[k]!);
}
