import { UserError } from '../../errors.js';
import type { CornerName, PlanePoint } from './types.js';

/** How far along the ring the turn at a vertex is seen, as a share of the ring: 600 ft of a mile's section, less than the 1,320 ft between sixteenth corners. */
const ARM_SHARE = 0.03;
/** Turns that a section's corner may have: real ones are within a few degrees of 90; a corner cut off by water turns by about 45 twice. */
const MIN_TURN_DEG = 60;
const MAX_TURN_DEG = 120;
/** Beyond this from west-east nobody can say which line is the north one. */
const MAX_ROTATION_DEG = 40;

const DIRECTIONS: ReadonlyArray<readonly [CornerName, number, number]> = [['SW', -1, -1], ['SE', 1, -1], ['NE', 1, 1], ['NW', -1, 1]];
const WORDS: Readonly<Record<CornerName, string>> = { SW: 'south-west', SE: 'south-east', NE: 'north-east', NW: 'north-west' };

/**
 * Indices of the four corners in a counter-clockwise ring in plane metres. A corner is a vertex where the ring turns by
 * 60 to 120° to the left, seen over some hundred feet, so that quarter and sixteenth corners on a line that is nearly
 * straight do not count; of these, the one furthest out in the corner's direction. No bounding box has a part in it: on a
 * section that leans, the corners of its box lie on none of its lines.
 * Throws UserError `polygon_invalid` where the four are not there.
 */
export function sectionCorners(ring: readonly PlanePoint[], where: string): Record<CornerName, number> {
  const turns = turnsDeg(ring);
  const found: Partial<Record<CornerName, number>> = {};
  for (const [name, ue, un] of DIRECTIONS) {
    let best = -1;
    let reach = -Infinity;
    for (let i = 0; i < ring.length; i++) {
      if (turns[i]! < MIN_TURN_DEG || turns[i]! > MAX_TURN_DEG) continue;
      const out = ring[i]![0] * ue + ring[i]![1] * un;
      if (out > reach) [best, reach] = [i, out];
    }
    if (best < 0) throw invalid(where, `no corner among ${ring.length} vertices`);
    found[name] = best;
  }
  const corners = found as Record<CornerName, number>;
  for (const [name, , ] of DIRECTIONS) {
    for (const [other] of DIRECTIONS) {
      if (name < other && corners[name] === corners[other]) throw invalid(where, `one vertex that would be the ${WORDS[name]} and the ${WORDS[other]} corner`);
    }
  }
  checkOrder(ring, corners, where);
  return corners;
}

/** Left turn at each vertex, degrees, between the chords to the points of the ring one arm before and one arm behind. */
function turnsDeg(ring: readonly PlanePoint[]): number[] {
  const n = ring.length;
  const lengths = ring.map((p, i) => Math.hypot(ring[(i + 1) % n]![0] - p[0], ring[(i + 1) % n]![1] - p[1]));
  const arm = ARM_SHARE * lengths.reduce((a, b) => a + b, 0);
  const along = (start: number, step: 1 | -1): PlanePoint => {
    let left = arm;
    let i = start;
    for (;;) {
      const j = (i + step + n) % n;
      const length = lengths[step === 1 ? i : j]!;
      const [a, b] = [ring[i]!, ring[j]!];
      if (length >= left) return [a[0] + ((b[0] - a[0]) * left) / length, a[1] + ((b[1] - a[1]) * left) / length];
      left -= length;
      i = j;
    }
  };
  return ring.map((p, i) => {
    const back = along(i, -1);
    const front = along(i, 1);
    const [ax, ay, bx, by] = [p[0] - back[0], p[1] - back[1], front[0] - p[0], front[1] - p[1]];
    return (Math.atan2(ax * by - ay * bx, ax * bx + ay * by) * 180) / Math.PI;
  });
}

function checkOrder(ring: readonly PlanePoint[], corners: Record<CornerName, number>, where: string): void {
  const n = ring.length;
  const [se, ne, nw] = (['SE', 'NE', 'NW'] as const).map((name) => (corners[name] - corners.SW + n) % n) as [number, number, number];
  if (!(se < ne && ne < nw)) throw invalid(where, 'corners that do not follow one another around the polygon');
  const [a, b] = [ring[corners.NW]!, ring[corners.NE]!];
  const tiltDeg = (Math.atan2(b[1] - a[1], b[0] - a[0]) * 180) / Math.PI;
  if (Math.abs(tiltDeg) > MAX_ROTATION_DEG) throw invalid(where, `a north line ${Math.abs(tiltDeg).toFixed(0)}° off west-east`);
}

function invalid(where: string, found: string): UserError {
  return new UserError({
    code: 'polygon_invalid', where, found,
    wanted: `a section with four corners that turn by ${MIN_TURN_DEG} to ${MAX_TURN_DEG}° and lie roughly north-east, north-west, south-east and south-west`,
    advice: 'a fractional section has to be placed by its lots or as an area',
  });
}
