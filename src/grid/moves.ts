/** Side of the squares of nodes in which the surface is watched, in nodes. */
const SQUARE = 32;
/** Squares around one that still moves which are solved with it: what lies beyond hardly feels it. */
const MARGIN = 1;
/** Bounds within which the rate of convergence is believed. */
const BEST_RATE = 0.25;
const WORST_RATE = 0.95;

export interface Window {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

/**
 * How far a surface moves from one cycle of its solver to the next, square by square, and what that says of the error that
 * is left.
 */
export class Moves {
  readonly #width: number;
  readonly #height: number;
  readonly #watch: Uint8Array | null;
  /** The surface as it was. */
  readonly #before: Float64Array;
  readonly #across: number;
  readonly #down: number;
  /** Of all nodes, and of those that are watched. */
  readonly #all: LargestMoves;
  readonly #watched: LargestMoves;

  /** `watch`: 1 at nodes whose error counts; null where all do. */
  constructor(z: Float64Array, { width, height, watch }: { width: number; height: number; watch: Uint8Array | null }) {
    this.#width = width;
    this.#height = height;
    this.#watch = watch;
    this.#before = z.slice();
    this.#across = Math.ceil(width / SQUARE);
    this.#down = Math.ceil(height / SQUARE);
    this.#all = largestMoves(this.#across * this.#down);
    this.#watched = watch ? largestMoves(this.#across * this.#down) : this.#all;
  }

  /** Looks at the surface after a cycle. */
  note(z: Float64Array): void {
    const [width, height, before, watch, all, watched] = [this.#width, this.#height, this.#before, this.#watch, this.#all, this.#watched];
    next(all);
    if (watch) next(watched);
    for (let j = 0; j < height; j++) {
      for (let c = 0; c < this.#across; c++) {
        const square = Math.floor(j / SQUARE) * this.#across + c;
        const span = [j * width + c * SQUARE, j * width + Math.min(width, (c + 1) * SQUARE)] as const;
        noteSpan(z, before, { span, watch, square, all: all.now, watched: watched.now });
      }
    }
    before.set(z);
  }

  /** Largest move of a watched node, as a share of the largest of the cycle before; NaN in the first. */
  get rate(): number {
    const largest = (moves: Float64Array): number => moves.reduce((most, each) => Math.max(most, each), 0);
    return largest(this.#watched.now) / largest(this.#watched.before);
  }

  /** Estimate of the largest error that is left at a watched node. */
  get remaining(): number {
    return this.#watched.now.reduce((most, _, square) => Math.max(most, left(this.#watched, square)), 0);
  }

  /**
   * Windows around all squares in which more than `tolerance` may be left, at any node: where nobody watches, the surface
   * may be far from its end and still pull on what lies beside. They do not overlap.
   */
  unsettled(tolerance: number): Window[] {
    const windows: Square[] = [];
    for (let square = 0; square < this.#all.now.length; square++) {
      if (Math.max(left(this.#all, square), left(this.#watched, square)) <= tolerance) continue;
      const [i, j] = [square % this.#across, Math.floor(square / this.#across)];
      addJoined(windows, {
        left: Math.max(0, i - MARGIN), top: Math.max(0, j - MARGIN),
        right: Math.min(this.#across, i + MARGIN + 1), bottom: Math.min(this.#down, j + MARGIN + 1),
      });
    }
    return windows.map(({ left: west, top, right, bottom }) => ({
      left: west * SQUARE, top: top * SQUARE,
      width: Math.min(this.#width, right * SQUARE) - west * SQUARE, height: Math.min(this.#height, bottom * SQUARE) - top * SQUARE,
    }));
  }
}

/** Of each square, in the last cycle and in the one before. */
interface LargestMoves {
  now: Float64Array;
  before: Float64Array;
}

function largestMoves(squares: number): LargestMoves {
  return { now: new Float64Array(squares).fill(NaN), before: new Float64Array(squares).fill(NaN) };
}

function next(moves: LargestMoves): void {
  [moves.now, moves.before] = [moves.before, moves.now];
  moves.now.fill(0);
}

/** Moves fall about geometrically: what is still to come is their sum. */
function left({ now, before }: LargestMoves, square: number): number {
  const move = now[square]!;
  const rate = Math.min(WORST_RATE, Math.max(BEST_RATE, move / before[square]! || 0));
  return (move * rate) / (1 - rate);
}

function noteSpan(z: Float64Array, before: Float64Array, { span: [from, to], watch, square, all, watched }: {
  span: readonly [number, number]; watch: Uint8Array | null; square: number; all: Float64Array; watched: Float64Array;
}): void {
  let largest = all[square]!;
  let largestWatched = watched[square]!;
  for (let k = from; k < to; k++) {
    const move = Math.abs(z[k]! - before[k]!);
    if (move > largest) largest = move;
    if (move > largestWatched && (watch === null || watch[k] !== 0)) largestWatched = move;
  }
  all[square] = largest;
  watched[square] = largestWatched;
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
