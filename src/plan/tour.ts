/** One line of a walk: which it is, and whether it is walked from its second end to its first. */
export interface Step {
  readonly index: number;
  readonly reversed: boolean;
}

export interface TourOptions {
  readonly cost: (ax: number, ay: number, bx: number, by: number) => number;
  readonly from?: readonly [x: number, y: number];
  /** Near ends of each end, nearest first. */
  readonly near: readonly Int32Array[];
  readonly leastGainM: number;
}

/** Longest run of lines that is taken out and put in elsewhere as a whole. */
const RUN = 3;
/** Stands for no end at all: before the first line where the walker stands nowhere, and after the last. */
const NOWHERE = -1;

/**
 * A walk over lines, as the entry end of each line in walking order. End 2i is the first of line i, 2i + 1 its second, so
 * a line's other end is its end with the last bit turned. A way to or from nowhere costs nothing.
 */
export class Tour {
  private readonly ends: Float64Array;
  private readonly options: TourOptions;
  private readonly count: number;
  /** Entry end at each place of the walk. */
  private entries: Int32Array;
  /** Place of each line in the walk. */
  private places: Int32Array;
  /** Lines whose ways have changed since they were last looked at, as a queue without repeats. */
  private readonly queue: number[] = [];
  private readonly queued: Uint8Array;
  private readonly known = new Map<number, number>();
  private total = 0;

  constructor(ends: Float64Array, options: TourOptions) {
    this.ends = ends;
    this.options = options;
    this.count = ends.length / 4;
    this.entries = new Int32Array(this.count);
    this.places = new Int32Array(this.count);
    this.queued = new Uint8Array(this.count);
  }

  /** Starts from a walk; all of it is to be looked at. */
  set(steps: readonly Step[]): void {
    steps.forEach(({ index, reversed }, place) => {
      this.entries[place] = 2 * index + (reversed ? 1 : 0);
      this.places[index] = place;
    });
    this.total = 0;
    for (let place = 0; place < this.count; place++) this.total += this.way(this.exit(place - 1), this.entry(place));
    for (let place = 0; place < this.count; place++) this.touch(place);
  }

  steps(): Step[] {
    return Array.from(this.entries, (end) => ({ index: end >> 1, reversed: (end & 1) === 1 }));
  }

  /** Dead way of the walk, metres. */
  length(): number {
    return this.total;
  }

  save(): { readonly entries: Int32Array; readonly places: Int32Array; readonly total: number } {
    return { entries: this.entries.slice(), places: this.places.slice(), total: this.total };
  }

  restore({ entries, places, total }: ReturnType<Tour['save']>): void {
    [this.entries, this.places, this.total] = [entries, places, total];
  }

  /** 2-opt and or-opt from every line whose ways have changed, until nothing is left to look at. */
  improve(): void {
    for (let index = this.queue.shift(); index !== undefined; index = this.queue.shift()) {
      this.queued[index] = 0;
      // A line that got better is looked at again: what is next to it now is new.
      while (this.reverseAt(this.places[index]!) || this.reverseAt(this.places[index]! + 1) || this.moveFrom(this.places[index]!));
    }
  }

  /** Exchanges the stretches [a, b) and [b, c). */
  exchange(a: number, b: number, c: number): void {
    const removed = this.way(this.exit(a - 1), this.entry(a)) + this.way(this.exit(b - 1), this.entry(b)) + this.way(this.exit(c - 1), this.entry(c));
    const added = this.way(this.exit(a - 1), this.entry(b)) + this.way(this.exit(c - 1), this.entry(a)) + this.way(this.exit(b - 1), this.entry(c));
    const first = this.entries.slice(a, b);
    this.entries.copyWithin(a, b, c);
    this.entries.set(first, c - first.length);
    this.renumber(a, c);
    this.total += added - removed;
    for (const place of [a - 1, a, a + c - b - 1, a + c - b, c - 1, c]) this.touch(place);
  }

  straight(a: number, b: number): number {
    if (a === NOWHERE || b === NOWHERE) return 0;
    const [ax, ay] = this.xy(a);
    const [bx, by] = this.xy(b);
    return Math.sqrt((ax - bx) ** 2 + (ay - by) ** 2);
  }

  way(a: number, b: number): number {
    if (a === NOWHERE || b === NOWHERE) return 0;
    const key = a < b ? a * (2 * this.count + 1) + b : b * (2 * this.count + 1) + a;
    let length = this.known.get(key);
    if (length === undefined) {
      length = this.options.cost(...this.xy(a), ...this.xy(b));
      this.known.set(key, length);
    }
    return length;
  }

  /** Of the way into this place: reverses the stretch before or after it that brings a near end next to one of its ends. */
  private reverseAt(place: number): boolean {
    if (place < 0 || place > this.count) return false;
    const [p, q] = [this.exit(place - 1), this.entry(place)];
    const now = this.way(p, q);
    for (const end of this.nearOf(p)) {
      if (this.straight(p, end) >= now && place < this.count) break;
      const j = this.places[end >> 1]!;
      if (this.exit(j) !== end || j === place - 1) continue;
      if (j >= place ? this.tryReverse(place, j) : this.tryReverse(j + 1, place - 1)) return true;
    }
    for (const end of this.nearOf(q)) {
      if (this.straight(q, end) >= now && place > 0) break;
      const j = this.places[end >> 1]!;
      if (this.entry(j) !== end || j === place) continue;
      if (j > place ? this.tryReverse(place, j - 1) : this.tryReverse(j, place - 1)) return true;
    }
    return false;
  }

  private tryReverse(a: number, b: number): boolean {
    const [before, first, last, after] = [this.exit(a - 1), this.entry(a), this.exit(b), this.entry(b + 1)];
    const now = this.way(before, first) + this.way(last, after);
    if (this.straight(before, last) + this.straight(first, after) > now - this.options.leastGainM) return false;
    const gain = now - this.way(before, last) - this.way(first, after);
    if (gain < this.options.leastGainM) return false;
    this.turn(a, b);
    this.total -= gain;
    for (const place of [a - 1, a, b, b + 1]) this.touch(place);
    return true;
  }

  /** Moves a run that starts or ends at this place next to an end near one of its own. */
  private moveFrom(place: number): boolean {
    for (let length = 1; length <= Math.min(RUN, this.count - 1); length++) {
      if (this.moveRun(place, place + length - 1)) return true;
      if (length > 1 && this.moveRun(place - length + 1, place)) return true;
    }
    return false;
  }

  private moveRun(a: number, b: number): boolean {
    if (a < 0 || b >= this.count) return false;
    const [before, first, last, after] = [this.exit(a - 1), this.entry(a), this.exit(b), this.entry(b + 1)];
    const now = this.way(before, first) + this.way(last, after);
    // Straight distances bound ways from below; a way proper is asked for only where it may pay, since it costs time.
    const mostSaved = now - this.straight(before, after);
    if (mostSaved < this.options.leastGainM) return false;
    for (const [own, other] of [[first, last], [last, first]] as const) {
      for (const end of this.nearOf(own)) {
        if (this.straight(own, end) >= mostSaved) break;
        const j = this.places[end >> 1]!;
        if (j >= a && j <= b) continue;
        // `own` comes next to `end`: after it where that is an exit, before it where it is an entry.
        const isExit = this.exit(j) === end;
        const gap = isExit ? j + 1 : j;
        if (gap === a || gap === b + 1) continue;
        const beyond = isExit ? this.entry(j + 1) : this.exit(j - 1);
        const there = this.way(end, beyond);
        if (mostSaved - this.straight(own, end) - this.straight(other, beyond) + there < this.options.leastGainM) continue;
        const gain = now - this.way(before, after) - this.way(own, end) - this.way(other, beyond) + there;
        if (gain < this.options.leastGainM) continue;
        // Walked as it is, the run is entered at its first end.
        this.move(a, b, { gap, turned: isExit !== (own === first) });
        this.total -= gain;
        return true;
      }
    }
    return false;
  }

  private move(a: number, b: number, { gap, turned }: { readonly gap: number; readonly turned: boolean }): void {
    const length = b - a + 1;
    const at = gap > b ? gap - length : gap;
    const run = this.entries.slice(a, b + 1);
    if (gap > b) this.entries.copyWithin(a, b + 1, gap);
    else this.entries.copyWithin(gap + length, gap, a);
    this.entries.set(run, at);
    this.renumber(Math.min(a, at), Math.max(b + 1, gap));
    if (turned) this.turn(at, at + length - 1);
    // Where the run was, one place or a run's length along, and where it is now.
    for (const place of [a - 1, a, b, b + 1, at - 1, at, at + length - 1, at + length]) this.touch(place);
  }

  private turn(a: number, b: number): void {
    this.entries.subarray(a, b + 1).reverse();
    for (let place = a; place <= b; place++) this.entries[place]! ^= 1;
    this.renumber(a, b + 1);
  }

  private renumber(from: number, to: number): void {
    for (let place = from; place < to; place++) this.places[this.entries[place]! >> 1] = place;
  }

  private touch(place: number): void {
    if (place < 0 || place >= this.count) return;
    const index = this.entries[place]! >> 1;
    if (this.queued[index] === 1) return;
    this.queued[index] = 1;
    this.queue.push(index);
  }

  private entry(place: number): number {
    return place < this.count ? this.entries[place]! : NOWHERE;
  }

  private exit(place: number): number {
    if (place >= 0) return this.entries[place]! ^ 1;
    return this.options.from ? 2 * this.count : NOWHERE;
  }

  private nearOf(end: number): Int32Array {
    return end === NOWHERE || end === 2 * this.count ? NONE : this.options.near[end]!;
  }

  private xy(end: number): readonly [number, number] {
    return end === 2 * this.count ? this.options.from! : [this.ends[2 * end]!, this.ends[2 * end + 1]!];
  }
}

const NONE = new Int32Array();
