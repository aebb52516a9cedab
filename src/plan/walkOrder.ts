/** A line to walk: its two ends in frame metres. */
export interface Segment {
  readonly ax: number;
  readonly ay: number;
  readonly bx: number;
  readonly by: number;
}

/** One line of a walk: which it is, and whether it is walked from its second end to its first. */
export interface Step {
  readonly index: number;
  readonly reversed: boolean;
}

/** Length that the way from (ax, ay) to (bx, by) counts; at least the straight distance. Symmetric. */
export type WayCost = (ax: number, ay: number, bx: number, by: number) => number;

/** Gains below a millimetre are rounding and would let the search go round in circles. */
const LEAST_GAIN_M = 1e-3;
/** Bound on the work of one call, so that thousands of lines still end: pairs of lines looked at. */
const MOST_PAIRS = 100_000_000;
/** Longest run of lines that is taken out and put in elsewhere as a whole. */
const RUN = 3;

/** What a way costs, and where the walker stands at first, if anywhere. */
export interface WalkOptions {
  readonly cost: WayCost;
  readonly from?: readonly [x: number, y: number];
}

/**
 * An order of walking every segment once that keeps the dead way between them short: the best of the orders given and of
 * nearest-neighbour walks from both ends of the first, each improved by reversing stretches (2-opt, Croes 1958) and moving
 * short runs (or-opt, Or 1976) until neither helps. Never longer than any order given. Deterministic.
 */
export function walkOrder(segments: readonly Segment[], given: ReadonlyArray<readonly Step[]>, options: WalkOptions): Step[] {
  const plain = given[0]!;
  if (segments.length === 0) return [];
  const starts = [...given, nearestWalk(segments, plain[0]!, options), nearestWalk(segments, flipped(plain.at(-1)!), options)];
  let best = [...plain];
  let least = deadLength(segments, plain, options);
  for (const start of starts) {
    const walk = improved(segments, start, options);
    const length = deadLength(segments, walk, options);
    if (length < least - LEAST_GAIN_M) [best, least] = [walk, length];
  }
  return best;
}

/** Way between the segments of a walk, and from `from` to its first. */
export function deadLength(segments: readonly Segment[], walk: readonly Step[], { cost, from }: WalkOptions): number {
  let at = from;
  let sum = 0;
  for (const step of walk) {
    const [sx, sy, ex, ey] = ends(segments, step);
    if (at) sum += cost(at[0], at[1], sx, sy);
    at = [ex, ey];
  }
  return sum;
}

function ends(segments: readonly Segment[], { index, reversed }: Step): [number, number, number, number] {
  const { ax, ay, bx, by } = segments[index]!;
  return reversed ? [bx, by, ax, ay] : [ax, ay, bx, by];
}

function flipped({ index, reversed }: Step): Step {
  return { index, reversed: !reversed };
}

function nearestWalk(segments: readonly Segment[], first: Step, { cost }: WalkOptions): Step[] {
  const open = new Set(segments.keys());
  open.delete(first.index);
  const walk = [first];
  while (open.size > 0) {
    const [, , x, y] = ends(segments, walk.at(-1)!);
    let best: Step | null = null;
    let least = Infinity;
    for (const index of open) {
      for (const reversed of [false, true]) {
        const [sx, sy] = ends(segments, { index, reversed });
        // The straight distance is a lower bound, and cheap.
        if (Math.hypot(sx - x, sy - y) >= least) continue;
        const length = cost(x, y, sx, sy);
        if (length < least) [best, least] = [{ index, reversed }, length];
      }
    }
    walk.push(best!);
    open.delete(best!.index);
  }
  return walk;
}

function improved(segments: readonly Segment[], start: readonly Step[], options: WalkOptions): Step[] {
  const walk = new Walk(segments, start, options);
  let pairs = MOST_PAIRS;
  for (let better = true; better && pairs > 0;) {
    pairs -= 2 * segments.length ** 2;
    better = walk.reverseStretches();
    better = walk.moveRuns() || better;
  }
  return walk.steps;
}

/** A walk with its free ends: before the first step stands `from` or nothing, after the last nothing; nothing costs nothing. */
class Walk {
  steps: Step[];
  private readonly segments: readonly Segment[];
  private readonly cost: WayCost;
  private readonly from: readonly [number, number] | undefined;

  constructor(segments: readonly Segment[], start: readonly Step[], { cost, from }: WalkOptions) {
    this.segments = segments;
    this.steps = [...start];
    this.cost = cost;
    this.from = from;
  }

  /** 2-opt: walks a stretch the other way round wherever that shortens the way. */
  reverseStretches(): boolean {
    let better = false;
    for (let i = 0; i < this.steps.length; i++) {
      for (let j = i; j < this.steps.length; j++) {
        const [before, first, last, after] = [this.exit(i - 1), this.entry(i), this.exit(j), this.entry(j + 1)];
        const now = this.way(before, first) + this.way(last, after);
        if (this.straight(before, last) + this.straight(first, after) > now - LEAST_GAIN_M) continue;
        if (this.way(before, last) + this.way(first, after) > now - LEAST_GAIN_M) continue;
        this.steps.splice(i, j - i + 1, ...this.steps.slice(i, j + 1).toReversed().map(flipped));
        better = true;
      }
    }
    return better;
  }

  /** Or-opt: takes a run of up to three steps out and puts it in elsewhere, either way round, wherever that shortens the way. */
  moveRuns(): boolean {
    let better = false;
    for (let length = 1; length <= Math.min(RUN, this.steps.length - 1); length++) {
      for (let i = 0; i + length <= this.steps.length; i++) better = this.moveRun(i, length) || better;
    }
    return better;
  }

  private moveRun(i: number, length: number): boolean {
    const [before, first, last, after] = [this.exit(i - 1), this.entry(i), this.exit(i + length - 1), this.entry(i + length)];
    const saved = this.way(before, first) + this.way(last, after) - this.way(before, after);
    if (saved < LEAST_GAIN_M) return false;
    let [best, least, turned] = [-1, saved - LEAST_GAIN_M, false];
    for (let gap = 0; gap <= this.steps.length; gap++) {
      if (gap >= i && gap <= i + length) continue;
      const [left, right] = [this.exit(gap - 1), this.entry(gap)];
      for (const reversed of [false, true]) {
        const [head, tail] = reversed ? [last, first] : [first, last];
        const whole = this.way(left, right);
        if (this.straight(left, head) + this.straight(tail, right) - whole >= least) continue;
        const price = this.way(left, head) + this.way(tail, right) - whole;
        if (price < least) [best, least, turned] = [gap, price, reversed];
      }
    }
    if (best < 0) return false;
    const run = this.steps.splice(i, length);
    this.steps.splice(best > i ? best - length : best, 0, ...(turned ? run.toReversed().map(flipped) : run));
    return true;
  }

  private entry(i: number): Place {
    if (i >= this.steps.length) return null;
    const [x, y] = ends(this.segments, this.steps[i]!);
    return [x, y];
  }

  private exit(i: number): Place {
    if (i < 0) return this.from ?? null;
    const [, , x, y] = ends(this.segments, this.steps[i]!);
    return [x, y];
  }

  private way(a: Place, b: Place): number {
    return a && b ? this.cost(a[0], a[1], b[0], b[1]) : 0;
  }

  private straight(a: Place, b: Place): number {
    return a && b ? Math.hypot(a[0] - b[0], a[1] - b[1]) : 0;
  }
}

type Place = readonly [number, number] | null;
