import { EndType, inflatePathsD, JoinType, ramerDouglasPeuckerPathsD, type PathsD } from 'clipper2-ts';
import Flatbush from 'flatbush';
import { areaBounds, ringAreaM2 } from '../density/area.js';
import type { Area } from '../density/types.js';

/** How a walker gets from one place to another. */
export interface Way {
  readonly lengthM: number;
  /** `straight`; `round` where corners of the ground have to be walked round; `outside` where no way within it exists. */
  readonly kind: 'straight' | 'round' | 'outside';
}

/** Wiggles of a boundary below this are not walked. */
const SIMPLIFY_M = 0.5;
/** A way may leave the simplified ground by this many tolerances: the ends of lines lie on the boundary itself. */
const LOOSENESS = 2;
/** Corners that ways may turn round; where there are more, the boundary is simplified further, since tables grow with their square. */
const MOST_CORNERS = 300;
const MITER_LIMIT = 2;
const CLIP_DECIMALS = 4;
/** An outside way counts this many times its length in the search for an order, so that few are used. */
const OUTSIDE_WEIGHT = 2;

interface Ground {
  /** Corners that stick into the ground, x and y in turn. */
  readonly corners: Float64Array;
  /** Edges of the loosened ground, four numbers each, and their index; null where there is nothing in the way. */
  readonly edges: Float64Array;
  readonly index: Flatbush | null;
  /** Shortest way between corners, row by row; Infinity where there is none. */
  readonly between: Float64Array;
}

/**
 * Shortest ways on foot within an area of open ground, frame metres: straight where the ground allows, else round its
 * corners (shortest paths on the visibility graph, Lozano-Pérez & Wesley 1979). Places are expected on the ground.
 */
export class OpenWays {
  private readonly ground: Ground;
  private readonly origin: readonly [number, number];
  private readonly seen = new Map<string, Array<readonly [corner: number, lengthM: number]>>();

  constructor(open: Area) {
    const { west, south } = areaBounds(open);
    this.origin = [west, south];
    this.ground = prepare(open, this.origin);
  }

  way(ax: number, ay: number, bx: number, by: number): Way {
    const straight = Math.hypot(bx - ax, by - ay);
    if (this.ground.index === null || straight === 0) return { lengthM: straight, kind: 'straight' };
    return this.find(ax - this.origin[0], ay - this.origin[1], bx - this.origin[0], by - this.origin[1]);
  }

  /** Length that counts in the search for an order. */
  readonly cost = (ax: number, ay: number, bx: number, by: number): number => {
    const { lengthM, kind } = this.way(ax, ay, bx, by);
    return kind === 'outside' ? OUTSIDE_WEIGHT * lengthM : lengthM;
  };

  private find(ax: number, ay: number, bx: number, by: number): Way {
    const straight = Math.hypot(bx - ax, by - ay);
    if (isClear(this.ground, ax, ay, bx, by)) return { lengthM: straight, kind: 'straight' };
    const count = this.ground.corners.length / 2;
    let least = Infinity;
    const toB = this.cornersSeen(bx, by);
    for (const [i, first] of this.cornersSeen(ax, ay)) {
      for (const [j, last] of toB) least = Math.min(least, first + this.ground.between[i * count + j]! + last);
    }
    return least < Infinity ? { lengthM: least, kind: 'round' } : { lengthM: straight, kind: 'outside' };
  }

  private cornersSeen(x: number, y: number): Array<readonly [number, number]> {
    const key = `${x},${y}`;
    let list = this.seen.get(key);
    if (!list) {
      list = [];
      const { corners } = this.ground;
      for (let i = 0; i < corners.length; i += 2) {
        if (isClear(this.ground, x, y, corners[i]!, corners[i + 1]!)) list.push([i / 2, Math.hypot(corners[i]! - x, corners[i + 1]! - y)]);
      }
      this.seen.set(key, list);
    }
    return list;
  }
}

function prepare(open: Area, origin: readonly [number, number]): Ground {
  const paths: PathsD = open.flatMap((rings) => rings.map((ring, i) => {
    const path = ring.slice(0, -1).map(([x, y]) => ({ x: x - origin[0], y: y - origin[1] }));
    return ringAreaM2(ring) > 0 === (i === 0) ? path : path.toReversed();
  }));
  let toleranceM = SIMPLIFY_M;
  let simple = simplified(paths, toleranceM);
  let corners = reflexCorners(simple);
  while (corners.length > 2 * MOST_CORNERS) {
    toleranceM *= 2;
    simple = simplified(paths, toleranceM);
    corners = reflexCorners(simple);
  }
  const none: Ground = { corners, edges: new Float64Array(), index: null, between: new Float64Array() };
  if (corners.length === 0 && simple.length === 1) return none;
  const loose = inflatePathsD(simple, LOOSENESS * toleranceM, JoinType.Miter, EndType.Polygon, MITER_LIMIT, CLIP_DECIMALS);
  const edges = Float64Array.from(loose.flatMap((path) => path.flatMap((p, i) => [p.x, p.y, path[(i + 1) % path.length]!.x, path[(i + 1) % path.length]!.y])));
  const index = new Flatbush(edges.length / 4);
  for (let i = 0; i < edges.length; i += 4) {
    index.add(Math.min(edges[i]!, edges[i + 2]!), Math.min(edges[i + 1]!, edges[i + 3]!), Math.max(edges[i]!, edges[i + 2]!), Math.max(edges[i + 1]!, edges[i + 3]!));
  }
  index.finish();
  return { corners, edges, index, between: shortestBetween({ corners, edges, index }) };
}

/** Rings without the wiggles; what shrinks to nothing is gone. */
function simplified(paths: PathsD, toleranceM: number): PathsD {
  return ramerDouglasPeuckerPathsD(paths, toleranceM).filter((path) => path.length > 2);
}

/** Corners where the ground turns round something: right turns, as outer rings run counter-clockwise and holes clockwise. */
function reflexCorners(paths: PathsD): Float64Array {
  return Float64Array.from(paths.flatMap((path) => path.flatMap((p, i) => {
    const [before, after] = [path[(i + path.length - 1) % path.length]!, path[(i + 1) % path.length]!];
    return (p.x - before.x) * (after.y - p.y) - (p.y - before.y) * (after.x - p.x) < 0 ? [p.x, p.y] : [];
  })));
}

function isClear({ edges, index }: Pick<Ground, 'edges' | 'index'>, ax: number, ay: number, bx: number, by: number): boolean {
  let clear = true;
  index!.search(Math.min(ax, bx), Math.min(ay, by), Math.max(ax, bx), Math.max(ay, by), (i) => {
    if (!clear) return false;
    const [cx, cy, dx, dy] = [edges[4 * i]!, edges[4 * i + 1]!, edges[4 * i + 2]!, edges[4 * i + 3]!];
    // Each one's ends lie on either side of the other.
    if (isLeft(bx - ax, by - ay, cx - ax, cy - ay) !== isLeft(bx - ax, by - ay, dx - ax, dy - ay)
      && isLeft(dx - cx, dy - cy, ax - cx, ay - cy) !== isLeft(dx - cx, dy - cy, bx - cx, by - cy)) clear = false;
    return false;
  });
  return clear;
}

function isLeft(dx: number, dy: number, px: number, py: number): boolean {
  return dx * py - dy * px > 0;
}

/** Source: Floyd (1962), shortest paths between all pairs. */
function shortestBetween(ground: Pick<Ground, 'corners' | 'edges' | 'index'>): Float64Array {
  const { corners } = ground;
  const count = corners.length / 2;
  const between = new Float64Array(count * count).fill(Infinity);
  for (let i = 0; i < count; i++) {
    between[i * count + i] = 0;
    for (let j = 0; j < i; j++) {
      const [ax, ay, bx, by] = [corners[2 * i]!, corners[2 * i + 1]!, corners[2 * j]!, corners[2 * j + 1]!];
      if (isClear(ground, ax, ay, bx, by)) between[i * count + j] = between[j * count + i] = Math.hypot(bx - ax, by - ay);
    }
  }
  for (let k = 0; k < count; k++) {
    for (let i = 0; i < count; i++) {
      const first = between[i * count + k]!;
      if (first === Infinity) continue;
      for (let j = 0; j < count; j++) {
        const through = first + between[k * count + j]!;
        if (through < between[i * count + j]!) between[i * count + j] = through;
      }
    }
  }
  return between;
}
