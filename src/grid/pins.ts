/**
 * Values that the surface has to take: one for each node whose cell holds data. The place of the value is the node plus
 * an offset of at most half a cell, since readings seldom lie on nodes.
 */
export interface Pins {
  /** Row-major index of the node; ascending. */
  readonly node: Int32Array;
  readonly value: Float64Array;
  /** Offsets from the node in cells, −½ … ½, along the columns and down the rows. */
  readonly dx: Float64Array;
  readonly dy: Float64Array;
  /** How many readings the value stands for. */
  readonly weight: Float64Array;
}

export function emptyPins(count: number): Pins {
  return {
    node: new Int32Array(count), value: new Float64Array(count), dx: new Float64Array(count), dy: new Float64Array(count),
    weight: new Float64Array(count),
  };
}

/** The same values on a grid of half the resolution: those that fall to one node become their weighted mean. */
export function coarsenPins(pins: Pins, [width, coarseWidth, coarseHeight]: readonly [number, number, number]): Pins {
  const slot = new Int32Array(coarseWidth * coarseHeight).fill(-1);
  const target = new Int32Array(pins.node.length);
  for (let n = 0; n < pins.node.length; n++) {
    const j = Math.floor(pins.node[n]! / width);
    const i = pins.node[n]! - j * width;
    const node = Math.round((j + pins.dy[n]!) / 2) * coarseWidth + Math.round((i + pins.dx[n]!) / 2);
    target[n] = node;
    slot[node] = 0;
  }
  let count = 0;
  for (let node = 0; node < slot.length; node++) if (slot[node] === 0) slot[node] = count++;
  const coarse = emptyPins(count);
  for (let n = 0; n < pins.node.length; n++) {
    const j = Math.floor(pins.node[n]! / width);
    const i = pins.node[n]! - j * width;
    const node = target[n]!;
    const to = slot[node]!;
    const row = Math.floor(node / coarseWidth);
    const weight = pins.weight[n]!;
    coarse.node[to] = node;
    coarse.weight[to]! += weight;
    coarse.value[to]! += weight * pins.value[n]!;
    coarse.dx[to]! += weight * ((i + pins.dx[n]!) / 2 - (node - row * coarseWidth));
    coarse.dy[to]! += weight * ((j + pins.dy[n]!) / 2 - row);
  }
  for (let to = 0; to < count; to++) {
    coarse.value[to]! /= coarse.weight[to]!;
    coarse.dx[to]! /= coarse.weight[to]!;
    coarse.dy[to]! /= coarse.weight[to]!;
  }
  return coarse;
}

/**
 * Moves each pinned node by what the surface misses at the pin's own place, and returns the largest move. The surface
 * between nodes is the quadratic through the nine nodes around (Taylor to second order); on the rim it is constant across.
 * `moves` is work space of the pins' length.
 */
export function movePins(z: Float64Array, pins: Pins, { width, height, moves }: { width: number; height: number; moves: Float64Array }): number {
  const { node, value, dx, dy } = pins;
  let largest = 0;
  for (let n = 0; n < node.length; n++) {
    const k = node[n]!;
    const j = (k / width) | 0;
    const i = k - j * width;
    const x = i > 0 && i < width - 1 ? dx[n]! : 0;
    const y = j > 0 && j < height - 1 ? dy[n]! : 0;
    const west = (x * (x - 1)) / 2;
    const east = (x * (x + 1)) / 2;
    const middle = 1 - x * x;
    let at = alongRow(z, k, [west, middle, east]);
    if (y !== 0) at = ((y * (y - 1)) / 2) * alongRow(z, k - width, [west, middle, east]) + (1 - y * y) * at + ((y * (y + 1)) / 2) * alongRow(z, k + width, [west, middle, east]);
    const move = value[n]! - at;
    moves[n] = move;
    if (Math.abs(move) > largest) largest = Math.abs(move);
  }
  for (let n = 0; n < node.length; n++) z[node[n]!]! += moves[n]!;
  return largest;
}

function alongRow(z: Float64Array, k: number, [west, middle, east]: readonly [number, number, number]): number {
  // On the rim the outer weights are zero and the neighbour may not exist.
  return middle * z[k]! + (west === 0 ? 0 : west * z[k - 1]!) + (east === 0 ? 0 : east * z[k + 1]!);
}
