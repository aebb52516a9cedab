import { UserError } from '../errors.js';
import { gpsToUtc, WEEK_S } from './gpsTime.js';
import { parseIsoTime } from './parseIsoTime.js';
import { parseZone, type ZoneRule } from './timeZone.js';

/** What the survey file says about a column of times. */
export interface TimeStatement {
  /** Zone of times that name none: `UTC`, `+05:30`, `America/New_York`. */
  readonly zone?: string;
  /** Full GPS week, one for the file or one a row: then the texts are seconds of that week in GPS time. */
  readonly gpsWeek?: number | ArrayLike<number>;
}

/** Where the column stands, for messages. */
export interface ColumnPlace {
  readonly source: string;
  readonly column: string;
}

/** Weeks below this come from a receiver that sends the week modulo 1024 (IS-GPS-200, 20.3.3.3.1.1): 1999 at the latest. */
const FIRST_FULL_WEEK = 1024;
const SECONDS = /^\s*\d+\.?\d*\s*$/;

/**
 * Times to UTC seconds since 1970, one a row. ISO 8601 with its own zone, which then counts; or without one, in the
 * stated zone; or GPS week and seconds of the week (leap seconds taken off). Empty cells are NaN. A time without any
 * zone is a UserError `zone_missing`; one that cannot be read, or that a clock skips or shows twice, `value_invalid`.
 */
export function parseTimeColumn(texts: readonly string[], statement: TimeStatement, place: ColumnPlace): Float64Array {
  const times = new Float64Array(texts.length);
  if (statement.gpsWeek !== undefined) return fromGps(texts, statement.gpsWeek, place);
  const zone = statement.zone === undefined ? null : zoneOf(statement.zone, place);
  const iso = { localS: 0, offsetS: 0 };
  for (let i = 0; i < texts.length; i++) {
    if (!parseIsoTime(texts[i]!, iso)) {
      if (texts[i]!.trim() !== '') throw wrongTime(texts[i]!, cell(place, i));
      times[i] = NaN;
    } else if (iso.offsetS === iso.offsetS) {
      times[i] = iso.localS - iso.offsetS;
    } else if (zone) {
      times[i] = iso.localS - offsetOf(zone, iso.localS, { text: texts[i]!, where: cell(place, i) });
    } else {
      throw new UserError({
        code: 'zone_missing', where: cell(place, i), found: `${texts[i]!.trim()}, a time without a zone`, wanted: 'a time with its zone, such as 2026-04-14T13:05:00Z',
        advice: 'add "zone": "UTC" (or an offset such as "-05:00") beside the columns in the survey file',
      });
    }
  }
  return times;
}

function fromGps(texts: readonly string[], week: number | ArrayLike<number>, place: ColumnPlace): Float64Array {
  const times = new Float64Array(texts.length);
  for (let i = 0; i < texts.length; i++) {
    const text = texts[i]!;
    const weekOfRow = typeof week === 'number' ? week : week[i]!;
    if (text.trim() === '' || Number.isNaN(weekOfRow)) {
      times[i] = NaN;
      continue;
    }
    if (!Number.isInteger(weekOfRow) || weekOfRow < FIRST_FULL_WEEK) {
      throw new UserError({
        code: 'value_invalid', where: `${place.source}, row ${i + 1}`, found: `GPS week ${weekOfRow}`, wanted: `a full week number since 1980, ${FIRST_FULL_WEEK} or more`,
        advice: 'add 1024 or 2048 to a week that the receiver sends modulo 1024',
      });
    }
    const seconds = SECONDS.test(text) ? Number(text) : NaN;
    if (!(seconds >= 0 && seconds < WEEK_S)) {
      throw new UserError({ code: 'value_invalid', where: cell(place, i), found: JSON.stringify(text), wanted: `seconds of the GPS week, from 0 to ${WEEK_S}` });
    }
    times[i] = gpsToUtc(weekOfRow, seconds);
  }
  return times;
}

function zoneOf(zone: string, place: ColumnPlace): ZoneRule {
  const rule = parseZone(zone);
  if (rule) return rule;
  throw new UserError({
    code: 'key_invalid', where: `zone stated for ${place.source}, column ${place.column}`, found: JSON.stringify(zone),
    wanted: '"UTC", an offset such as "+05:30", or a name such as "America/New_York"',
  });
}

function offsetOf(zone: ZoneRule, localS: number, { text, where }: { text: string; where: string }): number {
  const offset = zone(localS);
  if (offset.kind === 'one') return offset.offsetS;
  throw new UserError({
    code: 'value_invalid', where, wanted: 'a time that happens once',
    found: `${text.trim()}, which the clock of the stated zone ${offset.kind === 'skipped' ? 'skips' : 'shows twice'} on that day`,
    advice: 'state the offset from UTC instead of the zone\'s name',
  });
}

function wrongTime(text: string, where: string): UserError {
  return new UserError({ code: 'value_invalid', where, found: JSON.stringify(text), wanted: 'a time in ISO 8601, such as 2026-04-14T13:05:00.1Z' });
}

function cell({ source, column }: ColumnPlace, index: number): string {
  return `${source}, row ${index + 1}, column ${column}`;
}
