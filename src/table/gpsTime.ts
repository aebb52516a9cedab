import { DAY_S, daysFromCivil } from './calendar.js';

const GPS_EPOCH_S = daysFromCivil(1980, 1, 6) * DAY_S;
export const WEEK_S = 7 * DAY_S;

/**
 * First day of each larger difference between GPS time and UTC, seconds.
 * Source: IERS leap-seconds.list (TAI − UTC less the constant 19 s of GPS, IS-GPS-200). None announced after 2017.
 */
const GPS_MINUS_UTC: ReadonlyArray<readonly [year: number, month: number, seconds: number]> = [
  [1981, 7, 1], [1982, 7, 2], [1983, 7, 3], [1985, 7, 4], [1988, 1, 5], [1990, 1, 6], [1991, 1, 7], [1992, 7, 8], [1993, 7, 9],
  [1994, 7, 10], [1996, 1, 11], [1997, 7, 12], [1999, 1, 13], [2006, 1, 14], [2009, 1, 15], [2012, 7, 16], [2015, 7, 17], [2017, 1, 18],
];
const STEPS = GPS_MINUS_UTC.map(([year, month, seconds]) => ({ fromUtcS: daysFromCivil(year, month, 1) * DAY_S, seconds }));

/** GPS week (counted since 1980-01-06, not modulo 1024) and seconds of the week to UTC seconds since 1970. */
export function gpsToUtc(week: number, secondsOfWeek: number): number {
  const gps = GPS_EPOCH_S + week * WEEK_S + secondsOfWeek;
  let leap = 0;
  for (const { fromUtcS, seconds } of STEPS) if (gps - seconds >= fromUtcS) leap = seconds;
  return gps - leap;
}
