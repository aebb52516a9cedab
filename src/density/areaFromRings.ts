import { pointInArea, ringAreaM2 } from './area.js';
import type { Area, Rings } from './types.js';

type Ring = Rings[number];

/**
 * Sorts loose rings into polygons with holes, by what lies in what: a ring inside an odd number of others is a hole of
 * the innermost of them. Outer rings come out counter-clockwise, holes clockwise, all closed (RFC 7946). Rings without
 * area are left out. Rings must not cross one another.
 */
export function areaFromRings(rings: readonly Ring[]): Area {
  const solid = rings
    .map((ring) => ({ ring, size: Math.abs(ringAreaM2(ring)) }))
    .filter(({ size }) => size > 0)
    .toSorted((a, b) => b.size - a.size);
  const polygons: Array<{ rings: Ring[]; depth: number }> = [];
  const owners: Array<{ ring: Ring; depth: number; polygon: { rings: Ring[]; depth: number } }> = [];
  for (const { ring } of solid) {
    // Larger rings are placed already, so the last one that holds this ring is the innermost.
    const parents = owners.filter((owner) => ringInside(ring, owner.ring));
    const depth = parents.length;
    if (depth % 2 === 1) {
      const { polygon } = parents[parents.length - 1]!;
      polygon.rings.push(oriented(ring, -1));
      owners.push({ ring, depth, polygon });
    } else {
      const polygon = { rings: [oriented(ring, 1)], depth };
      polygons.push(polygon);
      owners.push({ ring, depth, polygon });
    }
  }
  return polygons.map((polygon) => polygon.rings);
}

/** Closed, and counter-clockwise for `turn` 1, clockwise for −1. */
export function oriented(ring: Ring, turn: 1 | -1): Ring {
  const first = ring[0]!;
  const last = ring[ring.length - 1]!;
  const closed = first[0] === last[0] && first[1] === last[1] ? ring : [...ring, first];
  return Math.sign(ringAreaM2(closed)) === turn ? closed : closed.toReversed();
}

/** By the middles of the inner ring's edges, most of which must lie inside: a shared vertex or edge then decides nothing. */
function ringInside(inner: Ring, outer: Ring): boolean {
  const area: Area = [[outer]];
  let votes = 0;
  for (let i = 0; i < inner.length; i++) {
    const [ax, ay] = inner[i]!;
    const [bx, by] = inner[(i + 1) % inner.length]!;
    votes += pointInArea(area, (ax + bx) / 2, (ay + by) / 2) ? 1 : -1;
  }
  return votes > 0;
}
