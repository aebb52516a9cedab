import { lineDistance, type LineDistance } from './lineDistance.js';
import type { TracedPoint } from './tracedPoint.js';
import type { FootageCalls, PlanePoint, Side } from './types.js';

/** Newton's steps shrink the error by about the bend of the lines in radians each: some five reach rounding. */
const NEWTON_STEPS = 20;
/** Where an offset in a line makes them jump to and fro, half steps along the lines' general directions settle it. */
const DAMPED_STEPS = 200;
const DAMPING = 0.5;
const SOLVED_M = 1e-7;
/** Lines that meet at a flatter angle than this (sine) fix no place. */
const MIN_SINE = 0.3;

export interface MetOffsets {
  readonly place: PlanePoint;
  readonly feet: [LineDistance, LineDistance];
}

/**
 * The place at the distances of two calls from two lines, in plane metres: Newton's method on both distances, whose
 * gradients are unit normals that change only from piece to piece. Null where no place was found.
 */
export function meetOffsets(lines: Readonly<Record<Side, readonly TracedPoint[]>>, calls: FootageCalls, start: PlanePoint): MetOffsets | null {
  const general = calls.map(({ from }) => chordNormal(lines[from], from));
  let place = start;
  for (let step = 0; step < NEWTON_STEPS + DAMPED_STEPS; step++) {
    const newton = step < NEWTON_STEPS;
    const feet = calls.map(({ from }) => lineDistance(lines[from], from, place)) as [LineDistance, LineDistance];
    const [da, db] = [calls[0].distanceM - feet[0].distanceM, calls[1].distanceM - feet[1].distanceM];
    const a = newton ? feet[0].normal : general[0]!;
    const b = newton ? feet[1].normal : general[1]!;
    const sine = sineOf(a, b);
    if (Math.hypot(da, db) < SOLVED_M) return Math.abs(sineOf(feet[0].normal, feet[1].normal)) < MIN_SINE ? null : { place, feet };
    const factor = (newton ? 1 : DAMPING) / sine;
    if (Math.abs(sine) < MIN_SINE) {
      // The perpendicular of a short offset: go on along the general directions.
      if (!newton) return null;
      step = NEWTON_STEPS - 1;
      continue;
    }
    place = [place[0] + (da * b[1] - db * a[1]) * factor, place[1] + (db * a[0] - da * b[0]) * factor];
  }
  return null;
}

function sineOf(a: PlanePoint, b: PlanePoint): number {
  return a[0] * b[1] - a[1] * b[0];
}

/** Unit normal of the chord of a line, inwards. */
function chordNormal(line: readonly TracedPoint[], side: Side): PlanePoint {
  const ends = [line[0]!, line.at(-1)!];
  return lineDistance(ends, side, [(ends[0]!.east + ends[1]!.east) / 2, (ends[0]!.north + ends[1]!.north) / 2]).normal;
}
