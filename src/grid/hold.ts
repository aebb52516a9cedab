import type { Pins } from './pins.js';

/**
 * What holds a correction on a coarse grid near the pins of a finer one. A correction has to vanish at the pins; where it
 * does not, it is cut off there, and the spike that this leaves costs energy: weight × (correction at the pin)². The
 * correction at a pin between coarse nodes is a mean of two or four of them, so a slope across a line of pins, which
 * does vanish on the line, stays free. Without that a plate could not turn about its lines, and convergence would be poor.
 *
 * Held as a symmetric nine-point operator: each node's weight on itself and on its neighbours east, south, south-east
 * and south-west; the other four are those of the neighbours.
 */
export interface Hold {
  readonly self: Float32Array;
  readonly east: Float32Array;
  readonly south: Float32Array;
  readonly southEast: Float32Array;
  readonly southWest: Float32Array;
}

export function emptyHold(count: number): Hold {
  return {
    self: new Float32Array(count), east: new Float32Array(count), south: new Float32Array(count),
    southEast: new Float32Array(count), southWest: new Float32Array(count),
  };
}

export function clearHold({ self, east, south, southEast, southWest }: Hold): void {
  self.fill(0);
  east.fill(0);
  south.fill(0);
  southEast.fill(0);
  southWest.fill(0);
}

/**
 * Adds the hold of a pin at column `x` and row `y` of this grid, between nodes as a rule: weight × (the correction
 * there by bilinear interpolation)². The pin's own place counts, not the node it belongs to: along a line that wanders
 * over the nodes, holding the nodes would also hold the slope across (measured: twice as many cycles).
 */
export function holdPlace(hold: Hold, { x, y, weight, width }: { x: number; y: number; weight: number; width: number }): void {
  const i = Math.floor(x);
  const j = Math.floor(y);
  const east = x - i;
  const south = y - j;
  const at = j * width + i;
  const here = (1 - east) * (1 - south);
  const right = east * (1 - south);
  const below = (1 - east) * south;
  const across = east * south;
  hold.self[at]! += weight * here * here;
  if (east > 0) {
    hold.self[at + 1]! += weight * right * right;
    hold.east[at]! += weight * here * right;
  }
  if (south > 0) {
    hold.self[at + width]! += weight * below * below;
    hold.south[at]! += weight * here * below;
  }
  if (east > 0 && south > 0) {
    hold.self[at + width + 1]! += weight * across * across;
    hold.east[at + width]! += weight * below * across;
    hold.south[at + 1]! += weight * right * across;
    hold.southEast[at]! += weight * here * across;
    hold.southWest[at + 1]! += weight * right * below;
  }
}

interface Sized {
  readonly width: number;
  readonly height: number;
  readonly hold: Hold;
}

/** Lays pins of a finer grid, whose nodes are `step` times as close, on this one. A pin on the rim there holds its node. */
export function holdPins({ width, hold }: Sized, { pins, weights, finer, step }: {
  pins: Pins; weights: Float32Array; finer: { readonly width: number; readonly height: number }; step: number;
}): void {
  const { node, dx, dy } = pins;
  for (let n = 0; n < node.length; n++) {
    const j = Math.floor(node[n]! / finer.width);
    const i = node[n]! - j * finer.width;
    const rim = i === 0 || j === 0 || i === finer.width - 1 || j === finer.height - 1;
    holdPlace(hold, { x: (rim ? i : i + dx[n]!) / step, y: (rim ? j : j + dy[n]!) / step, weight: weights[n]!, width });
  }
}

/** The hold of a grid, seen from the next coarser one: Pᵀ H P with linear interpolation P, which is nine-point again. */
export function coarsenHold({ width, height, hold }: Sized, coarse: Sized): void {
  const { self, east, south, southEast, southWest } = hold;
  for (let j = 0, k = 0; j < height; j++) {
    for (let i = 0; i < width; i++, k++) {
      if (self[k] !== 0) addCoupling(coarse, [i, j, 0, 0], self[k]!);
      // A coupling stands for both of its directions.
      if (i < width - 1 && east[k] !== 0) addCoupling(coarse, [i, j, 1, 0], 2 * east[k]!);
      if (j === height - 1) continue;
      if (south[k] !== 0) addCoupling(coarse, [i, j, 0, 1], 2 * south[k]!);
      if (i < width - 1 && southEast[k] !== 0) addCoupling(coarse, [i, j, 1, 1], 2 * southEast[k]!);
      if (i > 0 && southWest[k] !== 0) addCoupling(coarse, [i, j, -1, 1], 2 * southWest[k]!);
    }
  }
}

/** Adds weight × e_a e_b, for a = (i, j) and b = (i + di, j + dj) on the finer grid, split over the coarse nodes around each. */
function addCoupling({ width, hold }: Sized, [i, j, di, dj]: readonly [number, number, number, number], weight: number): void {
  const bi = i + di;
  const bj = j + dj;
  const share = weight / ((1 + (i & 1)) * (1 + (j & 1)) * (1 + (bi & 1)) * (1 + (bj & 1)));
  const { self, east, south, southEast, southWest } = hold;
  for (let p = j >> 1; p <= (j + 1) >> 1; p++) {
    for (let q = i >> 1; q <= (i + 1) >> 1; q++) {
      for (let r = bj >> 1; r <= (bj + 1) >> 1; r++) {
        for (let s = bi >> 1; s <= (bi + 1) >> 1; s++) {
          // The product of two nodes counts half in each of their rows; it is kept with the upper, then the left one.
          const upper = Math.min(p, r);
          const left = Math.min(q, s);
          const at = upper * width + left;
          if (p === r && q === s) self[at]! += share;
          else if (p === r) east[at]! += share / 2;
          else if (q === s) south[at]! += share / 2;
          else if ((p < r) === (q < s)) southEast[at]! += share / 2;
          else southWest[at + 1]! += share / 2;
        }
      }
    }
  }
}
