import type { Fault } from './rawRecord.js';
import { metres } from './sourceError.js';
import type { Outcome } from './solveRecord.js';
import type { Decision, WellRecord } from './types.js';

/** The line of the log that tells how a row became a place, or why it did not. */
export function decisionOf(about: Pick<Decision, 'recordId' | 'source' | 'row'>, { outcome, fault, record }: {
  readonly outcome: Outcome; readonly fault: Fault | null; readonly record: WellRecord | null;
}): Decision {
  const repairs = outcome.repairs.map(({ applied, what, evidence }) => `${applied ? 'repaired' : 'repair proposed'}: ${what} (${evidence})`);
  return {
    ...about,
    readAs: outcome.readAs || (fault ? `${fault.column} "${fault.value}"` : ''),
    movedBy: [...(record ? [record.shift] : []), ...repairs].join('; '),
    restsOn: record?.basis ?? '',
    sureTo: record ? sureTo(record, outcome) : `not placed: ${fault!.problem}; ${fault!.advice}`,
  };
}

/** The drawn ellipse of a place that is no Gaussian holds more than 95 %; said from this on. */
const SAID_FROM_MASS = 0.955;

function sureTo({ semiMajM, semiMinM, azimDeg, density, excess }: WellRecord, { disagreements }: Outcome): string {
  const blunders = density.parts.reduce((sum, part) => sum + (part.role === 'blunder' ? part.weight : 0), 0);
  const elsewhere = blunders > 0 ? `, but for a chance of ${Number((blunders * 100).toFixed(1))} % that it lies elsewhere` : '';
  const holds = excess && excess.massHeld >= SAID_FROM_MASS ? ` (the ellipse round it holds ${Number((excess.massHeld * 100).toFixed(1))} %)` : '';
  return [
    `95 % within ${metres(semiMajM)} by ${metres(semiMinM)}, azimuth ${azimDeg.toFixed(0)}°${holds}${elsewhere}`,
    ...disagreements.map(({ other, distanceM }) => `disagrees with its ${other}, ${metres(distanceM)} away`),
  ].join('; ');
}
