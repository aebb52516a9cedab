import { UserError } from '../../errors.js';
import { quartersOf, wholeCell, type Quarter, type SectionCell } from './sectionCell.js';
import type { TracedPoint } from './tracedPoint.js';
import type { AliquotPart, AliquotStep, Section, Side } from './types.js';

/** The section itself. */
export const WHOLE: AliquotPart = Object.freeze({ steps: Object.freeze([]) });

/** Deepest nesting: 2^-12 of a mile is 1.3 ft, less than any part that was ever conveyed. */
const MAX_STEPS = 12;
const NO_MIDDLES: ReadonlySet<number> = new Set();

/** What a step leaves of a range from west to east and of one from south to north, as the lower and upper half of each. */
const RANGES: Readonly<Record<AliquotStep, readonly [west: number, east: number, south: number, north: number]>> = {
  SW: [0, 0.5, 0, 0.5], SE: [0.5, 1, 0, 0.5], NW: [0, 0.5, 0.5, 1], NE: [0.5, 1, 0.5, 1],
  W2: [0, 0.5, 0, 1], E2: [0.5, 1, 0, 1], S2: [0, 1, 0, 0.5], N2: [0, 1, 0.5, 1],
};

/**
 * The four lines of a part, made from the section's own: a quarter is cut as `quartersOf` says, a half is two quarters
 * side by side, so that half of a half ends on the sixteenth line, which bends at the quarter line. Throws UserError
 * `polygon_invalid` where a crooked line stands in the way of halving.
 */
export function partLines(section: Section, part: AliquotPart): Readonly<Record<Side, readonly TracedPoint[]>> {
  const whole = wholeCell(section);
  if (part.steps.length === 0) return whole.lines;
  if (part.steps.length > MAX_STEPS) {
    throw new UserError({ code: 'position_invalid', where: section.where, found: `a part of ${part.steps.length} steps`, wanted: `at most ${MAX_STEPS}` });
  }
  if (section.irregular.length > 0) {
    throw new UserError({
      code: 'polygon_invalid', where: section.where, found: `${section.name} with a crooked ${section.irregular.join(' and ')} line, which nobody halves`,
      wanted: 'a section with four lines that are nearly straight', advice: 'its parts are lots, which the layer has to bring',
    });
  }
  let [west, east, south, north] = [0, 1, 0, 1];
  for (const step of part.steps) {
    const [w, e, s, n] = RANGES[step];
    [west, east] = [west + w * (east - west), west + e * (east - west)];
    [south, north] = [south + s * (north - south), south + n * (north - south)];
  }
  const root = deepened(whole, [marks(section.quarters), marks(section.sixteenths)]);
  return {
    N: root.run('SN', north, [west, east]),
    S: root.run('SN', south, [west, east]),
    E: root.run('WE', east, [south, north]),
    W: root.run('WE', west, [south, north]),
  };
}

function marks(corners: Readonly<Record<Side, number | null | readonly (number | null)[]>>): ReadonlySet<number> {
  return new Set(Object.values(corners).flat().filter((index): index is number => index !== null));
}

interface DeepCell {
  /** The line at a height between two lines (0 on S or W, 1 on N or E), from one place along it to another; binary fractions. */
  run(between: 'SN' | 'WE', height: number, range: readonly [number, number]): readonly TracedPoint[];
}

function deepened(cell: SectionCell, middles: ReadonlyArray<ReadonlySet<number>>): DeepCell {
  let quarters: Readonly<Record<Quarter, DeepCell>> | null = null;
  const split = (): Readonly<Record<Quarter, DeepCell>> => {
    if (!quarters) {
      const cells = quartersOf(cell, middles[0] ?? NO_MIDDLES);
      const below = middles.slice(1);
      quarters = { NE: deepened(cells.NE, below), NW: deepened(cells.NW, below), SE: deepened(cells.SE, below), SW: deepened(cells.SW, below) };
    }
    return quarters;
  };
  const run: DeepCell['run'] = (between, height, [from, to]) => {
    const [low, high]: [Side, Side] = between === 'SN' ? ['S', 'N'] : ['W', 'E'];
    if (from === 0 && to === 1 && (height === 0 || height === 1)) return cell.lines[height === 0 ? low : high];
    const upper = height > 0.5;
    const inner = upper ? height * 2 - 1 : height * 2;
    const four = split();
    const [first, second] = between === 'SN'
      ? (upper ? [four.NW, four.NE] : [four.SW, four.SE])
      : (upper ? [four.SE, four.NE] : [four.SW, four.NW]);
    const a = from < 0.5 ? first.run(between, inner, [from * 2, Math.min(to * 2, 1)]) : [];
    const b = to > 0.5 ? second.run(between, inner, [Math.max(from * 2 - 1, 0), to * 2 - 1]) : [];
    return a.length > 0 && b.length > 0 ? [...a, ...b.slice(1)] : [...a, ...b];
  };
  return { run };
}
