import type { Axis } from '../../geodesy/parseAngle.js';
import { readAngle, startsAngle, type AngleText } from './angles.js';
import type { Cursor } from './cursor.js';
import type { GeographicStatement, LonSide } from './types.js';
import { AND, LAT, LON } from './words.js';

export type Pair = Pick<GeographicStatement, 'lonDeg' | 'latDeg' | 'lonResolutionDeg' | 'latResolutionDeg' | 'lonSide'>;

/** Reads a latitude and a longitude, in either order where they say which is which. */
export function readPair(cursor: Cursor): Pair {
  const header = readHeader(cursor);
  const first = readAngle(cursor, header);
  while (cursor.takeMark(',') || cursor.takeMark(';') || cursor.takeMark('/') || cursor.takeMark('&') || cursor.takeMark('|') || cursor.takeWord(AND)) { /* between the two */ }
  if (!startsAngle(cursor)) throw cursor.refuse(first.axis === null ? 'a latitude and a longitude' : `a ${other(first.axis)} beside the ${first.axis}`);
  const second = readAngle(cursor, null);
  if (first.bare && second.bare) {
    throw cursor.refuse('a latitude and longitude, or a township and range, not what can be read as either', {
      at: first.first, advice: 'write degree signs or decimals for a place, T and R before a township and range',
    });
  }
  const [lat, lon] = inOrder(cursor, first, second);
  const { latDeg, latResolutionDeg } = latitude(cursor, lat);
  const { lonDeg, lonResolutionDeg, lonSide } = longitude(cursor, lon);
  return { lonDeg, latDeg, lonResolutionDeg, latResolutionDeg, lonSide };
}

/** `Lat/Long:` before the two: which of them comes first. */
function readHeader(cursor: Cursor): Axis | null {
  const axisAt = (ahead: number): Axis | null => (cursor.isWord(LAT, ahead) ? 'latitude' : cursor.isWord(LON, ahead) ? 'longitude' : null);
  const [one, gap] = [axisAt(0), cursor.isMark('/', 1) || cursor.isMark(',', 1) || cursor.isMark('-', 1) || cursor.isMark('&', 1) || cursor.isWord(AND, 1) ? 2 : 1];
  const two = axisAt(gap);
  if (one === null || two === null || one === two) return null;
  cursor.at += gap + 1;
  if (!cursor.takeMark(':')) cursor.takeMark('=');
  return one;
}

const other = (axis: Axis): Axis => (axis === 'latitude' ? 'longitude' : 'latitude');

function inOrder(cursor: Cursor, first: AngleText, second: AngleText): [lat: AngleText, lon: AngleText] {
  const [a, b] = [first.axis, second.axis];
  if (a !== null && a === b) throw cursor.refuse(`one latitude and one longitude, not two ${a}s`, { at: second.first });
  const said = a ?? (b === null ? null : other(b));
  const axis = said ?? byMagnitude(first, second) ?? byOption(cursor);
  if (axis === null) {
    throw cursor.refuse('a latitude and a longitude that can be told apart', {
      at: first.first, advice: 'write N and W, Lat and Long, or a minus sign before the longitude, or state the order of the column',
    });
  }
  return axis === 'latitude' ? [first, second] : [second, first];
}

/**
 * What the first of two angles is by its size and sign: only a longitude goes beyond 90°, and only a longitude is
 * negative, since no datum that Ironplat knows is used south of the equator. Null where neither or both decide.
 */
function byMagnitude(first: AngleText, second: AngleText): Axis | null {
  const isLon = (angle: AngleText): boolean => angle.deg > 90 || angle.sign === '-';
  if (isLon(first) === isLon(second)) return null;
  return isLon(first) ? 'longitude' : 'latitude';
}

function byOption(cursor: Cursor): Axis | null {
  const { pairOrder } = cursor.options;
  return pairOrder === 'unsaid' ? null : pairOrder === 'latitude first' ? 'latitude' : 'longitude';
}

export function latitude(cursor: Cursor, angle: AngleText): Pick<Pair, 'latDeg' | 'latResolutionDeg'> {
  if (angle.deg > 90) throw cursor.refuse('a latitude of at most 90 degrees', { at: angle.first });
  const south = angle.sign === '-' || angle.letter === 'S';
  return { latDeg: south && angle.deg !== 0 ? -angle.deg : angle.deg, latResolutionDeg: angle.resolutionDeg };
}

export function longitude(cursor: Cursor, angle: AngleText): Pick<Pair, 'lonDeg' | 'lonResolutionDeg' | 'lonSide'> {
  const stated = angle.sign !== null || angle.letter !== null;
  const lonSide: LonSide = stated ? 'stated' : cursor.options.westPositive ? 'assumed' : 'unsaid';
  const west = angle.sign === '-' || angle.letter === 'W' || lonSide === 'assumed';
  return { lonDeg: west && angle.deg !== 0 ? -angle.deg : angle.deg, lonResolutionDeg: angle.resolutionDeg, lonSide };
}
