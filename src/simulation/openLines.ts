import type { Area } from '../density/types.js';

/** A straight piece of open ground along a line, in the direction of walking. Frame metres. */
export interface OpenPiece {
  readonly line: number;
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

export interface OpenLinesOptions {
  readonly spacingM: number;
  readonly azimuthDeg: number;
  readonly marginM: number;
  readonly every: number;
  /** Number of the first line. */
  readonly firstLine: number;
}

/** Nobody walks a shorter piece than this: a couple of steps. */
const SHORTEST_PIECE_M = 3;

type Interval = readonly [number, number];

/**
 * Parallel lines over the parcel less exclusions, walked to and fro. Pieces of one line that an exclusion or a bend of
 * the parcel parts keep the line's number.
 */
export function openLines(parcel: Area, exclusions: Area, options: OpenLinesOptions): OpenPiece[] {
  const { spacingM, azimuthDeg, marginM, every, firstLine } = options;
  const sin = Math.sin(azimuthDeg * Math.PI / 180);
  const cos = Math.cos(azimuthDeg * Math.PI / 180);
  const along = (x: number, y: number): number => x * sin + y * cos;
  const across = (x: number, y: number): number => x * cos - y * sin;
  const offsets = parcel.flatMap((rings) => rings[0]!.map(([x, y]) => across(x, y)));
  const first = Math.min(...offsets) + spacingM / 2;
  const last = Math.max(...offsets);
  const pieces: OpenPiece[] = [];
  let line = firstLine;
  for (let k = 0; first + k * spacingM < last; k += every) {
    const v = first + k * spacingM;
    const crossings = (area: Area): Interval[] => area.flatMap((rings) => inside(rings, v, along, across));
    const open = subtract(crossings(parcel), crossings(exclusions))
      .map(([a, b]): Interval => [a + marginM, b - marginM])
      .filter(([a, b]) => b - a >= SHORTEST_PIECE_M);
    if (open.length === 0) continue;
    const backwards = (line - firstLine) % 2 === 1;
    for (const [a, b] of backwards ? open.map(([a, b]): Interval => [b, a]).toReversed() : open) {
      pieces.push({ line, x0: a * sin + v * cos, y0: a * cos - v * sin, x1: b * sin + v * cos, y1: b * cos - v * sin });
    }
    line += 1;
  }
  return pieces;
}

/** Stretches of the line `across = v` inside a polygon with holes, by the even-odd rule. */
function inside(
  rings: Area[number], v: number,
  along: (x: number, y: number) => number, across: (x: number, y: number) => number,
): Interval[] {
  const cuts: number[] = [];
  for (const ring of rings) {
    for (let i = 0; i < ring.length; i++) {
      const p = ring[i]!;
      const q = ring[(i + 1) % ring.length]!;
      const a = across(p[0], p[1]) - v;
      const b = across(q[0], q[1]) - v;
      if ((a < 0) === (b < 0)) continue;
      const t = a / (a - b);
      cuts.push(along(p[0] + t * (q[0] - p[0]), p[1] + t * (q[1] - p[1])));
    }
  }
  cuts.sort((a, b) => a - b);
  const out: Interval[] = [];
  for (let i = 0; i + 1 < cuts.length; i += 2) out.push([cuts[i]!, cuts[i + 1]!]);
  return out;
}

function subtract(from: readonly Interval[], holes: readonly Interval[]): Interval[] {
  let left = from.toSorted((a, b) => a[0] - b[0]);
  for (const [a, b] of holes) {
    left = left.flatMap(([p, q]): Interval[] => {
      if (b <= p || a >= q) return [[p, q]];
      const parts: Interval[] = [];
      if (a > p) parts.push([p, a]);
      if (b < q) parts.push([b, q]);
      return parts;
    });
  }
  return left;
}
