/** Seconds in a day of UTC; leap seconds have no number of their own in seconds since 1970 (POSIX). */
export const DAY_S = 86_400;

/**
 * Days from 1970-01-01 to a date of the Gregorian calendar. Month from 1. Exact for every year here.
 * Source: Howard Hinnant, "chrono-Compatible Low-Level Date Algorithms", days_from_civil.
 */
export function daysFromCivil(year: number, month: number, day: number): number {
  const y = month <= 2 ? year - 1 : year;
  const era = Math.floor(y / 400);
  const yearOfEra = y - era * 400;
  const dayOfYear = Math.floor((153 * (month + (month > 2 ? -3 : 9)) + 2) / 5) + day - 1;
  return era * 146_097 + yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear - 719_468;
}

/** The inverse: year, month and day of a number of days since 1970-01-01. Source: as above, civil_from_days. */
export function civilFromDays(days: number): [year: number, month: number, day: number] {
  const z = days + 719_468;
  const era = Math.floor(z / 146_097);
  const dayOfEra = z - era * 146_097;
  const yearOfEra = Math.floor((dayOfEra - Math.floor(dayOfEra / 1460) + Math.floor(dayOfEra / 36_524) - Math.floor(dayOfEra / 146_096)) / 365);
  const dayOfYear = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100));
  const m = Math.floor((5 * dayOfYear + 2) / 153);
  const month = m + (m < 10 ? 3 : -9);
  return [yearOfEra + era * 400 + (month <= 2 ? 1 : 0), month, dayOfYear - Math.floor((153 * m + 2) / 5) + 1];
}

export function daysInMonth(year: number, month: number): number {
  if (month === 2) return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0) ? 29 : 28;
  return month === 4 || month === 6 || month === 9 || month === 11 ? 30 : 31;
}

/**
 * UTC seconds since 1970 as ISO 8601 with Z, rounded to `decimals` of a second; empty for NaN.
 * A rounding that fills the minute carries on into the date.
 */
export function formatUtc(timeS: number, decimals = 0): string {
  if (!Number.isFinite(timeS)) return '';
  const scale = 10 ** decimals;
  const ticks = Math.round(timeS * scale);
  const seconds = Math.floor(ticks / scale);
  const days = Math.floor(seconds / DAY_S);
  const rest = seconds - days * DAY_S;
  const [year, month, day] = civilFromDays(days);
  const fraction = decimals > 0 ? `.${String(ticks - seconds * scale).padStart(decimals, '0')}` : '';
  return `${String(year).padStart(4, '0')}-${two(month)}-${two(day)}T${two(Math.floor(rest / 3600))}:${two(Math.floor(rest / 60) % 60)}:${two(rest % 60)}${fraction}Z`;
}

function two(n: number): string {
  return n < 10 ? `0${n}` : String(n);
}
