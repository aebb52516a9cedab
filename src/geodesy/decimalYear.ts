import { UserError } from '../errors.js';

const ISO_DATE = /^(\d{4})-(\d{2})-(\d{2})(?:$|T)/;
const DAY_MS = 86_400_000;

/**
 * Year plus days since 1 January over 365, the convention of the magnetic models' coefficients; a leap year's last day
 * lands on the next whole year. Takes an ISO 8601 date or date-time (the date as written counts, UTC).
 * Throws UserError `value_invalid` for anything else.
 */
export function decimalYear(isoDate: string, where = 'date'): number {
  const match = ISO_DATE.exec(isoDate);
  const [year, month, day] = match ? match.slice(1, 4).map(Number) as [number, number, number] : [NaN, NaN, NaN];
  const at = match ? Date.UTC(year, month - 1, day) : NaN;
  const date = new Date(at);
  if (!Number.isFinite(at) || date.getUTCMonth() !== month - 1 || date.getUTCDate() !== day) {
    throw new UserError({ code: 'value_invalid', where, found: JSON.stringify(isoDate), wanted: 'a date as in "2026-04-14"' });
  }
  return year + (at - Date.UTC(year, 0, 1)) / DAY_MS / 365;
}
