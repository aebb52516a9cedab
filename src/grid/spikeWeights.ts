import { plateWeight, type PlateLevel } from './plateLevel.js';

/**
 * Weight of a pin's hold on corrections: this share of the energy of the spike that it leaves, as far as neighbouring pins
 * do not share it, and no less than of a pin in a field of pins. Affects speed only (measured: 0.5 to 1 about alike, below
 * a quarter cycles diverge).
 */
const SPIKE_SHARE = 0.75;
const LEAST_SPIKE = 4;

/** For each pinned node, the weight of its hold. The level's relaxation is 0 at pinned nodes. */
export function spikeWeights(level: PlateLevel, node: Int32Array): Float32Array {
  const { width, height, alpha, tau } = level;
  const least = LEAST_SPIKE * (alpha + tau);
  const weights = new Float32Array(node.length);
  for (let n = 0; n < node.length; n++) {
    const k = node[n]!;
    const j = Math.floor(k / width);
    const i = k - j * width;
    const inside = i > 1 && j > 1 && i < width - 2 && j < height - 2;
    weights[n] = SPIKE_SHARE * Math.max(inside ? insideSpike(level, k) : rimSpike(level, [i, j]), least);
  }
  return weights;
}

/** Energy of a spike of height 1 on a pinned node and on all pinned nodes around it, as far as this node's row shows it. */
function insideSpike({ width, relaxation: free, alpha, tau }: PlateLevel, k: number): number {
  const north = k - width;
  const south = k + width;
  const beside = pinned(free, k - 1) + pinned(free, k + 1) + pinned(free, north) + pinned(free, south);
  const across = pinned(free, north - 1) + pinned(free, north + 1) + pinned(free, south - 1) + pinned(free, south + 1);
  const beyond = pinned(free, k - 2) + pinned(free, k + 2) + pinned(free, north - width) + pinned(free, south + width);
  return 20 * alpha + 4 * tau - (8 * alpha + tau) * beside + 2 * alpha * across + alpha * beyond;
}

function pinned(free: Float32Array, k: number): number {
  return free[k] === 0 ? 1 : 0;
}

function rimSpike(level: PlateLevel, [i, j]: readonly [number, number]): number {
  const { width, height, relaxation } = level;
  let sum = 0;
  for (let y = Math.max(0, j - 2); y <= Math.min(height - 1, j + 2); y++) {
    const reach = 2 - Math.abs(y - j);
    for (let x = Math.max(0, i - reach); x <= Math.min(width - 1, i + reach); x++) {
      if (relaxation[y * width + x] === 0) sum += plateWeight(level, [i, j], [x - i, y - j]);
    }
  }
  return sum;
}
