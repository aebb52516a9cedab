import type { Pins } from './pins.js';

/**
 * What holds a correction on a coarse grid near the pins of the next finer one. A correction has to vanish at the pins; where
 * it does not, it is cut off there, and the spike that this leaves costs energy: weight × (correction at the pin)². On the
 * grids between that one and the finest the spike is smoothed before it is cut, so what counts is its energy on the next
 * finer grid, not on the finest: held by the latter, coarse corrections grow from grid to grid where lines are far apart
 * (measured: hundredfold). The correction at a pin between coarse nodes is a mean of two or four of them, so a slope across a line of pins, which
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

/** Lays the pins of the next finer grid on this one. A pin on the rim there holds its node. */
export function holdPins({ width, hold }: { readonly width: number; readonly hold: Hold }, { pins, weights, finer }: {
  pins: Pins; weights: Float32Array; finer: { readonly width: number; readonly height: number };
}): void {
  const { node, dx, dy } = pins;
  for (let n = 0; n < node.length; n++) {
    const j = Math.floor(node[n]! / finer.width);
    const i = node[n]! - j * finer.width;
    const rim = i === 0 || j === 0 || i === finer.width - 1 || j === finer.height - 1;
    holdPlace(hold, { x: (rim ? i : i + dx[n]!) / 2, y: (rim ? j : j + dy[n]!) / 2, weight: weights[n]!, width });
  }
}
