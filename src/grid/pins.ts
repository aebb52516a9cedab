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

/** Rings of nodes that hold the value and the slope of the surface around. */
const RINGS = 2;

/** Nodes, ascending, of the rings along the sides where the surface goes on. */
export function rimNodes({ width, height }: { readonly width: number; readonly height: number }, open: Readonly<Record<'west' | 'east' | 'north' | 'south', boolean>>): Int32Array {
  const nodes: number[] = [];
  for (let j = 0; j < height; j++) {
    const whole = (open.north && j < RINGS) || (open.south && j >= height - RINGS);
    for (let i = 0; i < width; i++) {
      if (whole || (open.west && i < RINGS) || (open.east && i >= width - RINGS)) nodes.push(j * width + i);
      // Between the two sides there is nothing to look at.
      else if (i >= RINGS && i < width - RINGS) i = width - RINGS - 1;
    }
  }
  return Int32Array.from(nodes);
}

/** Pins that hold values at nodes themselves. */
export function nodePins(node: Int32Array, value: Float64Array): Pins {
  return { ...emptyPins(node.length), node, value, weight: new Float64Array(node.length).fill(1) };
}

/** Pins of both; at a node of both, the first's. */
export function joinPins(first: Pins, second: Pins): Pins {
  const [n1, n2] = [first.node.length, second.node.length];
  if (n1 === 0 || n2 === 0) return n1 === 0 ? second : first;
  const all = emptyPins(n1 + n2);
  let to = 0;
  for (let a = 0, b = 0; a < n1 || b < n2; to++) {
    const ofFirst = b === n2 || (a < n1 && first.node[a]! <= second.node[b]!);
    if (ofFirst && b < n2 && first.node[a] === second.node[b]) b++;
    copyPin(ofFirst ? first : second, ofFirst ? a++ : b++, all, to);
  }
  return {
    node: all.node.subarray(0, to), value: all.value.subarray(0, to), dx: all.dx.subarray(0, to), dy: all.dy.subarray(0, to),
    weight: all.weight.subarray(0, to),
  };
}

function copyPin(from: Pins, n: number, to: Pins, m: number): void {
  to.node[m] = from.node[n]!;
  to.value[m] = from.value[n]!;
  to.dx[m] = from.dx[n]!;
  to.dy[m] = from.dy[n]!;
  to.weight[m] = from.weight[n]!;
}

/** The pins of a rectangle of nodes, by the rectangle's own nodes. `width` is that of the whole. */
export function pinsWithin(pins: Pins, width: number, window: { readonly left: number; readonly top: number; readonly width: number; readonly height: number }): Pins {
  const taken: number[] = [];
  for (let n = 0; n < pins.node.length; n++) {
    const j = Math.floor(pins.node[n]! / width) - window.top;
    const i = pins.node[n]! % width - window.left;
    if (i >= 0 && i < window.width && j >= 0 && j < window.height) taken.push(n);
  }
  const within = emptyPins(taken.length);
  taken.forEach((n, to) => {
    copyPin(pins, n, within, to);
    within.node[to] = (Math.floor(pins.node[n]! / width) - window.top) * window.width + pins.node[n]! % width - window.left;
  });
  return within;
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

/**
 * Moves each pinned node of row `j` by what the surface misses at the pin's own place. The surface between nodes is the
 * quadratic through the nine nodes around (Taylor to second order); on the rim it is constant across.
 */
export function movePinsOfRow(z: Float64Array, { pins, start }: PinRows, { width, height }: { readonly width: number; readonly height: number }, j: number): void {
  const { node, value, dx, dy } = pins;
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
    z[k]! += value[n]! - at;
  }
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
