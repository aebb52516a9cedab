import type { AliquotStep, FootageCall, FootageCalls, Side } from '../geodesy/sections/types.js';
import type { CornerTie } from './locationText/types.js';

/** Calls that lead to the same place as a tie, and the part of what the tie is of whose lines they are measured from. */
export interface TieAsCalls {
  readonly steps: readonly AliquotStep[];
  readonly calls: FootageCalls;
}

const OPPOSITE: Readonly<Record<Side, Side>> = { N: 'S', S: 'N', E: 'W', W: 'E' };

/**
 * Distances from a corner as calls: 40 rods north and 20 rods east of the south-west corner are 40 rods from the south and
 * 20 rods from the west line. From a quarter corner or the centre the lines are those of the quarter that the way leads
 * into. A distance that is not given is 0, on the line itself.
 */
export function tieAsCalls({ corner, offsets }: Pick<CornerTie, 'corner' | 'offsets'>): TieAsCalls {
  const upright = offsets.find(({ toward }) => toward === 'N' || toward === 'S');
  const across = offsets.find(({ toward }) => toward === 'E' || toward === 'W');
  const named = (corner === 'C' ? '' : corner.replace('4', '')) as '' | Side | 'NE' | 'NW' | 'SE' | 'SW';
  // Where the corner itself does not say on which line it lies, the way does; without one either quarter has the place on its line.
  const northSouth: Side = /^[NS]/.test(named) ? (named[0] as Side) : OPPOSITE[(upright?.toward ?? 'N') as Side];
  const eastWest: Side = /[EW]$/.test(named) ? (named.at(-1) as Side) : OPPOSITE[(across?.toward ?? 'E') as Side];
  const whole = named.length === 2;
  const quarter = `${/^[NS]/.test(named) ? northSouth : OPPOSITE[northSouth]}${/[EW]$/.test(named) ? eastWest : OPPOSITE[eastWest]}` as AliquotStep;
  return { steps: whole ? [] : [quarter], calls: [callOf(upright, northSouth), callOf(across, eastWest)] };
}

function callOf(offset: CornerTie['offsets'][number] | undefined, from: Side): FootageCall {
  return { distanceM: offset?.distanceM ?? 0, resolutionM: offset?.resolutionM ?? 0, from };
}
