import type { TracedPoint } from './tracedPoint.js';
import type { PlanePoint, Side } from './types.js';

export interface LineDistance {
  /** Metres from the line, positive inwards. */
  readonly distanceM: number;
  /** Unit vector in which it grows: perpendicular to the piece of the line. */
  readonly normal: PlanePoint;
  /** Piece from point `piece` to the next, and the foot's place on it: 0 at its start, 1 at its end, beyond them on the line produced. */
  readonly piece: number;
  readonly along: number;
}

/** To the left of a line lies the inside for S and E (west to east, south to north), to the right for N and W. */
const INWARDS: Readonly<Record<Side, 1 | -1>> = { S: 1, W: -1, N: -1, E: 1 };
/** Nearer than this to a bend the perpendicular of the piece stands for the direction to the bend. */
const AT_BEND_M = 1e-6;
/** A piece at the end of a line is produced beyond the corner only if it runs along the line (cosine): where a corner is drawn as two vertices, the piece between them does not. */
const ALONG = 0.98;

/**
 * Perpendicular distance of a place from a bent line: from the piece that lies nearest, the first and the last produced
 * beyond their corners if they run along the line; where a bend points inwards and no perpendicular meets the line, from the bend.
 */
export function lineDistance(line: readonly TracedPoint[], side: Side, [east, north]: PlanePoint): LineDistance {
  const sign = INWARDS[side];
  const [first, last] = [line[0]!, line.at(-1)!];
  const [ce, cn] = [last.east - first.east, last.north - first.north];
  const chord = Math.sqrt(ce * ce + cn * cn);
  let best: LineDistance | null = null;
  for (let i = 0; i < line.length - 1; i++) {
    const a = line[i]!;
    const b = line[i + 1]!;
    const length = Math.sqrt((b.east - a.east) ** 2 + (b.north - a.north) ** 2);
    const [ux, uy] = [(b.east - a.east) / length, (b.north - a.north) / length];
    const [dx, dy] = [east - a.east, north - a.north];
    const across = ux * dy - uy * dx;
    const station = ux * dx + uy * dy;
    const straight = ux * ce + uy * cn >= ALONG * chord;
    const at = Math.min(straight && i === line.length - 2 ? Infinity : length, Math.max(straight && i === 0 ? -Infinity : 0, station));
    const beyond = station - at;
    const reach = beyond === 0 ? Math.abs(across) : Math.hypot(across, beyond);
    if (best && reach >= Math.abs(best.distanceM)) continue;
    const inside = across >= 0 === sign > 0 ? 1 : -1;
    const normal: PlanePoint = beyond === 0 || reach < AT_BEND_M
      ? [-uy * sign, ux * sign]
      : [((-uy * across + ux * beyond) / reach) * inside, ((ux * across + uy * beyond) / reach) * inside];
    best = { distanceM: inside * reach, normal, piece: i, along: at / length };
  }
  return best!;
}
