/** Side of the squares of nodes in which the surface is watched, in nodes. */
const SQUARE = 32;
/** Squares around one that still moves which are solved with it: what lies beyond hardly feels it. */
const MARGIN = 1;
/** Bounds within which the rate of convergence is believed. */
const BEST_RATE = 0.15;
const WORST_RATE = 0.95;

export interface Window {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

/**
 * How far a surface moves from one cycle of its solver to the next, square by square, and what that says of the error that
 * is left. Only nodes that are watched count.
 */
export class Moves {
  readonly #width: number;
  readonly #height: number;
  readonly #watch: Uint8Array | null;
  /** The surface as it was. */
  readonly #before: Float64Array;
  readonly #across: number;
  readonly #down: number;
  #largest: Float64Array;
  #largestBefore: Float64Array;

  constructor(z: Float64Array, { width, height, watch }: { width: number; height: number; watch: Uint8Array | null }) {
    this.#width = width;
    this.#height = height;
    this.#watch = watch;
    this.#before = z.slice();
    this.#across = Math.ceil(width / SQUARE);
    this.#down = Math.ceil(height / SQUARE);
    this.#largest = new Float64Array(this.#across * this.#down).fill(NaN);
    this.#largestBefore = this.#largest.slice();
  }

  /** Looks at the surface after a cycle. */
  note(z: Float64Array): void {
    [this.#largest, this.#largestBefore] = [this.#largestBefore, this.#largest];
    this.#largest.fill(0);
    const [width, height, before, watch] = [this.#width, this.#height, this.#before, this.#watch];
    for (let j = 0; j < height; j++) {
      const row = Math.floor(j / SQUARE) * this.#across;
      for (let c = 0; c < this.#across; c++) {
        const span = [j * width + c * SQUARE, j * width + Math.min(width, (c + 1) * SQUARE)] as const;
        this.#largest[row + c] = Math.max(this.#largest[row + c]!, largestMove(z, before, { watch, span }));
      }
    }
    before.set(z);
  }

  /** Largest move, as a share of the largest of the cycle before; NaN in the first. */
  get rate(): number {
    const largest = (all: Float64Array): number => all.reduce((most, each) => Math.max(most, each), 0);
    return largest(this.#largest) / largest(this.#largestBefore);
  }

  /** Estimate of the largest error that is left. */
  get remaining(): number {
    return this.#largest.reduce((most, _, square) => Math.max(most, this.#left(square)), 0);
  }

  /** Windows around all squares in which more than `tolerance` may be left. They do not overlap. */
  unsettled(tolerance: number): Window[] {
    const windows: Square[] = [];
    for (let square = 0; square < this.#largest.length; square++) {
      if (this.#left(square) <= tolerance) continue;
      const [i, j] = [square % this.#across, Math.floor(square / this.#across)];
      addJoined(windows, {
        left: Math.max(0, i - MARGIN), top: Math.max(0, j - MARGIN),
        right: Math.min(this.#across, i + MARGIN + 1), bottom: Math.min(this.#down, j + MARGIN + 1),
      });
    }
    return windows.map(({ left, top, right, bottom }) => ({
      left: left * SQUARE, top: top * SQUARE,
      width: Math.min(this.#width, right * SQUARE) - left * SQUARE, height: Math.min(this.#height, bottom * SQUARE) - top * SQUARE,
    }));
  }

  /** Moves fall about geometrically: what is still to come is their sum. */
  #left(square: number): number {
    const move = this.#largest[square]!;
    const rate = Math.min(WORST_RATE, Math.max(BEST_RATE, move / this.#largestBefore[square]! || 0));
    return (move * rate) / (1 - rate);
  }
}

/** Of the watched nodes of a span. */
function largestMove(z: Float64Array, before: Float64Array, { watch, span: [from, to] }: { watch: Uint8Array | null; span: readonly [number, number] }): number {
  let largest = 0;
  for (let k = from; k < to; k++) {
    const move = Math.abs(z[k]! - before[k]!);
    if (move > largest && (watch === null || watch[k] !== 0)) largest = move;
  }
  return largest;
}

interface Square {
  left: number;
  top: number;
  right: number;
  bottom: number;
}

/** Adds a rectangle; as long as it overlaps another, the two become the one around both. */
function addJoined(all: Square[], one: Square): void {
  const at = all.findIndex((each) => each.left < one.right && one.left < each.right && each.top < one.bottom && one.top < each.bottom);
  if (at < 0) {
    all.push(one);
    return;
  }
  const [other] = all.splice(at, 1);
  addJoined(all, {
    left: Math.min(one.left, other!.left), top: Math.min(one.top, other!.top),
    right: Math.max(one.right, other!.right), bottom: Math.max(one.bottom, other!.bottom),
  });
}
