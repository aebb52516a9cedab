import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { civilFromDays, daysFromCivil, formatUtc } from '../../src/table/calendar.js';
import { gpsToUtc } from '../../src/table/gpsTime.js';
import { parseTimeColumn, type TimeStatement } from '../../src/table/parseTimeColumn.js';

const PLACE = { source: 'readings.csv', column: 'utc' };
const one = (text: string, statement: TimeStatement = {}): number => parseTimeColumn([text], statement, PLACE)[0]!;

function complaint(run: () => unknown): UserError['complaint'] {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.complaint;
    throw error;
  }
  throw new Error('nothing was thrown');
}

describe('calendar', () => {
  it('agrees with the language\'s own calendar on every day of 600 years', () => {
    for (let days = daysFromCivil(1700, 1, 1); days < daysFromCivil(2300, 1, 1); days++) {
      const date = new Date(days * 86_400_000);
      const civil = civilFromDays(days);
      if (civil[0] !== date.getUTCFullYear() || civil[1] !== date.getUTCMonth() + 1 || civil[2] !== date.getUTCDate()) expect(civil).toBe(date.toISOString());
      if (daysFromCivil(...civil) !== days) expect(daysFromCivil(...civil)).toBe(days);
    }
  });
  it.each([
    [0, 0, '1970-01-01T00:00:00Z'],
    [-0.5, 1, '1969-12-31T23:59:59.5Z'],
    [1776171900.05, 2, '2026-04-14T13:05:00.05Z'],
    [1776171900.996, 2, '2026-04-14T13:05:01.00Z'],
    [951782399.9999, 3, '2000-02-29T00:00:00.000Z'],
    [NaN, 2, ''],
  ])('formatUtc(%d, %d)', (timeS, decimals, text) => expect(formatUtc(timeS, decimals)).toBe(text));
});

describe('parseTimeColumn', () => {
  it.each([
    ['2026-04-14T13:05:00Z', 1776171900],
    ['2026-04-14 13:05:00.1Z', 1776171900.1],
    ['2026-04-14t13:05:00,25z', 1776171900.25],
    ['2026-04-14T13:05Z', 1776171900],
    ['2026-04-14T18:35:00+05:30', 1776171900],
    ['2026-04-14T08:05:00-0500', 1776171900],
    ['2026-04-14T08:05:00-05', 1776171900],
    [' 2026-04-14T13:05:00Z ', 1776171900],
    ['2000-02-29T23:59:59Z', 951868799],
    ['2016-12-31T23:59:60Z', 1483228800],
    ['1969-12-31T23:59:59Z', -1],
  ])('%s', (text, seconds) => {
    expect(one(text)).toBeCloseTo(seconds, 6);
    // Its own zone counts, whatever is stated for the file.
    expect(one(text, { zone: '+09:00' })).toBeCloseTo(seconds, 6);
  });
  it('agrees with the language on 2,000 times spread over 60 years', () => {
    for (let i = 0; i < 2000; i++) {
      const ms = i * 947_345_671;
      const text = new Date(ms).toISOString();
      expect(one(text)).toBe(ms / 1000);
      expect(formatUtc(ms / 1000, 3)).toBe(text);
    }
  });
  it.each<[string, string, number]>([
    ['2026-04-14T13:05:00', 'UTC', 1776171900],
    ['2026-04-14T18:35:00', '+05:30', 1776171900],
    ['2026-04-14T08:05:00', 'UTC-05:00', 1776171900],
    // Summer time in April, standard time in January: 4 and 5 hours behind.
    ['2026-04-14T09:05:00', 'America/New_York', 1776171900],
    ['2026-01-14T08:05:00', 'America/New_York', 1768395900],
    ['2026-04-14T18:50:00', 'Asia/Kathmandu', 1776171900],
    // The half hours around the change of 2026-03-08, 02:00 EST = 07:00 UTC.
    ['2026-03-08T01:59:59', 'America/New_York', 1772953199],
    ['2026-03-08T03:00:00', 'America/New_York', 1772953200],
  ])('%s in %s', (text, zone, seconds) => expect(one(text, { zone })).toBe(seconds));

  it.each([['2026-03-08T02:30:00', 'skips'], ['2026-11-01T01:30:00', 'twice']])('refuses %s in New York', (text, word) => {
    const said = complaint(() => one(text, { zone: 'America/New_York' }));
    expect(said.code).toBe('value_invalid');
    expect(said.found).toContain(word);
  });
  it('makes NaN of empty cells', () => expect([...parseTimeColumn(['', ' '], { zone: 'UTC' }, PLACE)]).toEqual([NaN, NaN]));

  it('asks for a zone where there is none', () => {
    const said = complaint(() => parseTimeColumn(['2026-04-14T13:05:00Z', '2026-04-14T13:05:01'], {}, PLACE));
    expect(said).toMatchObject({ code: 'zone_missing', where: 'readings.csv, row 2, column utc' });
    expect(said.found).toContain('2026-04-14T13:05:01');
    expect(said.advice).toContain('zone');
  });
  it.each([
    '2026-02-29T00:00:00Z', '2026-13-01T00:00:00Z', '2026-04-31T00:00:00Z', '2026-04-14', '2026-04-14T24:00:00Z', '2026-04-14T13:60:00Z', '2026-04-14T13:05:61Z',
    '14.04.2026 13:05:00', '04/14/2026 13:05', '2026-04-14T13:05:00.Z', '2026-04-14T13:05:00ZZ', '2026-04-14T13:05:00+5', '2026-04-14T13:05:00+05:3', '2026-04-14T13:05:00+15:00',
    '13:05:00', '2026-04-14T13:05:00 EST', '1776171900',
  ])('refuses %s', text => {
    expect(complaint(() => one(text, { zone: 'UTC' }))).toMatchObject({ code: 'value_invalid', where: 'readings.csv, row 1, column utc', found: JSON.stringify(text) });
  });
  it.each(['EST', '+5', 'Mars/Olympus', '+25:00', ''])('refuses the zone %s', zone => {
    expect(complaint(() => one('2026-04-14T13:05:00', { zone }))).toMatchObject({ code: 'key_invalid' });
  });
});

describe('GPS time', () => {
  it.each([
    // The epoch, when GPS and UTC agreed (IS-GPS-200).
    [0, 0, '1980-01-06T00:00:00Z'],
    // The second roll-over of the 10-bit week, 2019-04-06 23:59:42 UTC (US Naval Observatory notice).
    [2048, 0, '2019-04-06T23:59:42Z'],
    // 2016-12-31 24:00 UTC is 18 s after the last second that lay 17 s behind (IERS Bulletin C 52).
    [1930, 17, '2017-01-01T00:00:00Z'],
    [1930, 18, '2017-01-01T00:00:00Z'],
    [1930, 16, '2016-12-31T23:59:59Z'],
  ])('week %d, second %d', (week, second, text) => expect(formatUtc(gpsToUtc(week, second))).toBe(text));

  // Week 2414 begins on Sunday 2026-04-12, 18 s before midnight UTC.
  it('reads one week for the file or one a row', () => {
    expect([...parseTimeColumn(['18', '18.5', ''], { gpsWeek: 2414 }, PLACE)]).toEqual([1775952000, 1775952000.5, NaN]);
    expect([...parseTimeColumn(['604799', '0'], { gpsWeek: [2413, 2414] }, PLACE)]).toEqual([1775951981, 1775951982]);
  });
  it('refuses a week modulo 1024 and seconds beyond the week', () => {
    expect(complaint(() => one('0', { gpsWeek: 365 })).advice).toContain('1024');
    expect(complaint(() => one('604800', { gpsWeek: 2414 }))).toMatchObject({ code: 'value_invalid', where: 'readings.csv, row 1, column utc' });
    expect(complaint(() => one('12:00', { gpsWeek: 2414 }))).toMatchObject({ code: 'value_invalid' });
  });
});
