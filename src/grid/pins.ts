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

/** Pins with the place where each row of nodes starts among them. */
export interface PinRows {
  readonly pins: Pins;
  readonly start: Int32Array;
}

export function pinRows(pins: Pins, width: number, height: number): PinRows {
  const start = new Int32Array(height + 1);
  for (let n = 0; n < pins.node.length; n++) start[Math.floor(pins.node[n]! / width) + 1]!++;
  for (let j = 0; j < height; j++) start[j + 1]! += start[j]!;
  return { pins, start };
}

export interface PinRow {
  readonly width: number;
  readonly height: number;
  readonly j: number;
  readonly largest: number;
}

/**
 * Moves each pinned node of row `j` by what the surface misses at the pin's own place. The surface between nodes is the
 * quadratic through the nine nodes around (Taylor to second order); on the rim it is constant across. Returns the
 * largest move, or `largest` where that is more.
 */
export function movePinsOfRow(z: Float64Array, { pins, start }: PinRows, row: PinRow): number {
  const { node, value, dx, dy } = pins;
  const { width, height, j } = row;
  let largest = row.largest;
  const inner = j > 0 && j < height - 1;
  for (let n = start[j]!; n < start[j + 1]!; n++) {
    const k = node[n]!;
    const i = k - j * width;
    const x = i > 0 && i < width - 1 ? dx[n]! : 0;
    const y = inner ? dy[n]! : 0;
    const west = (x * (x - 1)) / 2;
    const middle = 1 - x * x;
    const east = (x * (x + 1)) / 2;
    // Where an offset is zero the neighbour counts nothing, and on the rim it does not exist.
    const a = x === 0 ? 0 : 1;
    let at = middle * z[k]! + west * z[k - a]! + east * z[k + a]!;
    if (y !== 0) {
      const north = k - width;
      const south = k + width;
      at = (1 - y * y) * at
        + ((y * (y - 1)) / 2) * (middle * z[north]! + west * z[north - a]! + east * z[north + a]!)
        + ((y * (y + 1)) / 2) * (middle * z[south]! + west * z[south - a]! + east * z[south + a]!);
    }
    const move = value[n]! - at;
    z[k]! += move;
    if (move > largest) largest = move;
    else if (-move > largest) largest = -move;
  }
  return largest;
}

/**
 * Makes a correction vanish at the pins' own places: each pinned node takes the value that does it, given the nodes around
 * (pins on the rim hold their node itself). What is added to the surface then leaves the data met as they were.
 */
export function pinCorrection(correction: Float64Array, { node, dx, dy }: Pins, { width, height }: { width: number; height: number }): void {
  for (let n = 0; n < node.length; n++) {
    const k = node[n]!;
    const j = Math.floor(k / width);
    const i = k - j * width;
    correction[k] = 0;
    if (i === 0 || j === 0 || i === width - 1 || j === height - 1) continue;
    const x = dx[n]!;
    const y = dy[n]!;
    const west = (x * (x - 1)) / 2;
    const middle = 1 - x * x;
    const east = (x * (x + 1)) / 2;
    const north = k - width;
    const south = k + width;
    const around = ((y * (y - 1)) / 2) * (west * correction[north - 1]! + middle * correction[north]! + east * correction[north + 1]!)
      + (1 - y * y) * (west * correction[k - 1]! + east * correction[k + 1]!)
      + ((y * (y + 1)) / 2) * (west * correction[south - 1]! + middle * correction[south]! + east * correction[south + 1]!);
    correction[k] = -around / (middle * (1 - y * y));
  }
}
