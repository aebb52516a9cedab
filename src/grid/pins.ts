import type { Window } from './moves.js';
import { runningSum } from './runningSum.js';

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
  /** Sum of the weights of the readings that the value stands for; without weights their number. */
  readonly weight: Float64Array;
}

/** The only place where pins are made, so that all have one shape and the solver is compiled once. */
export function pinsOf(node: Int32Array, value: Float64Array, [dx, dy]: readonly [Float64Array, Float64Array], weight: Float64Array): Pins {
  return { node, value, dx, dy, weight };
}

export function emptyPins(count: number): Pins {
  return pinsOf(new Int32Array(count), new Float64Array(count), [new Float64Array(count), new Float64Array(count)], new Float64Array(count));
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
  const pins = emptyPins(node.length);
  pins.node.set(node);
  pins.value.set(value);
  pins.weight.fill(1);
  return pins;
}

/** Pins of both; at a node of both, the first's. */
export function joinPins(first: Pins, second: Pins): Pins {
  const [n1, n2] = [first.node.length, second.node.length];
  if (n1 === 0 || n2 === 0) return n1 === 0 ? second : first;
  const all = emptyPins(n1 + n2 - countShared(first.node, second.node));
  for (let a = 0, b = 0, to = 0; to < all.node.length; to++) {
    const ofFirst = b === n2 || (a < n1 && first.node[a]! <= second.node[b]!);
    if (ofFirst && b < n2 && first.node[a] === second.node[b]) b++;
    copyPin(ofFirst ? first : second, ofFirst ? a++ : b++, all, to);
  }
  return all;
}

/** Numbers that two ascending rows have in common. */
function countShared(first: Int32Array, second: Int32Array): number {
  let shared = 0;
  for (let a = 0, b = 0; a < first.length && b < second.length;) {
    if (first[a] === second[b]) shared++;
    if (first[a]! <= second[b]!) a++;
    else b++;
  }
  return shared;
}

function copyPin(from: Pins, n: number, to: Pins, m: number): void {
  to.node[m] = from.node[n]!;
  to.value[m] = from.value[n]!;
  to.dx[m] = from.dx[n]!;
  to.dy[m] = from.dy[n]!;
  to.weight[m] = from.weight[n]!;
}

/** The pins of a window, by the window's own nodes. `width` is that of the whole. */
export function pinsWithin({ pins, start }: PinRows, width: number, { left, top, ...size }: Window): Pins {
  let count = 0;
  for (let j = 0; j < size.height; j++) count += countBetween(pins.node, [start[top + j]!, start[top + j + 1]!], (top + j) * width + left, size.width);
  const within = emptyPins(count);
  for (let j = 0, to = 0; j < size.height; j++) {
    const west = (top + j) * width + left;
    for (let n = start[top + j]!; n < start[top + j + 1]!; n++) {
      const i = pins.node[n]! - west;
      if (i < 0 || i >= size.width) continue;
      copyPin(pins, n, within, to);
      within.node[to++] = j * size.width + i;
    }
  }
  return within;
}

/** How many of the nodes in a span of the list lie in a stretch of nodes. */
function countBetween(node: Int32Array, [from, to]: readonly [number, number], first: number, length: number): number {
  let count = 0;
  for (let n = from; n < to; n++) if (node[n]! >= first && node[n]! < first + length) count++;
  return count;
}

/** The same values on a grid of half the resolution: those that fall to one node become their weighted mean. */
export function coarsenPins(pins: Pins, [width, coarseWidth, coarseHeight]: readonly [number, number, number]): Pins {
  const target = coarseNodes(pins, width, coarseWidth);
  const slot = new Int32Array(coarseWidth * coarseHeight).fill(-1);
  const coarse = emptyPins(giveSlots(slot, target));
  sumBySlot(pins, [width, coarseWidth], { target, slot, coarse });
  divideByWeight(coarse);
  return coarse;
}

/** For each pin, the coarse node next to its place. */
function coarseNodes({ node, dx, dy }: Pins, width: number, coarseWidth: number): Int32Array {
  const target = new Int32Array(node.length);
  for (let n = 0; n < node.length; n++) {
    const j = Math.floor(node[n]! / width);
    const i = node[n]! - j * width;
    target[n] = Math.round((j + dy[n]!) / 2) * coarseWidth + Math.round((i + dx[n]!) / 2);
  }
  return target;
}

/** Numbers the nodes that are a target, in their order; returns how many there are. */
function giveSlots(slot: Int32Array, target: Int32Array): number {
  for (let n = 0; n < target.length; n++) slot[target[n]!] = 0;
  let count = 0;
  for (let node = 0; node < slot.length; node++) if (slot[node] === 0) slot[node] = count++;
  return count;
}

function sumBySlot({ node, value, dx, dy, weight }: Pins, [width, coarseWidth]: readonly [number, number], { target, slot, coarse }: { target: Int32Array; slot: Int32Array; coarse: Pins }): void {
  for (let n = 0; n < node.length; n++) {
    const j = Math.floor(node[n]! / width);
    const i = node[n]! - j * width;
    const to = slot[target[n]!]!;
    const row = Math.floor(target[n]! / coarseWidth);
    const w = weight[n]!;
    coarse.node[to] = target[n]!;
    coarse.weight[to]! += w;
    coarse.value[to]! += w * value[n]!;
    coarse.dx[to]! += w * ((i + dx[n]!) / 2 - (target[n]! - row * coarseWidth));
    coarse.dy[to]! += w * ((j + dy[n]!) / 2 - row);
  }
}

function divideByWeight({ value, dx, dy, weight }: Pins): void {
  for (let n = 0; n < value.length; n++) {
    value[n]! /= weight[n]!;
    dx[n]! /= weight[n]!;
    dy[n]! /= weight[n]!;
  }
}

/** Pins with the place where each row of nodes starts among them. */
export interface PinRows {
  readonly pins: Pins;
  readonly start: Int32Array;
}

export function pinRows(pins: Pins, width: number, height: number): PinRows {
  const start = new Int32Array(height + 1);
  for (let n = 0; n < pins.node.length; n++) start[Math.floor(pins.node[n]! / width) + 1]!++;
  return { pins, start: runningSum(start) };
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
 * Makes a surface meet the pins' values at their own places, or a correction vanish there (`values`: false): each pinned
 * node takes the value that does it, given the nodes around. Pins on the rim hold their node itself.
 */
export function meetPins(z: Float64Array, { node, value, dx, dy }: Pins, { width, height, values }: { width: number; height: number; values: boolean }): void {
  for (let n = 0; n < node.length; n++) {
    const k = node[n]!;
    const j = Math.floor(k / width);
    const i = k - j * width;
    const wanted = values ? value[n]! : 0;
    if (i === 0 || j === 0 || i === width - 1 || j === height - 1) {
      z[k] = wanted;
      continue;
    }
    const x = dx[n]!;
    const y = dy[n]!;
    const west = (x * (x - 1)) / 2;
    const middle = 1 - x * x;
    const east = (x * (x + 1)) / 2;
    const north = k - width;
    const south = k + width;
    const around = ((y * (y - 1)) / 2) * (west * z[north - 1]! + middle * z[north]! + east * z[north + 1]!)
      + (1 - y * y) * (west * z[k - 1]! + east * z[k + 1]!)
      + ((y * (y + 1)) / 2) * (west * z[south - 1]! + middle * z[south]! + east * z[south + 1]!);
    z[k] = (wanted - around) / (middle * (1 - y * y));
  }
}
