import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { decimalYear } from '../../src/geodesy/decimalYear.js';

describe('decimalYear', () => {
  it.each([['2026-01-01', 2026], ['2026-04-14', 2026 + 103 / 365], ['2026-12-31', 2026 + 364 / 365], ['2024-12-31', 2025], ['2024-03-01', 2024 + 60 / 365], ['2026-04-14T23:59:59Z', 2026 + 103 / 365]])('%s is %s', (text, year) => {
    expect(decimalYear(text)).toBeCloseTo(year, 12);
  });

  it.each(['', '2026', '2026-02-29', '2026-13-01', '2026-00-10', '14.04.2026', '2026-4-14', '2026-04-14x'])('refuses %s', (text) => {
    let thrown: unknown;
    try { decimalYear(text, 'survey.json, date'); } catch (error) { thrown = error; }
    expect(thrown).toBeInstanceOf(UserError);
    expect((thrown as UserError).code).toBe('value_invalid');
  });
});
