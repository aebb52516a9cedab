import type { Geometry } from 'geojson';
import type { Crs } from '../types.js';
import { groundPlane } from './groundPlane.js';
import { outerRing } from './outerRing.js';
import { sectionCorners } from './sectionCorners.js';
import type { PlanePoint, Section, Side } from './types.js';

export interface SectionOptions {
  /** File and feature, for messages. */
  readonly where: string;
  readonly name: string;
  /**
   * How far from the middle of a line, as a share of its length, a vertex still is its quarter corner (of half a line,
   * its sixteenth corner). Township surveys put the excess of the closing tiers into the last quarter mile, so that these
   * corners lie off the middle by half of it.
   */
  readonly middleToleranceShare: number;
}

export const SECTION_DEFAULTS: SectionOptions = Object.freeze({ where: 'section layer', name: 'section', middleToleranceShare: 0.04 });

/** A line bent further off its chord than this share of its length is meandered or broken: 158 ft in a mile, where real lines bend by some tens of feet. */
const MAX_BEND_SHARE = 0.03;
/** A line longer than its chord by this share winds: one that bends by all of the former is longer by 0.002, one with an offset of a chain by 0.013. */
const MAX_DETOUR_SHARE = 0.02;
const SIDES: readonly Side[] = ['N', 'S', 'E', 'W'];

/**
 * A section from its polygon in frame metres of a projected `crs`: its corners, lines, and the quarter and sixteenth
 * corners where the layer has a vertex for them. Throws UserError `polygon_invalid` for a polygon with holes or in
 * pieces, or without four corners. A line that is too crooked is listed as irregular; what needs it throws when used.
 */
export function sectionGeometry(geometry: Geometry | null, crs: Crs, options: Partial<SectionOptions> = {}): Section {
  const { where, name, middleToleranceShare } = { ...SECTION_DEFAULTS, ...options };
  if (crs.kind !== 'projected') throw new Error(`sectionGeometry: ${crs.code} is not a projected system`);
  const frame = outerRing(geometry, where);
  const mean = (axis: 0 | 1): number => frame.reduce((sum, p) => sum + p[axis] / frame.length, 0);
  const plane = groundPlane(crs, mean(0), mean(1));
  const vertices = frame.map(([x, y]): PlanePoint => plane.toPlane(x, y));
  const corner = sectionCorners(vertices, where);
  const path = (from: number, to: number): number[] => {
    const indices = [from];
    for (let i = from; i !== to; ) indices.push((i = (i + 1) % vertices.length));
    return indices;
  };
  const lines: Record<Side, readonly number[]> = {
    S: path(corner.SW, corner.SE),
    E: path(corner.SE, corner.NE),
    N: path(corner.NE, corner.NW).toReversed(),
    W: path(corner.NW, corner.SW).toReversed(),
  };
  const notes: string[] = [];
  const quarters = {} as Record<Side, number | null>;
  const sixteenths = {} as Record<Side, [number | null, number | null]>;
  for (const side of SIDES) {
    const line = lines[side];
    const quarter = middle(vertices, line, middleToleranceShare);
    quarters[side] = quarter.index;
    if (quarter.rivals > 0) notes.push(`${name}: ${quarter.rivals + 1} vertices could be the quarter corner of the ${side} line; the one nearest the middle is taken`);
    const at = quarter.index === null ? -1 : line.indexOf(quarter.index);
    // Without its quarter corner nobody can tell a sixteenth corner from any other vertex.
    sixteenths[side] = at < 0 ? [null, null] : [middle(vertices, line.slice(0, at + 1), middleToleranceShare).index, middle(vertices, line.slice(at), middleToleranceShare).index];
  }
  const irregular = SIDES.filter((side) => isIrregular(vertices, lines[side]));
  for (const side of irregular) notes.push(`${name}: its ${side} line is too crooked to measure from`);
  return { where, name, plane, vertices, frameVertices: frame, lines, quarters, sixteenths, irregular, notes };
}

/** The vertex between the ends of a line that lies nearest its middle by length, within the tolerance. */
function middle(vertices: readonly PlanePoint[], line: readonly number[], share: number): { index: number | null; rivals: number } {
  let along = 0;
  const stations = line.map((v, i) => {
    const before = vertices[line[Math.max(0, i - 1)]!]!;
    return (along += Math.hypot(vertices[v]![0] - before[0], vertices[v]![1] - before[1]));
  });
  const near: Array<[off: number, index: number]> = [];
  for (let i = 1; i < line.length - 1; i++) {
    const off = Math.abs(stations[i]! - along / 2);
    if (off <= share * along) near.push([off, line[i]!]);
  }
  near.sort((a, b) => a[0] - b[0]);
  return { index: near[0]?.[1] ?? null, rivals: Math.max(0, near.length - 1) };
}

function isIrregular(vertices: readonly PlanePoint[], line: readonly number[]): boolean {
  const [ax, ay] = vertices[line[0]!]!;
  const [bx, by] = vertices[line.at(-1)!]!;
  const length = Math.hypot(bx - ax, by - ay);
  let path = 0;
  let [px, py] = [ax, ay];
  for (const index of line) {
    const [x, y] = vertices[index]!;
    path += Math.hypot(x - px, y - py);
    [px, py] = [x, y];
    if (Math.abs((x - ax) * (by - ay) - (y - ay) * (bx - ax)) > MAX_BEND_SHARE * length * length) return true;
  }
  return path > (1 + MAX_DETOUR_SHARE) * length;
}
