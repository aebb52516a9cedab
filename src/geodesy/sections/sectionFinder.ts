import Flatbush from 'flatbush';
import { UserError } from '../../errors.js';
import { liesInRing } from './liesInRing.js';
import { outerRing } from './outerRing.js';
import type { SectionRow } from './sectionRows.js';
import type { SectionFeatures } from './types.js';

/** A place on the common line of two sections lies in both, whatever rounding says. */
const ON_LINE_M = 0.001;

/** Finds the rows whose polygons hold a place of the frame. A feature that is no single polygon holds none: whatever needs its section throws. */
export function sectionFinder(features: SectionFeatures, rows: readonly SectionRow[]): (x: number, y: number) => SectionRow[] {
  const rings = rows.map(({ feature }) => ringOf(features, feature));
  const held = rows.map((_, i) => i).filter((i) => rings[i] !== null);
  if (held.length === 0) return () => [];
  const index = new Flatbush(held.length);
  for (const i of held) {
    const [xs, ys] = [rings[i]!.map((p) => p[0]), rings[i]!.map((p) => p[1])];
    index.add(Math.min(...xs), Math.min(...ys), Math.max(...xs), Math.max(...ys));
  }
  index.finish();
  return (x, y) =>
    index.search(x - ON_LINE_M, y - ON_LINE_M, x + ON_LINE_M, y + ON_LINE_M)
      .map((k) => held[k]!)
      .toSorted((a, b) => a - b)
      .filter((i) => liesInRing(rings[i]!, [x, y], ON_LINE_M))
      .map((i) => rows[i]!);
}

function ringOf(features: SectionFeatures, feature: number): [number, number][] | null {
  try {
    return outerRing(features.features[feature - 1]!.geometry, features.source);
  } catch (error) {
    if (error instanceof UserError) return null;
    throw error;
  }
}
