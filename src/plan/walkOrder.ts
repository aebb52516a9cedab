import { Random } from '../numerics/random.js';
import { nearEnds } from './nearEnds.js';
import { Tour, type Step } from './tour.js';

/** A line to walk: its two ends in frame metres. */
export interface Segment {
  readonly ax: number;
  readonly ay: number;
  readonly bx: number;
  readonly by: number;
}

/** Length that the way from (ax, ay) to (bx, by) counts: at least the straight distance, the same both ways. */
export type WayCost = (ax: number, ay: number, bx: number, by: number) => number;

/** What a way costs, and where the walker stands at first, if anywhere. */
export interface WalkOptions {
  readonly cost: WayCost;
  readonly from?: readonly [x: number, y: number];
}

/** Gains below a millimetre are rounding and would let the search go round in circles. */
const LEAST_GAIN_M = 1e-3;
/** Kicks per line, and in all: beyond these a walk hardly gets shorter (tried on tracts of 30 to 2,000 lines). */
const KICKS_PER_LINE = 20;
const MOST_KICKS = 4000;
/** A kick exchanges two stretches within this many lines. */
const KICK_SPAN = 30;
/** Kicks are drawn from a fixed seed: the same lines always give the same walk. */
const KICK_SEED = 1;

/**
 * An order of walking every segment once that keeps the dead way between them short. The orders given and nearest-neighbour
 * walks are improved by reversing stretches (2-opt, Croes 1958) and moving short runs (or-opt, Or 1976) until neither
 * helps; the best is kicked out of its rest and improved again many times over (iterated local search, Martin, Otto &
 * Felten 1991). Never longer than any order given. Deterministic.
 */
export function walkOrder(segments: readonly Segment[], given: ReadonlyArray<readonly Step[]>, options: WalkOptions): Step[] {
  if (segments.length === 0) return [];
  const plain = given[0]!;
  const ends = endPoints(segments);
  const near = nearEnds(ends);
  const tour = new Tour(ends, { ...options, near, leastGainM: LEAST_GAIN_M });
  let best = [...plain];
  let least = deadLength(segments, plain, options);
  const keep = (): void => {
    const length = tour.length();
    if (length < least - LEAST_GAIN_M) [best, least] = [tour.steps(), length];
  };
  const nearest = [plain[0]!, turned(plain[0]!), plain.at(-1)!, turned(plain.at(-1)!)].map((first) => nearestWalk(segments.length, first, tour));
  for (const start of [...given, ...nearest]) {
    tour.set(start);
    keep();
    tour.improve();
    keep();
  }
  kick(tour, best);
  keep();
  return best;
}

/** Way between the segments of a walk, and from `from` to its first. */
export function deadLength(segments: readonly Segment[], walk: readonly Step[], { cost, from }: WalkOptions): number {
  let at = from;
  let sum = 0;
  for (const { index, reversed } of walk) {
    const { ax, ay, bx, by } = segments[index]!;
    const [sx, sy, ex, ey] = reversed ? [bx, by, ax, ay] : [ax, ay, bx, by];
    if (at) sum += cost(at[0], at[1], sx, sy);
    at = [ex, ey];
  }
  return sum;
}

/** x and y of both ends, segment by segment: end 2i is the first of segment i, 2i + 1 its second. */
function endPoints(segments: readonly Segment[]): Float64Array {
  return Float64Array.from(segments.flatMap(({ ax, ay, bx, by }) => [ax, ay, bx, by]));
}

function turned({ index, reversed }: Step): Step {
  return { index, reversed: !reversed };
}

function nearestWalk(count: number, first: Step, tour: Tour): Step[] {
  const open = new Set(Array.from({ length: count }, (_, i) => i));
  open.delete(first.index);
  const walk = [first];
  let at = 2 * first.index + (first.reversed ? 0 : 1);
  while (open.size > 0) {
    const best = nearestEnd(at, open, tour);
    const index = best >> 1;
    walk.push({ index, reversed: (best & 1) === 1 });
    open.delete(index);
    at = best ^ 1;
  }
  return walk;
}

/** The end of an open line that is nearest on foot; the straight distance is a lower bound, so few ways are asked for. */
function nearestEnd(at: number, open: ReadonlySet<number>, tour: Tour): number {
  let best = -1;
  let least = Infinity;
  for (const index of open) {
    for (let end = 2 * index; end <= 2 * index + 1; end++) {
      const straight = tour.straight(at, end);
      if (straight < least) [best, least] = [end, straight];
    }
  }
  least = tour.way(at, best);
  for (const index of open) {
    for (let end = 2 * index; end <= 2 * index + 1; end++) {
      if (tour.straight(at, end) >= least) continue;
      const length = tour.way(at, end);
      if (length < least) [best, least] = [end, length];
    }
  }
  return best;
}

/** Leaves the tour at the best walk found from `start`. */
function kick(tour: Tour, start: readonly Step[]): void {
  tour.set(start);
  const count = start.length;
  if (count < 4) return;
  const random = new Random(KICK_SEED);
  let least = tour.length();
  for (let k = Math.min(MOST_KICKS, KICKS_PER_LINE * count); k > 0; k--) {
    const span = Math.min(KICK_SPAN, count);
    const low = random.integer(count - span + 1);
    const cuts = [0, 0, 0].map(() => low + random.integer(span)).toSorted((a, b) => a - b) as [number, number, number];
    if (cuts[0] === cuts[1] || cuts[1] === cuts[2]) continue;
    const before = tour.save();
    tour.exchange(cuts[0], cuts[1], cuts[2]);
    tour.improve();
    const length = tour.length();
    if (length < least - LEAST_GAIN_M) least = length;
    else tour.restore(before);
  }
}
