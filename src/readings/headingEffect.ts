import Flatbush from 'flatbush';
import { median } from '../numerics/robust.js';
import type { Chunks } from './chunks.js';
import { robustFit } from './robustFit.js';

export type HeadingEffect =
  | { readonly kind: 'estimated'; readonly effectNT: (courseDeg: number) => number; readonly summary: string }
  | { readonly kind: 'none'; readonly reason: string };

/** Courses that differ by more than this are walked in different directions. */
const DIFFERENT_DEG = 45;
const DIFFERENT_COS = Math.cos(DIFFERENT_DEG * Math.PI / 180);
/** A harmonic is estimated where the pairs differ in it by this root mean square; less, and noise would be blown up. */
const LEAST_CONTRAST = 0.3;
/** Fewer comparisons than this leave the effect as it is. */
const LEAST_COMPARISONS = 40;
/** How many near stretches are looked at for one on either side. */
const LOOKED_AT = 24;
const TERMS = ['along the lines', 'across them', 'second harmonic along', 'second harmonic across'] as const;

/**
 * Heading effect: first and second harmonics of the course, from stretches of line that are walked in another direction
 * than their neighbours on both sides. Each is compared with what the two neighbours give at its place by linear
 * interpolation, so a slope of the ground cancels; steel bends few of the comparisons, and the fit is robust.
 * A harmonic that the courses do not tell apart (the second one, on lines to and fro) is left alone.
 *
 * @param chunks field with the main field's slope taken off, nT
 *
 * Source: heading error of optically pumped magnetometers as harmonics of the orientation (common practice).
 */
export function headingEffect(chunks: Chunks): HeadingEffect {
  const axis = mainAxis(chunks);
  const pairs = comparisons(chunks);
  if (pairs.length < LEAST_COMPARISONS) {
    return { kind: 'none', reason: `only ${pairs.length} stretches lie between neighbours walked in another direction, wanted ${LEAST_COMPARISONS}` };
  }
  const harmonics = (i: number): number[] => terms(chunks.courseX[i]!, chunks.courseY[i]!, axis);
  const contrast = pairs.map(({ i, left, right, leftShare }) => {
    const [own, a, b] = [harmonics(i), harmonics(left), harmonics(right)];
    return own.map((value, k) => value - leftShare * a[k]! - (1 - leftShare) * b[k]!);
  });
  const told = TERMS.map((_, k) => k).filter((k) => Math.sqrt(contrast.reduce((sum, row) => sum + row[k]! ** 2, 0) / contrast.length) >= LEAST_CONTRAST);
  if (told.length === 0) return { kind: 'none', reason: 'the courses do not differ enough' };
  const fit = robustFit({
    count: pairs.length, width: told.length,
    design: Float64Array.from(contrast.flatMap((row) => told.map((k) => row[k]!))),
    target: Float64Array.from(pairs, ({ i, left, right, leftShare }) => chunks.field[i]! - leftShare * chunks.field[left]! - (1 - leftShare) * chunks.field[right]!),
  });
  if (!fit) return { kind: 'none', reason: 'the courses do not tell the harmonics apart' };
  const words = told.map((k, n) => `${fit.parameters[n]!.toFixed(2)} ± ${fit.sd[n]!.toFixed(2)} nT ${TERMS[k]!}`);
  return {
    kind: 'estimated',
    effectNT: (courseDeg) => {
      if (Number.isNaN(courseDeg)) return 0;
      const values = terms(Math.sin(courseDeg * Math.PI / 180), Math.cos(courseDeg * Math.PI / 180), axis);
      return told.reduce((sum, k, n) => sum + fit.parameters[n]! * values[k]!, 0);
    },
    summary: `Heading effect from ${pairs.length} stretches between neighbours walked in another direction: ${words.join(', ')}.`,
  };
}

/** Cosine and sine of the course from the main axis, and of twice that. */
function terms(cx: number, cy: number, [ax, ay]: readonly [number, number]): number[] {
  const cos = cx * ax + cy * ay;
  const sin = cx * ay - cy * ax;
  return [cos, sin, 2 * cos * cos - 1, 2 * sin * cos];
}

/** Axis along which most of the way is walked, from doubled angles. */
function mainAxis({ count, courseX, courseY }: Chunks): [number, number] {
  let cos = 0;
  let sin = 0;
  for (let i = 0; i < count; i++) {
    if (Number.isNaN(courseX[i]!)) continue;
    cos += courseY[i]! ** 2 - courseX[i]! ** 2;
    sin += 2 * courseX[i]! * courseY[i]!;
  }
  const angle = Math.atan2(sin, cos) / 2;
  return [Math.sin(angle), Math.cos(angle)];
}

interface Comparison {
  readonly i: number;
  readonly left: number;
  readonly right: number;
  /** Weight of the left neighbour in what both give at the place between them. */
  readonly leftShare: number;
}

/** Stretches with a neighbour in another direction on either side, each within twice the usual distance. */
function comparisons(chunks: Chunks): Comparison[] {
  const { count, x, y, courseX, courseY, run } = chunks;
  if (count === 0) return [];
  const tree = new Flatbush(count);
  for (let i = 0; i < count; i++) tree.add(x[i]!, y[i]!);
  tree.finish();
  const found: Array<Comparison & { reachM: number }> = [];
  for (let i = 0; i < count; i++) {
    if (Number.isNaN(courseX[i]!)) continue;
    let left: { k: number; offM: number } | null = null;
    let right: { k: number; offM: number } | null = null;
    const other = (k: number): boolean => run[k] !== run[i] && courseX[k]! * courseX[i]! + courseY[k]! * courseY[i]! < DIFFERENT_COS;
    for (const k of tree.neighbors(x[i]!, y[i]!, LOOKED_AT, Infinity, other)) {
      // Distance to the right of the course; a neighbour ahead or behind says nothing of the side.
      const offM = (x[k]! - x[i]!) * courseY[i]! - (y[k]! - y[i]!) * courseX[i]!;
      if (offM < 0) left ??= { k, offM: -offM };
      else if (offM > 0) right ??= { k, offM };
      if (left && right) break;
    }
    if (!left || !right) continue;
    const reachM = Math.max(Math.hypot(x[left.k]! - x[i]!, y[left.k]! - y[i]!), Math.hypot(x[right.k]! - x[i]!, y[right.k]! - y[i]!));
    found.push({ i, left: left.k, right: right.k, leftShare: right.offM / (left.offM + right.offM), reachM });
  }
  const usualM = median(found.map(({ reachM }) => reachM));
  return found.filter(({ reachM }) => reachM <= 2 * usualM);
}
