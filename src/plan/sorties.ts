import type { OpenWays } from './openWays.js';
import type { PlanLine } from './types.js';

/** A line in the order and the direction of walking. */
export type Walked = Pick<PlanLine, 'lineNo' | 'kind' | 'x0' | 'y0' | 'x1' | 'y1'>;

export interface Sorties {
  readonly lines: readonly PlanLine[];
  /** Length of the lines, and of the ways between the lines of an outing, metres. */
  readonly lineLengthM: number;
  readonly deadLengthM: number;
  readonly count: number;
  /** Ways between lines that go round something, and ways that leave the open ground since nothing else leads there. */
  readonly round: number;
  readonly outside: number;
}

/**
 * Splits a walk into outings of at most `sortieLengthM`, lines and the ways between them counted; a line longer than that
 * is an outing of its own. The way to the first line of an outing is not counted: nobody knows where the walker comes from.
 */
export function splitSorties(walked: readonly Walked[], ways: OpenWays, sortieLengthM: number): Sorties {
  const lines: PlanLine[] = [];
  let [sortie, used, lineLengthM, deadLengthM, round, outside] = [1, 0, 0, 0, 0, 0];
  walked.forEach((line, i) => {
    const lengthM = Math.hypot(line.x1 - line.x0, line.y1 - line.y0);
    const before = walked[i - 1];
    if (before) {
      const way = ways.way(before.x1, before.y1, line.x0, line.y0);
      if (used + way.lengthM + lengthM > sortieLengthM) {
        sortie++;
        used = 0;
      } else {
        used += way.lengthM;
        deadLengthM += way.lengthM;
        if (way.kind === 'round') round++;
        if (way.kind === 'outside') outside++;
      }
    }
    used += lengthM;
    lineLengthM += lengthM;
    lines.push({ ...line, visit: i + 1, sortie, lengthM, azimDeg: azimuthOf(line) });
  });
  return { lines, lineLengthM, deadLengthM, count: lines.length === 0 ? 0 : sortie, round, outside };
}

/** Clockwise from grid north, in [0, 360). */
function azimuthOf({ x0, y0, x1, y1 }: Walked): number {
  return ((Math.atan2(x1 - x0, y1 - y0) * 180) / Math.PI + 360) % 360;
}
