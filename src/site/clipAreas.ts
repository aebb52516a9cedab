import { Clipper, ClipType, FillRule, type Path64, type PolyPath64, PolyTree64 } from 'clipper2-ts';
import { ringAreaM2 } from '../density/area.js';
import type { Area, Rings } from '../density/types.js';

/** Clipping is done on whole numbers of this many metres: far below any error of a survey, far above overflow. */
const UNIT_M = 1e-4;

/** Union, difference or intersection of areas in frame metres; rings come back closed, outer rings anticlockwise. */
export function clipAreas(kind: 'union' | 'difference' | 'intersection', subject: Area, clip: Area = []): Area {
  const tree = new PolyTree64();
  Clipper.booleanOpWithPolyTree(CLIP_TYPES[kind], paths(subject), paths(clip), tree, FillRule.NonZero);
  const out: Rings[] = [];
  collect(tree, out);
  return out;
}

const CLIP_TYPES = { union: ClipType.Union, difference: ClipType.Difference, intersection: ClipType.Intersection } as const;

function paths(area: Area): Path64[] {
  return area.flatMap((rings) => rings.map((ring, i) => {
    const path = ring.slice(0, -1).map(([x, y]) => ({ x: Math.round(x / UNIT_M), y: Math.round(y / UNIT_M) }));
    return ringAreaM2(ring) > 0 === (i === 0) ? path : path.toReversed();
  }));
}

function collect(node: PolyPath64, out: Rings[]): void {
  for (let i = 0; i < node.count; i++) {
    const outer = node.child(i) as PolyPath64;
    const rings = [closed(outer.polygon!)];
    for (let j = 0; j < outer.count; j++) {
      const hole = outer.child(j) as PolyPath64;
      rings.push(closed(hole.polygon!));
      collect(hole, out);
    }
    out.push(rings);
  }
}

function closed(path: Path64): [number, number][] {
  const ring = path.map(({ x, y }): [number, number] => [x * UNIT_M, y * UNIT_M]);
  return [...ring, ring[0]!];
}
