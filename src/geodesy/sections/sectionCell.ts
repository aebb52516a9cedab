import { crossing, halfway, tracedVertex, type TracedPoint } from './tracedPoint.js';
import type { Section, Side } from './types.js';

/** A section or a quarter of whatever depth: its four lines, ends included; N and S from west to east, E and W from south to north. */
export interface SectionCell {
  readonly lines: Readonly<Record<Side, readonly TracedPoint[]>>;
}

export type Quarter = 'NE' | 'NW' | 'SE' | 'SW';

const SIDES: readonly Side[] = ['N', 'S', 'E', 'W'];

/** The section as the outermost cell. */
export function wholeCell(section: Section): SectionCell {
  const lines = {} as Record<Side, TracedPoint[]>;
  for (const side of SIDES) lines[side] = section.lines[side].map((index) => tracedVertex(section.vertices, index));
  return { lines };
}

/**
 * The four quarters of a cell. Each line is cut at the vertex that the layer has for its middle (`middles`), else at its
 * midpoint; the straight lines between opposite middles meet in the common corner. Straight means the shortest line on
 * the ellipsoid: the lines of constant bearing that the law asks for run up to 0.15 ft from it in the middle of a mile.
 * Source: Bureau of Land Management, Manual of Surveying Instructions (2009), section 3-114 for the centre of a section;
 * its rules for quarter-quarter sections likewise (from memory).
 */
export function quartersOf(cell: SectionCell, middles: ReadonlySet<number>): Readonly<Record<Quarter, SectionCell>> {
  const half = {} as Record<Side, readonly [TracedPoint[], TracedPoint[]]>;
  for (const side of SIDES) half[side] = halves(cell.lines[side], middles);
  const middle = (side: Side): TracedPoint => half[side][1][0]!;
  const centre = crossing(middle('W'), middle('E'), middle('S'), middle('N'));
  const [toN, toS, toE, toW] = [[centre, middle('N')], [middle('S'), centre], [centre, middle('E')], [middle('W'), centre]];
  return {
    SW: { lines: { S: half.S[0], W: half.W[0], N: toW, E: toS } },
    SE: { lines: { S: half.S[1], E: half.E[0], N: toE, W: toS } },
    NW: { lines: { N: half.N[0], W: half.W[1], S: toW, E: toN } },
    NE: { lines: { N: half.N[1], E: half.E[1], S: toE, W: toN } },
  };
}

function halves(line: readonly TracedPoint[], middles: ReadonlySet<number>): [TracedPoint[], TracedPoint[]] {
  const at = line.findIndex((p, i) => i > 0 && i < line.length - 1 && middles.has(p.vertex));
  if (at > 0) return [line.slice(0, at + 1), line.slice(at)];
  const { point, after } = halfway(line);
  return [[...line.slice(0, after + 1), point], [point, ...line.slice(after + 1)]];
}
