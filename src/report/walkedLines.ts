import type { Readings } from '../readings/types.js';
import type { MapFrame } from './mapFrame.js';
import { round } from './symbols.js';

type Point = readonly [x: number, y: number];

/** A drawn walk leaves the true one by no more than this, in units of the drawing: half a pen's width. */
const TOLERANCE = 0.5;
/** A jump between two readings that is no walk, metres. */
const JUMP_M = 25;

/** The lines as they were walked, as one SVG path; readings without a place are left out. */
export function walkedPath({ count, x, y, line }: Readings, frame: MapFrame): string {
  const walks: Point[][] = [];
  let before = -1;
  for (let i = 0; i < count; i += 1) {
    if (!Number.isFinite(x[i]!) || !Number.isFinite(y[i]!)) continue;
    if (before < 0 || line[before] !== line[i] || Math.hypot(x[i]! - x[before]!, y[i]! - y[before]!) > JUMP_M) walks.push([]);
    walks.at(-1)!.push([frame.x(x[i]!), frame.y(y[i]!)]);
    before = i;
  }
  return walks.map((walk) => `M${simplified(walk).map(([px, py]) => `${round(px)} ${round(py)}`).join('L')}`).join('');
}

/** Leaves out points that lie on the way between others. Source: Douglas & Peucker (1973). */
function simplified(points: readonly Point[]): Point[] {
  const keep = new Uint8Array(points.length);
  keep[0] = 1;
  keep[points.length - 1] = 1;
  const open: Array<[number, number]> = [[0, points.length - 1]];
  for (let span = open.pop(); span; span = open.pop()) {
    const [from, to] = span;
    let farthest = -1;
    let most = TOLERANCE;
    for (let i = from + 1; i < to; i += 1) {
      const distance = distanceTo(points[i]!, points[from]!, points[to]!);
      if (distance > most) [farthest, most] = [i, distance];
    }
    if (farthest < 0) continue;
    keep[farthest] = 1;
    open.push([from, farthest], [farthest, to]);
  }
  return points.filter((_, i) => keep[i] === 1);
}

function distanceTo([x, y]: Point, [ax, ay]: Point, [bx, by]: Point): number {
  const square = (bx - ax) ** 2 + (by - ay) ** 2;
  const along = square > 0 ? Math.min(1, Math.max(0, ((x - ax) * (bx - ax) + (y - ay) * (by - ay)) / square)) : 0;
  return Math.hypot(x - ax - along * (bx - ax), y - ay - along * (by - ay));
}
