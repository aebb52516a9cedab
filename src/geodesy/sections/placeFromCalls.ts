import { UserError } from '../../errors.js';
import { US_SURVEY_FOOT_M } from '../../units.js';
import { planeRing } from './aliquotPolygon.js';
import { callCovariance, toFrameMatrix } from './callCovariance.js';
import { lineDistance } from './lineDistance.js';
import { meetOffsets } from './meetOffsets.js';
import { partLines, WHOLE } from './partLines.js';
import { liesInRing } from './liesInRing.js';
import type { TracedPoint } from './tracedPoint.js';
import type { AliquotPart, CalledPlace, FootageCall, FootageCalls, PlanePoint, Section, Side } from './types.js';

export interface CallOptions {
  /** File and row of the record, for messages; the section's own where it is empty. */
  readonly where: string;
  /** Standard error of measuring a call on the ground: this, and this share of its length, added in squares. */
  readonly measureSdM: number;
  readonly measureSdShare: number;
  /** Standard error of a vertex of the section layer on each axis, independent from vertex to vertex. */
  readonly vertexSdM: number;
}

/**
 * Ten feet for finding line and well, and 1 in 500 for chaining and for the ground's height, which is left out (common
 * practice; the old limit of closure of a section was 1 in 452, from memory). Vertices as read off a map at 1:24,000:
 * 40 ft with 90 %, by the National Map Accuracy Standards; layers are better where corners were surveyed.
 */
export const CALL_DEFAULTS: CallOptions = Object.freeze({ where: '', measureSdM: 3, measureSdShare: 1 / 500, vertexSdM: 5.7 });

/** How far a place may lie outside its part by rounding: a call of 0 ft lies on the line. */
const ON_LINE_M = 1e-4;
const WORDS: Readonly<Record<Side, string>> = { N: 'north', S: 'south', E: 'east', W: 'west' };

/**
 * The place at two distances from two lines of a section, or of the part named. Each distance is measured on the ground,
 * perpendicular to the section's real line (to the piece of it that lies nearest, where it bends), not to a parallel of
 * latitude and not from a bounding box; the frame's scale has no part in it, and heights are left out (`groundPlane`).
 *
 * What holds of calls from opposite lines: with L the length of the measured line, from line to line through the place
 * and perpendicular to the line called from, d from one line and L − d from the other lead to the same place exactly
 * where the lines are parallel; where they converge by an angle δ the second falls short by (L − d)(1 − cos δ), 0.02 ft
 * in a mile for 0.15°.
 *
 * Throws UserError `position_invalid` for calls that are not one from the north or south and one from the east or west
 * line, or that lead out of the part; `polygon_invalid` for a line too crooked to measure from.
 */
export function placeFromCalls(section: Section, calls: FootageCalls, part: AliquotPart = WHOLE, options: Partial<CallOptions> = {}): CalledPlace {
  const settings = { ...CALL_DEFAULTS, ...options };
  const where = settings.where || section.where;
  checkCalls(section, calls, where);
  const lines = partLines(section, part);
  const ring = planeRing(lines);
  const middle: PlanePoint = [mean(ring, 0), mean(ring, 1)];
  const solved = meetOffsets(lines, calls, middle);
  if (!solved) {
    throw new UserError({
      code: 'polygon_invalid', where, found: `${wording(calls[0])} and ${wording(calls[1])} of ${nameOf(section, part)}, whose lines bend so that no one place fits`,
      wanted: 'lines that are nearly straight', advice: 'place this record otherwise',
    });
  }
  const { place, feet } = solved;
  if (!liesInRing(ring, place, ON_LINE_M)) {
    for (const call of calls) checkReach(call, { lines, ring, part, section, where });
    throw invalid(where, `${wording(calls[0])} and ${wording(calls[1])}, which lead out of ${nameOf(section, part)}`, 'calls that meet inside it');
  }
  const [x, y] = section.plane.toFrame(...place);
  const cov = callCovariance(section, { lines, calls, feet }, settings);
  const frame = toFrameMatrix(section.plane);
  return {
    x, y, ...cov,
    byVertex: cov.byVertex.map(({ index, jacobian }) => {
      const [vx, vy] = section.frameVertices[index]!;
      return { x: vx, y: vy, jacobian: frame.turned(jacobian) };
    }),
  };
}

function checkCalls(section: Section, calls: FootageCalls, where: string): void {
  const [a, b] = calls;
  const upright = (side: Side): boolean => side === 'N' || side === 'S';
  if (upright(a.from) === upright(b.from)) {
    throw invalid(where, `calls from the ${WORDS[a.from]} and the ${WORDS[b.from]} line`, 'one from the north or south line and one from the east or west line');
  }
  for (const { distanceM, resolutionM, from } of calls) {
    if (!(distanceM >= 0) || distanceM === Infinity) throw invalid(where, `a distance of ${distanceM} m from the ${WORDS[from]} line`, 'a distance of 0 or more');
    if (!(resolutionM >= 0) || resolutionM === Infinity) throw new Error(`placeFromCalls: a resolution of ${resolutionM} m`);
    if (section.irregular.includes(from)) {
      throw new UserError({
        code: 'polygon_invalid', where, found: `a call from the ${WORDS[from]} line of ${section.name}, which is meandered or broken`,
        wanted: 'a line that is nearly straight', advice: 'place this record otherwise',
      });
    }
  }
}

interface Ground {
  readonly lines: Readonly<Record<Side, readonly TracedPoint[]>>;
  readonly ring: readonly PlanePoint[];
  readonly part: AliquotPart;
  readonly section: Section;
  readonly where: string;
}

function checkReach(call: FootageCall, { lines, ring, part, section, where }: Ground): void {
  const reach = Math.max(...ring.map((p) => lineDistance(lines[call.from], call.from, p).distanceM));
  if (call.distanceM <= reach + ON_LINE_M) return;
  throw invalid(where, `${wording(call)} of ${nameOf(section, part)}`, `at most ${feetOf(reach)}, as far as it reaches from there`);
}

function mean(ring: readonly PlanePoint[], axis: 0 | 1): number {
  return ring.reduce((sum, p) => sum + p[axis], 0) / ring.length;
}

function nameOf(section: Section, part: AliquotPart): string {
  return part.steps.length === 0 ? section.name : `the ${part.steps.toReversed().join(' of the ')} of ${section.name}`;
}

function wording(call: FootageCall): string {
  return `${feetOf(call.distanceM)} from the ${WORDS[call.from]} line`;
}

function feetOf(metres: number): string {
  return `${Math.round(metres / US_SURVEY_FOOT_M).toLocaleString('en-US')} ft`;
}

function invalid(where: string, found: string, wanted: string): UserError {
  return new UserError({ code: 'position_invalid', where, found, wanted });
}
