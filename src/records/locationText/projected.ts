import type { Cursor } from './cursor.js';
import { groupedNumber } from './cursor.js';
import { zoneByNumber } from './statePlaneZones.js';
import { stateZoneAhead } from './stateZoneName.js';
import type { Token } from './tokens.js';
import type { ProjectedStatement, ProjectedSystem, ProjectedUnit } from './types.js';
import { AND, sideOf, UNITED } from './words.js';

const words = (text: string): ReadonlySet<string> => new Set(text.split(' '));
const EASTING = words('EASTING EAST E X');
const NORTHING = words('NORTHING NORTH N Y');
/** Words that only a projected coordinate has. */
const PLAIN_LABELS = words('EASTING NORTHING X Y');
const STATE_PLANE = words('SPC SPCS SPCE STATEPLANE');
const METRE = words('M METER METERS METRE METRES');
const FOOT = words('FT FEET FOOT');
/** Numbers below this, beside a side, are degrees; no projected coordinate in use is as small on both axes. */
const SMALLEST_COORDINATE = 1000;
/** Larger than any angle with its digits run together that stands with E or N in the United States, in metres or feet. */
const PLAINLY_PROJECTED = 100_000;
/** No State Plane zone reaches as far, in feet; false northings in use are a few million metres. */
const LARGEST_COORDINATE = 100_000_000;
/** A zone of UTM is 6° wide: its eastings lie well within these, metres; so do the northings of its northern half. */
const UTM_EASTING_M = [100_000, 1_000_000] as const;
const UTM_NORTHING_M = [0, 10_000_000] as const;
const UTM_ZONES = 60;

interface Coordinate {
  readonly value: number;
  readonly resolution: number;
  readonly unit: ProjectedUnit | null;
  readonly at: Token;
}

/** What the text has said of projected coordinates so far. */
export interface ProjectedDraft {
  system: ProjectedSystem | null;
  unit: ProjectedUnit | null;
  easting: Coordinate | null;
  northing: Coordinate | null;
  readonly first: Token;
}

export function emptyProjected(first: Token): ProjectedDraft {
  return { system: null, unit: null, easting: null, northing: null, first };
}

/** Whether something of a projected position begins here: its system, its unit, or a coordinate. */
export function startsProjected(cursor: Cursor, draft: ProjectedDraft | null): boolean {
  const token = cursor.peek();
  if (token.kind === 'word') {
    if (token.text === 'UTM' || STATE_PLANE.has(token.text) || (token.text === 'STATE' && cursor.peek(1).text === 'PLANE')) return true;
    if (token.text === 'ZONE' && (draft !== null || saysUtm(cursor))) return true;
    if (PLAIN_LABELS.has(token.text) && labelled(cursor)) return true;
    if (draft !== null && unitAhead(cursor, 0) !== null) return true;
    if (stateZoneAhead(cursor, false) !== null) return true;
    return (EASTING.has(token.text) || NORTHING.has(token.text)) && labelled(cursor) && isCoordinate(cursor, numberAfterLabel(cursor), draft);
  }
  if (token.kind !== 'number') return false;
  if (sideBehind(cursor) !== null) return isCoordinate(cursor, token, draft);
  return (draft === null || (draft.easting === null && draft.northing === null)) && isLarge(token, PLAINLY_PROJECTED) && saysUtm(cursor);
}

const saysUtm = (cursor: Cursor): boolean => cursor.tokens.some((token) => token.kind === 'word' && token.text === 'UTM');

/** Reads what begins here into the draft. */
export function readProjected(cursor: Cursor, draft: ProjectedDraft): void {
  const token = cursor.peek();
  if (token.kind === 'number') return sideBehind(cursor) === null ? readBarePair(cursor, draft) : readNumberFirst(cursor, draft);
  if (token.text === 'UTM') return readUtm(cursor, draft);
  if (STATE_PLANE.has(token.text) || token.text === 'STATE') return readStatePlane(cursor, draft);
  if (token.text === 'ZONE') return readZone(cursor, draft);
  if (labelled(cursor) && (EASTING.has(token.text) || NORTHING.has(token.text))) return readLabelled(cursor, draft);
  const zone = stateZoneAhead(cursor, false);
  if (zone !== null) {
    cursor.at += zone.count;
    return setSystem(cursor, draft, zone.system, token);
  }
  const unit = unitAhead(cursor, 0)!;
  cursor.at += unit.count;
  if (draft.unit !== null && draft.unit !== unit.unit) throw cursor.refuse('one unit', { at: token });
  draft.unit = unit.unit;
}

/** The statement that the text makes; refused where it is not whole. */
export function finishProjected(cursor: Cursor, draft: ProjectedDraft): Omit<ProjectedStatement, 'datum'> {
  const { system, easting, northing } = draft;
  if (system === null && saysUtm(cursor)) throw cursor.refuse('the zone of the UTM coordinates', { at: draft.first });
  if (easting === null || northing === null) {
    throw cursor.refuse(easting === null && northing === null ? 'an easting and a northing beside their system' : `${easting === null ? 'an easting' : 'a northing'} too`, { at: draft.first });
  }
  const units = new Set([draft.unit, easting.unit, northing.unit].filter((unit) => unit !== null));
  if (units.size > 1) throw cursor.refuse('one unit for easting and northing', { at: draft.first });
  const unit = [...units][0] ?? (system?.kind === 'UTM' ? 'metre' : null);
  if (system?.kind === 'UTM' && unit === 'metre') {
    within(cursor, easting, UTM_EASTING_M, 'easting');
    within(cursor, northing, UTM_NORTHING_M, 'northing');
  }
  return {
    kind: 'projected', system, unit, easting: easting.value, northing: northing.value,
    eastingResolution: easting.resolution, northingResolution: northing.resolution,
  };
}

function within(cursor: Cursor, { value, at }: Coordinate, [least, most]: readonly [number, number], name: string): void {
  if (!(value >= least && value < most)) throw cursor.refuse(`a UTM ${name} from ${least} to ${most} m`, { at, advice: 'easting and northing may be in each other\'s place' });
}

function numberAfterLabel(cursor: Cursor): Token {
  let at = 1;
  if (cursor.isMark(':', at) || cursor.isMark('=', at)) at++;
  if (cursor.isMark('-', at)) at++;
  return cursor.peek(at);
}

const labelled = (cursor: Cursor): boolean => numberAfterLabel(cursor).kind === 'number';

/** The side behind a number and perhaps its unit: `543210 E`, `543210 m E`, `543210mE`. */
function sideBehind(cursor: Cursor): { axis: 'easting' | 'northing'; unit: ProjectedUnit | null; count: number } | null {
  const joined = cursor.peek(1);
  if (joined.kind === 'word' && (joined.text === 'ME' || joined.text === 'MN')) return { axis: joined.text === 'ME' ? 'easting' : 'northing', unit: 'metre', count: 2 };
  const unit = unitAhead(cursor, 1);
  const at = 1 + (unit?.count ?? 0);
  const word = cursor.peek(at);
  if (word.kind !== 'word' || word.text === 'X' || word.text === 'Y') return null;
  const axis = EASTING.has(word.text) ? 'easting' : NORTHING.has(word.text) ? 'northing' : null;
  return axis === null ? null : { axis, unit: unit?.unit ?? null, count: at + 1 };
}

function isLarge(token: Token, least: number): boolean {
  return token.kind === 'number' && (groupedNumber(token)?.value ?? 0) >= least;
}

/**
 * Whether a number beside E or N is a projected coordinate. Where the text names a system or an easting it is one from a
 * thousand on; elsewhere only beside a number that no angle can be, and with no W or S beside another number.
 */
function isCoordinate(cursor: Cursor, token: Token, draft: ProjectedDraft | null): boolean {
  if (!isLarge(token, SMALLEST_COORDINATE)) return false;
  if (draft !== null) return true;
  let large = false;
  for (let i = 0; i < cursor.tokens.length; i++) {
    const each = cursor.tokens[i]!;
    if (each.kind === 'word') {
      if (each.text === 'UTM' || STATE_PLANE.has(each.text) || PLAIN_LABELS.has(each.text) || (each.text === 'STATE' && cursor.tokens[i + 1]?.text === 'PLANE')) return true;
      const side = sideOf(each.text);
      if ((side === 'W' || side === 'S') && (isLarge(cursor.tokens[i - 1] ?? each, SMALLEST_COORDINATE) || isLarge(cursor.tokens[i + 1] ?? each, SMALLEST_COORDINATE))) return false;
    } else if (isLarge(each, PLAINLY_PROJECTED)) {
      large = true;
      // A leading zero is a degree's, not an easting's.
      if (each.kind === 'number' && each.text.startsWith('0')) return false;
    }
  }
  return large;
}

function unitAhead(cursor: Cursor, ahead: number): { unit: ProjectedUnit; count: number } | null {
  const open = cursor.isMark('(', ahead) ? 1 : 0;
  const found = bareUnitAhead(cursor, ahead + open);
  if (found === null || (open === 1 && !cursor.isMark(')', ahead + open + found.count))) return null;
  return { unit: found.unit, count: found.count + 2 * open };
}

function bareUnitAhead(cursor: Cursor, ahead: number): { unit: ProjectedUnit; count: number } | null {
  const token = cursor.peek(ahead);
  if (token.kind === 'mark') return token.text === "'" ? { unit: 'foot', count: 1 } : null;
  if (token.kind !== 'word') return null;
  if (METRE.has(token.text)) return { unit: 'metre', count: 1 };
  if (token.text === 'FTUS' || token.text === 'USFT' || token.text === 'SFT') return { unit: 'US survey foot', count: 1 };
  if (token.text === 'IFT') return { unit: 'international foot', count: 1 };
  const next = (i: number): string => cursor.peek(ahead + i).text;
  if (FOOT.has(token.text)) return next(1) === 'US' ? { unit: 'US survey foot', count: 2 } : { unit: 'foot', count: 1 };
  if (UNITED.has(token.text)) return FOOT.has(next(1)) ? { unit: 'US survey foot', count: 2 } : next(1) === 'SURVEY' && FOOT.has(next(2)) ? { unit: 'US survey foot', count: 3 } : null;
  if (token.text === 'SURVEY' && FOOT.has(next(1))) return { unit: 'US survey foot', count: 2 };
  if ((token.text === 'INTERNATIONAL' || token.text === 'INTL' || token.text === 'INT') && FOOT.has(next(1))) return { unit: 'international foot', count: 2 };
  return null;
}

function readLabelled(cursor: Cursor, draft: ProjectedDraft): void {
  const label = cursor.next();
  if (!cursor.takeMark(':')) cursor.takeMark('=');
  setCoordinate(cursor, draft, EASTING.has(label.text) ? 'easting' : 'northing', true);
}

function readNumberFirst(cursor: Cursor, draft: ProjectedDraft): void {
  const { axis, unit } = sideBehind(cursor)!;
  setCoordinate(cursor, draft, axis, false, unit);
  // The side; a joined "mE" holds its unit too.
  cursor.next();
}

/** Two bare numbers of a UTM zone: the easting has at most six figures before the point, a northing in the United States seven. */
function readBarePair(cursor: Cursor, draft: ProjectedDraft): void {
  const first = cursor.peek();
  const behind = cursor.isMark(',', 1) || cursor.isMark('/', 1) ? 2 : 1;
  const [a, b] = [isLarge(first, UTM_EASTING_M[1]), isLarge(cursor.peek(behind), UTM_EASTING_M[1])];
  if (!isLarge(cursor.peek(behind), PLAINLY_PROJECTED) || a === b) throw cursor.refuse('an easting and a northing that can be told apart', { at: first, advice: 'write E and N beside them' });
  setCoordinate(cursor, draft, a ? 'northing' : 'easting', true);
  cursor.takeMark('/');
  setCoordinate(cursor, draft, a ? 'easting' : 'northing', true);
}

function setCoordinate(cursor: Cursor, draft: ProjectedDraft, axis: 'easting' | 'northing', takesUnit: boolean, unitGiven: ProjectedUnit | null = null): void {
  const negative = cursor.takeMark('-');
  const token = cursor.next();
  if (token.kind !== 'number') throw cursor.refuse(`a number for the ${axis}`, { at: token });
  const number = groupedNumber(token);
  if (number === null) throw cursor.refuse('a coordinate whose comma groups three digits', { at: token, advice: 'write decimals behind a point' });
  if (number.value > LARGEST_COORDINATE) throw cursor.refuse(`a coordinate of at most ${LARGEST_COORDINATE}`, { at: token });
  if (draft[axis] !== null) throw cursor.refuse(`one ${axis}`, { at: token });
  const unit = unitAhead(cursor, 0);
  if (unit !== null) cursor.at += unit.count;
  const taken = takesUnit ? unit?.unit ?? null : unitGiven;
  draft[axis] = { value: negative ? -number.value : number.value, resolution: number.resolution, unit: taken, at: token };
  cursor.takeMark(',');
  cursor.takeWord(AND);
}

function setSystem(cursor: Cursor, draft: ProjectedDraft, system: ProjectedSystem, at: Token): void {
  if (draft.system !== null && (draft.system.kind !== system.kind || draft.system.zone !== system.zone)) throw cursor.refuse('one projected system', { at });
  draft.system = system;
}

/** `UTM zone 17`, `UTM 17N`, `UTM-17`, `17 T` with a band; zones south of the equator, and S that may be a band, are refused. */
function readUtm(cursor: Cursor, draft: ProjectedDraft): void {
  const first = cursor.next();
  if (first.text === 'UTM') {
    if (!cursor.takeMark('-')) cursor.takeMark(',');
    const zoned = cursor.peek().text === 'ZONE' || cursor.peek().text === 'Z';
    // UTM NAD83 Zone 17: the zone stands elsewhere.
    if (!zoned && (!cursor.isNumber() || cursor.peek().text.length > 2)) return;
    if (zoned) cursor.next();
  }
  if (!cursor.takeMark('-')) cursor.takeMark(':');
  const token = cursor.next();
  const zone = token.kind === 'number' && /^\d{1,2}$/.test(token.text) ? Number(token.text) : 0;
  if (zone < 1 || zone > UTM_ZONES) throw cursor.refuse(`a UTM zone from 1 to ${UTM_ZONES}`, { at: token });
  const letter = cursor.peek();
  const glued = letter.kind === 'word' && letter.text.length === 1 && (!letter.spaced || (sideOf(letter.text) !== null && !cursor.isNumber(1) && !cursor.isMark(':', 1) && !cursor.isMark('=', 1)));
  if (glued) {
    if (letter.text === 'S') throw cursor.refuse('a UTM zone north of the equator', { at: letter, advice: 'S can be the south or the band from 32° to 40° north; write N or leave it out' });
    if (!/^[NP-RT-X]$/.test(letter.text)) throw cursor.refuse('N behind a UTM zone, or the letter of a northern band', { at: letter });
    cursor.next();
  } else if (letter.text === 'NORTH' && !cursor.isNumber(1)) {
    cursor.next();
  }
  setSystem(cursor, draft, { kind: 'UTM', zone }, first);
}

function readStatePlane(cursor: Cursor, draft: ProjectedDraft): void {
  const first = cursor.next();
  if (first.text === 'STATE') cursor.next();
  while (['COORDINATE', 'COORDINATES', 'SYSTEM', 'PLANE'].includes(cursor.peek().text)) cursor.next();
  if (!cursor.takeMark(',')) cursor.takeMark(':');
  // Easting and northing may stand before the zone: it is looked for again where its words begin.
  const zone = stateZoneAhead(cursor, true);
  if (zone !== null) {
    cursor.at += zone.count;
    setSystem(cursor, draft, zone.system, first);
  } else if (isZoneNumber(cursor)) {
    readZone(cursor, draft);
  }
}

const isZoneNumber = (cursor: Cursor): boolean => cursor.peek().text === 'ZONE' || /^\d{3,4}$/.test(cursor.peek().text);

/** `zone 3702`, `zone 17` where UTM is named, `zone PA South`. */
function readZone(cursor: Cursor, draft: ProjectedDraft): void {
  const first = cursor.peek();
  if (first.text === 'ZONE' && saysUtm(cursor) && /^\d{1,2}$/.test(cursor.peek(1).text)) return readUtm(cursor, draft);
  if (first.text === 'ZONE') cursor.next();
  const named = stateZoneAhead(cursor, true);
  if (named !== null) {
    cursor.at += named.count;
    return setSystem(cursor, draft, named.system, first);
  }
  const token = cursor.next();
  const zone = token.kind === 'number' && /^\d{3,4}$/.test(token.text) ? zoneByNumber(Number(token.text)) : null;
  if (zone === null) throw cursor.refuse('a State Plane zone by number, as in 3702, or by name, as in Pennsylvania South', { at: token });
  setSystem(cursor, draft, { kind: 'State Plane', ...zone }, first);
}
