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

/** Adds the hold of one node of the finer grid, at column `i` and row `j` there: weight × (mean of the coarse nodes around)². */
export function holdNode(hold: Hold, { i, j, weight, coarseWidth }: { i: number; j: number; weight: number; coarseWidth: number }): void {
  const at = (j >> 1) * coarseWidth + (i >> 1);
  const wide = i & 1;
  const high = j & 1;
  const each = weight / (1 + 3 * wide) / (1 + 3 * high);
  hold.self[at]! += each;
  if (wide) {
    hold.self[at + 1]! += each;
    hold.east[at]! += each;
  }
  if (high) {
    hold.self[at + coarseWidth]! += each;
    hold.south[at]! += each;
  }
  if (wide && high) {
    hold.self[at + coarseWidth + 1]! += each;
    hold.east[at + coarseWidth]! += each;
    hold.south[at + 1]! += each;
    hold.southEast[at]! += each;
    hold.southWest[at + 1]! += each;
  }
}

interface Sized {
  readonly width: number;
  readonly height: number;
  readonly hold: Hold;
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
  for (let p = 0; p <= (j & 1); p++) {
    for (let q = 0; q <= (i & 1); q++) {
      const a = ((j >> 1) + p) * width + (i >> 1) + q;
      for (let r = 0; r <= (bj & 1); r++) {
        for (let s = 0; s <= (bi & 1); s++) addPair(hold, [a, ((bj >> 1) + r) * width + (bi >> 1) + s, width], share);
      }
    }
  }
}

/** The product of two nodes counts half in each of their rows. */
function addPair(hold: Hold, [a, b, width]: readonly [number, number, number], weight: number): void {
  const first = Math.min(a, b);
  const distance = Math.max(a, b) - first;
  if (distance === 0) hold.self[first]! += weight;
  else if (distance === width + 1) hold.southEast[first]! += weight / 2;
  else if (distance === width) hold.south[first]! += weight / 2;
  // With a width of 2 the node to the south-west is the next one too; such a pair lies in two rows.
  else if (distance === width - 1 && Math.floor(first / width) !== Math.floor((first + distance) / width)) hold.southWest[first]! += weight / 2;
  else hold.east[first]! += weight / 2;
}
