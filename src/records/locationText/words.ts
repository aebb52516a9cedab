import type { Side } from '../../geodesy/sections/types.js';

const words = (text: string): ReadonlySet<string> => new Set(text.split(' '));

export const OF = words('OF');
export const FROM = words('FROM FR FRM');
export const THE = words('THE SAID');
export const AND = words('AND');
export const LAT = words('LAT LATITUDE');
export const LON = words('LON LONG LONGITUDE LNG');
export const LINE = words('LINE LINES LN L');
export const SECTION = words('SEC SECTION SECT');
export const TOWNSHIP = words('T TWP TOWNSHIP TWSP TP');
export const RANGE = words('R RGE RANGE RNG RG');
export const CENTRE = words('C CENTER CENTRE CTR CEN CENT');
export const QUARTER = words('QUARTER QTR Q QUAR');
export const HALF = words('HALF');
export const CORNER = words('COR CORNER CRN CRNR C');
export const LOT = words('LOT LOTS GOVT GOVERNMENT');
export const UNITED = words('US U.S.');
/** Words that carry nothing: what follows says it. */
export const FILLERS = words('LOCATION LOC LOCATED LOCATE SURFACE SHL WELL AT IN IS BEING SITUATED LYING THE OF AND SAID FOOTAGE FOOTAGES SPOT CALLS COORDINATES COORDS COORD POSITION');

const SIDES: Readonly<Record<string, Side>> = {
  N: 'N', NORTH: 'N', NO: 'N', NORTHERLY: 'N', S: 'S', SOUTH: 'S', SO: 'S', SOUTHERLY: 'S',
  E: 'E', EAST: 'E', EASTERLY: 'E', W: 'W', WEST: 'W', WESTERLY: 'W',
};

/** The side that a word names: `N`, `NORTH`; null for any other word. */
export function sideOf(word: string): Side | null {
  return Object.hasOwn(SIDES, word) ? SIDES[word]! : null;
}

export type QuarterName = 'NE' | 'NW' | 'SE' | 'SW';
const QUARTERS: Readonly<Record<string, QuarterName>> = {
  NE: 'NE', NORTHEAST: 'NE', NW: 'NW', NORTHWEST: 'NW', SE: 'SE', SOUTHEAST: 'SE', SW: 'SW', SOUTHWEST: 'SW',
};

/** The quarter that a word names, else null. */
export function quarterOf(word: string): QuarterName | null {
  return Object.hasOwn(QUARTERS, word) ? QUARTERS[word]! : null;
}

export const isNorthSouth = (side: Side): boolean => side === 'N' || side === 'S';
