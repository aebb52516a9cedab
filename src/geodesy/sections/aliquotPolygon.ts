import { partLines } from './partLines.js';
import type { AliquotPart, PlanePoint, Ring, Section, Side } from './types.js';
import type { TracedPoint } from './tracedPoint.js';

/**
 * The part of a section as a closed ring in frame metres, counter-clockwise, with every vertex that the layer has on its
 * lines. Parts that make up a whole have its area to rounding. Throws as `partLines` does.
 */
export function aliquotPolygon(section: Section, part: AliquotPart): Ring {
  const ring = planeRing(partLines(section, part)).map(([east, north]) => section.plane.toFrame(east, north));
  return [...ring, ring[0]!];
}

/** Four lines as one ring in plane metres, counter-clockwise, open. */
export function planeRing(lines: Readonly<Record<Side, readonly TracedPoint[]>>): PlanePoint[] {
  const path = [...lines.S.slice(0, -1), ...lines.E.slice(0, -1), ...lines.N.slice(1).toReversed(), ...lines.W.slice(1).toReversed()];
  return path.map((p): PlanePoint => [p.east, p.north]);
}
