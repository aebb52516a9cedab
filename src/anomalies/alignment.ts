/** A place that may belong to a line of sources. */
export interface Pin {
  readonly x: number;
  readonly y: number;
  readonly sdM: number;
}

export interface Alignment {
  /** Indices of the pins on it, in order along the line. */
  readonly members: readonly number[];
  /** Clockwise from grid north, radians in [0, π). */
  readonly azimuth: number;
  /** A point of the line, and where the first and last member lie along it from there, metres. */
  readonly x: number;
  readonly y: number;
  readonly from: number;
  readonly to: number;
}

export interface AlignmentOptions {
  /** A pin is on the line within this distance plus twice its own error (no more than as much again). */
  readonly toleranceM: number;
  /** Neighbours on the line lie no further apart than this. */
  readonly gapM: number;
  readonly leastMembers: number;
  readonly leastLengthM: number;
  /** … and on the average no further apart than this. */
  readonly meanGapM: number;
}

/**
 * Straight runs of pins: of all lines through two pins the one with the most members in an unbroken run, straightened by
 * least squares; then again among the pins that are left. Ties go to the pair named first, so the answer is always the same.
 *
 * Source: random sample consensus of Fischler & Bolles (1981), with every pair tried instead of random ones.
 */
export function alignments(pins: readonly Pin[], options: AlignmentOptions): Alignment[] {
  const left = new Set(pins.keys());
  const found: Alignment[] = [];
  for (;;) {
    let best: Alignment | null = null;
    const order = [...left];
    for (const i of order) {
      for (const j of order) {
        if (j <= i) continue;
        const a = pins[i]!;
        const b = pins[j]!;
        const length = Math.hypot(b.x - a.x, b.y - a.y);
        if (length > options.gapM * 3 || length < options.toleranceM) continue;
        const run = runOn(pins, order, options, { x: a.x, y: a.y, azimuth: Math.atan2(b.x - a.x, b.y - a.y) });
        if (run && (!best || run.members.length > best.members.length)) best = run;
      }
    }
    if (!best) return found;
    const straight = runOn(pins, order, options, straighten(best.members.map((k) => pins[k]!)));
    const run = straight && straight.members.length >= best.members.length ? straight : best;
    for (const k of run.members) left.delete(k);
    found.push(run);
  }
}

function runOn(pins: readonly Pin[], order: readonly number[], options: AlignmentOptions, { x, y, azimuth }: { readonly x: number; readonly y: number; readonly azimuth: number }): Alignment | null {
  const s = Math.sin(azimuth);
  const c = Math.cos(azimuth);
  const on = order
    .map((k) => ({ k, along: (pins[k]!.x - x) * s + (pins[k]!.y - y) * c, across: (pins[k]!.x - x) * c - (pins[k]!.y - y) * s }))
    .filter(({ k, across }) => Math.abs(across) <= options.toleranceM + Math.min(options.toleranceM, 2 * pins[k]!.sdM))
    .toSorted((p, q) => p.along - q.along || p.k - q.k);
  let best: typeof on = [];
  for (let from = 0; from < on.length;) {
    let to = from + 1;
    while (to < on.length && on[to]!.along - on[to - 1]!.along <= options.gapM) to++;
    if (to - from > best.length) best = on.slice(from, to);
    from = to;
  }
  if (best.length < options.leastMembers) return null;
  const first = best[0]!.along;
  const last = best[best.length - 1]!.along;
  if (last - first < options.leastLengthM || last - first > options.meanGapM * (best.length - 1)) return null;
  return { members: best.map(({ k }) => k), azimuth: ((azimuth % Math.PI) + Math.PI) % Math.PI, x, y, ...ends(azimuth, first, last) };
}

/** Turning an azimuth by π swaps the ends. */
function ends(azimuth: number, first: number, last: number): { from: number; to: number } {
  const turned = ((azimuth % (2 * Math.PI)) + 2 * Math.PI) % (2 * Math.PI) >= Math.PI;
  return turned ? { from: -last, to: -first } : { from: first, to: last };
}

/** Total least squares: the middle of the pins and the axis of their scatter. */
export function straighten(pins: readonly Pin[]): { x: number; y: number; azimuth: number } {
  const n = pins.length;
  const x = pins.reduce((sum, pin) => sum + pin.x, 0) / n;
  const y = pins.reduce((sum, pin) => sum + pin.y, 0) / n;
  let ee = 0, en = 0, nn = 0;
  for (const pin of pins) {
    ee += (pin.x - x) ** 2;
    en += (pin.x - x) * (pin.y - y);
    nn += (pin.y - y) ** 2;
  }
  return { x, y, azimuth: 0.5 * Math.atan2(2 * en, nn - ee) };
}
