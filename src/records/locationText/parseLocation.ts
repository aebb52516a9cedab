import type { Datum } from '../../geodesy/types.js';
import { datumWord } from '../datumWord.js';
import { isQuarterRun, readAliquot, startsAliquot } from './aliquots.js';
import { readAngle, startsAngle } from './angles.js';
import { readCall, startsCall } from './calls.js';
import { leadsInside, readCorner, readOffsets, startsOffset } from './corners.js';
import { Cursor } from './cursor.js';
import { latitude, longitude, readPair, type Pair } from './geographic.js';
import { readMeridian } from './meridians.js';
import { emptyProjected, finishProjected, readProjected, startsProjected, type ProjectedDraft } from './projected.js';
import { addCall, emptySection, finishSection, setPart, type SectionDraft } from './sectionDraft.js';
import { stateCode } from './statePlaneZones.js';
import type { Token } from './tokens.js';
import { readReference, startsReference } from './townships.js';
import { LOCATION_TEXT_DEFAULTS, type CornerOffset, type LocationStatement, type LocationTextOptions, type MapCornerStatement, type SingleStatement } from './types.js';
import { CENTRE, FILLERS, isNorthSouth, LOT, OF, SECTION, THE } from './words.js';

/** A location in a record takes a line; what is longer is a story, and is refused before any of it is read. */
const LONGEST_TEXT = 400;
const SEPARATORS: ReadonlySet<string> = new Set([',', ';', '.', '(', ')', '&', '/', ':', '|', '-', '+']);

/** Statements as the text makes them, in its order; each is finished when the text ends. */
interface Reading {
  section: SectionDraft | null;
  projected: ProjectedDraft | null;
  readonly order: Array<{ readonly kind: SingleStatement['kind']; statement: SingleStatement | null; datum: Datum | null; readonly at: Token }>;
  /** A datum that stands before what it belongs to. */
  datumAhead: Datum | null;
}

/**
 * Reads a location as it stands in a record: latitude and longitude, projected coordinates, a section with footage calls,
 * parts, lots or corner ties, distances from a map's corner, or several of these. Nothing is guessed: what can be read in
 * two ways, what is impossible, and every word that it does not know is refused with UserError `position_invalid`, which
 * quotes the text, the spot in it, and what was expected there. `where` is the file, row and column, for the message. Only
 * what says nothing of the place is passed over: a county, a datum beside a section alone, words such as "located".
 */
export function parseLocation(text: string, where: string, options: Partial<LocationTextOptions> = {}): LocationStatement {
  const cursor = new Cursor(text, where, { ...LOCATION_TEXT_DEFAULTS, ...options });
  if (text.length > LONGEST_TEXT) throw cursor.refuse(`a location of at most ${LONGEST_TEXT} characters`);
  const reading: Reading = { section: null, projected: null, order: [], datumAhead: null };
  while (!cursor.atEnd) readNext(cursor, reading);
  if (reading.order.length === 0) throw cursor.refuse('a location', { at: cursor.peek(), advice: 'write a latitude and longitude, coordinates of a projection, or a section with its calls' });
  const statements = reading.order.map((entry) => finish(cursor, reading, entry));
  checkKinds(cursor, reading, statements);
  return statements.length === 1 ? statements[0]! : { kind: 'combined', parts: statements };
}

function finish(cursor: Cursor, reading: Reading, { kind, statement, datum }: Reading['order'][number]): SingleStatement {
  if (kind === 'section') return finishSection(cursor, reading.section!);
  const found = kind === 'projected' ? finishProjected(cursor, reading.projected!) : statement!;
  return datum === null ? found : ({ ...found, datum } as SingleStatement);
}

/** Two statements of one kind are two positions, unless each is said to be on a datum of its own. */
function checkKinds(cursor: Cursor, { order }: Reading, statements: readonly SingleStatement[]): void {
  for (let i = 0; i < statements.length; i++) {
    const twin = order.slice(0, i).find((entry) => entry.kind === statements[i]!.kind);
    if (twin === undefined) continue;
    const { datum } = order[i]!;
    if (datum === null || twin.datum === null || datum === twin.datum) throw cursor.refuse('one position, or one on each of two datums', { at: order[i]!.at });
  }
}

function readNext(cursor: Cursor, reading: Reading): void {
  const token = cursor.peek();
  const draft = reading.section;
  if (token.kind === 'word') {
    if (token.text === 'NAD' || token.text === 'WGS') return readDatum(cursor, reading);
    // CNESW: the centre of a part, written in one.
    if (token.text.length > 2 && token.text[0] === 'C' && isQuarterRun(token.text.slice(1))) cursor.splitWord(1);
    if (CENTRE.has(cursor.peek().text) && centreAhead(cursor)) return readCentre(cursor, sectionOf(reading, token));
  }
  // A hyphen glued to a word or number joins it to the next, and one with space behind it parts; a sign is neither.
  if (token.kind === 'mark' && token.text === '-' && (cursor.peek(1).spaced || (!token.spaced && cursor.follows('word', 'number', 'fraction')))) {
    cursor.next();
    return;
  }
  if (startsCall(cursor)) return readFootage(cursor, sectionOf(reading, token));
  if (startsOffset(cursor)) return readTie(cursor, reading);
  if (startsReference(cursor, draft?.reference ?? {})) return readReference(cursor, sectionOf(reading, token).reference);
  if (startsAliquot(cursor)) return setPart(cursor, sectionOf(reading, token), readAliquot(cursor), { at: token, linked: false });
  if (startsProjected(cursor, reading.projected)) return readProjected(cursor, projectedOf(reading, token));
  const meridian = readMeridian(cursor);
  if (meridian !== null) return setMeridian(cursor, sectionOf(reading, token), meridian, token);
  if (startsAngle(cursor)) return addStatement(reading, { kind: 'geographic', ...readPair(cursor) }, token);
  if (token.kind === 'word' && (FILLERS.has(token.text) || (token.text === 'DATUM' && hasDatum(reading)))) {
    cursor.next();
    return;
  }
  if (token.kind === 'mark' && SEPARATORS.has(token.text)) {
    cursor.next();
    return;
  }
  if (skipCounty(cursor)) return;
  if (readCorner(cursor) !== null) throw cursor.refuse('distances from the corner, as in 40 rods N of SW cor', { at: token });
  throw cursor.refuse(token.kind === 'word' ? 'words of a location only' : 'a location');
}

const COUNTY: ReadonlySet<string> = new Set(['COUNTY', 'CNTY', 'PARISH']);
/** The longest names of counties have four words (`Lake of the Woods`). */
const COUNTY_WORDS = 4;

/** `Larkin County, Ohio` says nothing of where in the county; true, and behind it, where it stands here. */
function skipCounty(cursor: Cursor): boolean {
  let count = 0;
  while (count < COUNTY_WORDS && cursor.peek(count).kind === 'word' && !COUNTY.has(cursor.peek(count).text)) count++;
  if (count === 0 || !cursor.isWord(COUNTY, count)) return false;
  cursor.at += count + 1;
  const gap = cursor.isMark(',') ? 1 : 0;
  const [one, two] = [cursor.peek(gap), cursor.peek(gap + 1)];
  if (one.kind !== 'word') return true;
  if (two.kind === 'word' && stateCode(`${one.text} ${two.text}`) !== null) cursor.at += gap + 2;
  else if (stateCode(one.text) !== null) cursor.at += gap + 1;
  return true;
}

const hasDatum = (reading: Reading): boolean => reading.datumAhead !== null || reading.order.some((entry) => entry.datum !== null);

function sectionOf(reading: Reading, at: Token): SectionDraft {
  if (reading.section === null) {
    reading.section = emptySection(at);
    reading.order.push({ kind: 'section', statement: null, datum: null, at });
  }
  return reading.section;
}

function projectedOf(reading: Reading, at: Token): ProjectedDraft {
  if (reading.projected === null) {
    reading.projected = emptyProjected(at);
    reading.order.push({ kind: 'projected', statement: null, datum: takeAhead(reading), at });
  }
  return reading.projected;
}

function addStatement(reading: Reading, statement: SingleStatement, at: Token): void {
  reading.order.push({ kind: statement.kind, statement, datum: takeAhead(reading), at });
}

function takeAhead(reading: Reading): Datum | null {
  const datum = reading.datumAhead;
  reading.datumAhead = null;
  return datum;
}

function setMeridian(cursor: Cursor, draft: SectionDraft, meridian: string, at: Token): void {
  if (draft.reference.meridian !== undefined && draft.reference.meridian !== meridian) throw cursor.refuse('one principal meridian', { at });
  draft.reference.meridian = meridian;
}

/** `NAD27`, `NAD 83 (2011)`, `WGS-84`: belongs to the coordinates before it, else to those behind it. */
function readDatum(cursor: Cursor, reading: Reading): void {
  const first = cursor.next();
  if (cursor.isMark('-')) cursor.next();
  const number = cursor.next();
  let word = first.text + number.text;
  if (cursor.isMark('(') && cursor.isNumber(1) && cursor.isMark(')', 2)) {
    word += `(${cursor.peek(1).text})`;
    cursor.at += 3;
  }
  const datum = datumWord(word);
  if (datum === null || datum === 'unknown') throw cursor.refuse('NAD27, NAD83, NAD83(2011) or WGS 84', { at: first });
  const last = reading.order.findLast((entry) => entry.kind !== 'section');
  if (last !== undefined) {
    if (last.datum !== null) throw cursor.refuse('one datum for a position', { at: first });
    last.datum = datum;
  } else {
    if (reading.datumAhead !== null) throw cursor.refuse('one datum for a position', { at: first });
    reading.datumAhead = datum;
  }
}

function centreAhead(cursor: Cursor): boolean {
  let at = 1;
  while (cursor.isMark('-', at) || cursor.isMark('/', at) || cursor.isWord(OF, at) || cursor.isWord(THE, at)) at++;
  return startsAliquot(cursor, at) || cursor.isWord(SECTION, at) || cursor.isWord(LOT, at);
}

function readCentre(cursor: Cursor, draft: SectionDraft): void {
  if (draft.centre !== null) throw cursor.refuse('one centre');
  cursor.next();
  while (cursor.takeMark('-') || cursor.takeMark('/') || cursor.takeWord(OF) || cursor.takeWord(THE)) { /* of the */ }
  draft.centre = cursor.isWord(SECTION) ? 'section' : cursor.isWord(LOT) ? 'lot' : 'part';
}

/** A call or two, and what they are said to be measured from. */
function readFootage(cursor: Cursor, draft: SectionDraft): void {
  const first = cursor.peek();
  for (const call of readCall(cursor)) addCall(cursor, draft, call, first);
  const link = readLink(cursor, draft);
  if (link !== null) draft.callLinks.push(link);
}

/**
 * "of" and the part, lot or section behind it; null, with nothing read, where there is no "of" before one. A corner needs no
 * "of": `SW cor NE/4` is the part's corner.
 */
function readLink(cursor: Cursor, draft: SectionDraft, { bare = false } = {}): SectionDraft['callLinks'][number] {
  const said = cursor.isWord(OF);
  if (!said && !bare) return null;
  const gap = !said ? 0 : cursor.isWord(THE, 1) ? 2 : 1;
  if (cursor.isWord(SECTION, gap)) {
    cursor.at += gap;
    // "of the section" may leave its number to another column.
    if (said && !/^[-#:\d]|^NO$/.test(cursor.peek(1).text)) cursor.next();
    return 'section';
  }
  if (cursor.isWord(LOT, gap)) {
    cursor.at += gap;
    return 'lot';
  }
  if (!startsAliquot(cursor, gap)) return null;
  cursor.at += gap;
  const at = cursor.peek();
  const steps = readAliquot(cursor);
  setPart(cursor, draft, steps, { at, linked: true });
  return { steps };
}

/** Distances from a corner of a section or part, or from a parallel and a meridian. */
function readTie(cursor: Cursor, reading: Reading): void {
  const first = cursor.peek();
  const offsets = readOffsets(cursor);
  const at = cursor.peek();
  const name = readCorner(cursor);
  if (name === null) {
    if (!startsAngle(cursor)) throw cursor.refuse('a corner, as in SW cor, or the latitude or longitude of a map\'s corner');
    return addStatement(reading, readMapCorner(cursor, offsets), first);
  }
  const draft = sectionOf(reading, first);
  if (draft.corner !== null) throw cursor.refuse('one corner', { at });
  const outward = offsets.find((offset) => !leadsInside(name, offset.toward));
  if (outward !== undefined) throw cursor.refuse(`a way from the ${name.replace('4', ' quarter')} corner into the section`, { at: first });
  for (const { distanceM } of offsets) if (distanceM > cursor.options.maxCallM) throw cursor.refuse('a distance of at most a section\'s length', { at: first });
  draft.corner = { name, offsets, link: null };
  draft.corner.link = readLink(cursor, draft, { bare: true });
}

/** `5,400' S of 39°22'30", 6,100' W of 80°15'00"`, or both distances from a pair. */
function readMapCorner(cursor: Cursor, offsets: readonly CornerOffset[]): Omit<MapCornerStatement, 'datum'> {
  if (offsets.length === 2) return mapCorner(offsets, readPair(cursor));
  const [one] = offsets as [CornerOffset];
  const northSouth = isNorthSouth(one.toward);
  const angle = readAngle(cursor, northSouth ? 'latitude' : 'longitude');
  while (!startsOffset(cursor)) {
    const token = cursor.peek();
    const between = token.kind === 'mark' ? SEPARATORS.has(token.text) : token.kind === 'word' && FILLERS.has(token.text);
    if (!between) throw cursor.refuse(`a distance ${northSouth ? 'east or west of a longitude' : 'north or south of a latitude'} too`);
    cursor.next();
  }
  const at = cursor.peek();
  const [two, more] = readOffsets(cursor);
  if (more !== undefined || isNorthSouth(two!.toward) === northSouth) throw cursor.refuse('one distance from a parallel and one from a meridian', { at });
  if (!startsAngle(cursor)) throw cursor.refuse(northSouth ? 'a longitude' : 'a latitude');
  const across = readAngle(cursor, northSouth ? 'longitude' : 'latitude');
  const [lat, lon] = northSouth ? [angle, across] : [across, angle];
  return mapCorner([one, two!], { ...latitude(cursor, lat), ...longitude(cursor, lon) });
}

function mapCorner(offsets: readonly CornerOffset[], corner: Pair): Omit<MapCornerStatement, 'datum'> {
  const north = offsets.find((offset) => isNorthSouth(offset.toward))!;
  const east = offsets.find((offset) => !isNorthSouth(offset.toward))!;
  return {
    kind: 'mapCorner', ...corner,
    northM: north.toward === 'S' ? -north.distanceM : north.distanceM, eastM: east.toward === 'W' ? -east.distanceM : east.distanceM,
    northResolutionM: north.resolutionM, eastResolutionM: east.resolutionM,
  };
}
