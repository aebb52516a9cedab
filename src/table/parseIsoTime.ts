import { DAY_S, daysFromCivil, daysInMonth } from './calendar.js';

const ZERO = 48;

/** Parts of an ISO 8601 time: seconds as if its clock were UTC, and its own offset; NaN where it names no zone. */
export interface IsoTime {
  localS: number;
  offsetS: number;
}

/**
 * Reads `YYYY-MM-DD`, `T` or a space, `hh:mm[:ss[.fraction]]` and, where there, `Z`, `±hh`, `±hhmm` or `±hh:mm` into `out`;
 * false where the text is anything else or no such time exists. Read letter by letter, since a survey has a million of
 * them. A leap second (59:60) becomes the second after it, as in POSIX time.
 * Source: ISO 8601-1:2019, 5.4.2 (extended format); RFC 3339 allows the space.
 */
export function parseIsoTime(text: string, out: IsoTime): boolean {
  let end = text.length;
  let i = 0;
  while (end > 0 && text.charCodeAt(end - 1) <= 32) end--;
  while (i < end && text.charCodeAt(i) <= 32) i++;
  const year = digits(text, i, 4);
  const month = digits(text, i + 5, 2);
  const day = digits(text, i + 8, 2);
  const hour = digits(text, i + 11, 2);
  const minute = digits(text, i + 14, 2);
  const joint = text.charCodeAt(i + 10);
  if (!(year >= 0 && month >= 1 && month <= 12 && day >= 1 && day <= daysInMonth(year, month) && hour >= 0 && hour <= 23 && minute >= 0 && minute <= 59)) return false;
  if (text[i + 4] !== '-' || text[i + 7] !== '-' || (joint !== 84 && joint !== 116 && joint !== 32) || text[i + 13] !== ':') return false;
  i += 16;
  let second = 0;
  if (text[i] === ':') {
    second = digits(text, i + 1, 2);
    if (!(second >= 0 && (second <= 59 || (second === 60 && minute === 59)))) return false;
    i += 3;
    if (text[i] === '.' || text[i] === ',') {
      const start = ++i;
      while (i < end && isDigit(text.charCodeAt(i))) i++;
      if (i === start) return false;
      second += Number(text.slice(start, i)) / 10 ** (i - start);
    }
  }
  out.localS = daysFromCivil(year, month, day) * DAY_S + hour * 3600 + minute * 60 + second;
  return readOffset(text, i, end, out);
}

function readOffset(text: string, start: number, end: number, out: IsoTime): boolean {
  if (start === end) {
    out.offsetS = NaN;
    return true;
  }
  const sign = text[start];
  if (sign === 'Z' || sign === 'z') {
    out.offsetS = 0;
    return start + 1 === end;
  }
  if (sign !== '+' && sign !== '-') return false;
  const hours = digits(text, start + 1, 2);
  const colon = text[start + 3] === ':' ? 1 : 0;
  const minutes = end === start + 3 ? 0 : digits(text, start + 3 + colon, 2);
  if (!(hours >= 0 && hours <= 14 && minutes >= 0 && minutes <= 59) || (end !== start + 3 && end !== start + 5 + colon)) return false;
  out.offsetS = (sign === '-' ? -1 : 1) * (hours * 3600 + minutes * 60);
  return true;
}

/** The number in `count` digits at `start`; NaN where one of them is no digit. */
function digits(text: string, start: number, count: number): number {
  let value = 0;
  for (let i = start; i < start + count; i++) {
    const code = text.charCodeAt(i);
    if (!isDigit(code)) return NaN;
    value = value * 10 + code - ZERO;
  }
  return value;
}

function isDigit(code: number): boolean {
  return code >= ZERO && code <= ZERO + 9;
}
