import type { PlanePoint } from './types.js';

/** A 2 × 2 matrix by rows. */
export type Matrix2 = readonly [number, number, number, number];

/** A point made from vertices of the layer, in plane metres, with what a shift of each vertex does to it. */
export interface TracedPoint {
  readonly east: number;
  readonly north: number;
  /** Index of the vertex that it is; −1 for a point that is made. */
  readonly vertex: number;
  /** Jacobian by the index of the vertex. */
  readonly by: ReadonlyMap<number, Matrix2>;
}

const IDENTITY: Matrix2 = [1, 0, 0, 1];

export function tracedVertex(vertices: readonly PlanePoint[], index: number): TracedPoint {
  return { east: vertices[index]![0], north: vertices[index]![1], vertex: index, by: new Map([[index, IDENTITY]]) };
}

/** A made point whose small shifts are Σ matrix × shift of the points that it is made of. */
export function combined(east: number, north: number, parts: ReadonlyArray<readonly [TracedPoint, Matrix2]>): TracedPoint {
  const by = new Map<number, [number, number, number, number]>();
  for (const [point, [a, b, c, d]] of parts) {
    for (const [index, [e, f, g, h]] of point.by) {
      const sum = by.get(index) ?? [0, 0, 0, 0];
      by.set(index, [sum[0] + a * e + b * g, sum[1] + a * f + b * h, sum[2] + c * e + d * g, sum[3] + c * f + d * h]);
    }
  }
  return { east, north, vertex: -1, by };
}

/** Where the straight lines a–b and c–d meet; the caller answers for lines that do meet. */
export function crossing(a: TracedPoint, b: TracedPoint, c: TracedPoint, d: TracedPoint): TracedPoint {
  const [ux, uy] = [b.east - a.east, b.north - a.north];
  const [vx, vy] = [d.east - c.east, d.north - c.north];
  const cross = ux * vy - uy * vx;
  const [wx, wy] = [c.east - a.east, c.north - a.north];
  const s = (wx * vy - wy * vx) / cross;
  const t = (wx * uy - wy * ux) / cross;
  // Only the shift of a line across itself moves the crossing, and it moves it along the other line.
  const onFirst: Matrix2 = [(-vx * uy) / cross, (vx * ux) / cross, (-vy * uy) / cross, (vy * ux) / cross];
  const onSecond: Matrix2 = [(ux * vy) / cross, (-ux * vx) / cross, (uy * vy) / cross, (-uy * vx) / cross];
  return combined(a.east + s * ux, a.north + s * uy, [
    [a, scaled(onFirst, 1 - s)], [b, scaled(onFirst, s)], [c, scaled(onSecond, 1 - t)], [d, scaled(onSecond, t)],
  ]);
}

/** The middle of a bent line by its length. */
export function halfway(line: readonly TracedPoint[]): { point: TracedPoint; after: number } {
  const pieces = line.slice(1).map((b, i) => {
    const a = line[i]!;
    const length = Math.hypot(b.east - a.east, b.north - a.north);
    return { length, ux: (b.east - a.east) / length, uy: (b.north - a.north) / length };
  });
  const half = pieces.reduce((sum, p) => sum + p.length, 0) / 2;
  let before = 0;
  let i = 0;
  while (i < pieces.length - 1 && before + pieces[i]!.length < half) before += pieces[i++]!.length;
  const { length, ux, uy } = pieces[i]!;
  const t = (half - before) / length;
  // Along the line the middle follows half of every length behind it less half of every length before it; across, its own piece.
  const across = (share: number): Matrix2 => [share * uy * uy, -share * ux * uy, -share * ux * uy, share * ux * ux];
  const parts: Array<[TracedPoint, Matrix2]> = [[line[i]!, [ux * ux, ux * uy, ux * uy, uy * uy]], [line[i]!, across(1 - t)], [line[i + 1]!, across(t)]];
  pieces.forEach((piece, k) => {
    const share = k < i ? -0.5 : 0.5;
    const pull: Matrix2 = [ux * piece.ux * share, ux * piece.uy * share, uy * piece.ux * share, uy * piece.uy * share];
    parts.push([line[k + 1]!, pull], [line[k]!, scaled(pull, -1)]);
  });
  const a = line[i]!;
  return { point: combined(a.east + ux * t * length, a.north + uy * t * length, parts), after: i };
}

function scaled([a, b, c, d]: Matrix2, k: number): Matrix2 {
  return [a * k, b * k, c * k, d * k];
}
