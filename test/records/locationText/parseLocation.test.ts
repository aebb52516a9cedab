import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { formatLocation } from '../../../src/records/locationText/formatLocation.js';
import { parseLocation } from '../../../src/records/locationText/parseLocation.js';
import { RIGHT } from './rightLocations.js';
import { difference } from './statements.js';
import { WRONG } from './wrongLocations.js';

const WHERE = 'permits.csv, row 7, column location';

/** Texts that stand in the table once more with other options. */
const TWICE = 2;
const ROWS = RIGHT.map(([text, statement, options = {}]) => ({ text, statement, options }));

describe('parseLocation', () => {
  it.each(ROWS)('reads $text', ({ text, statement, options }) => {
    expect(difference(parseLocation(text, WHERE, options), statement)).toBeNull();
  });

  it.each(ROWS)('reads $text again as it formats it', ({ text, options }) => {
    const statement = parseLocation(text, WHERE, options);
    expect(difference(parseLocation(formatLocation(statement), WHERE, options), statement)).toBeNull();
  });

  it.each(ROWS)('does not mind capitals and spaces in $text', ({ text, statement, options }) => {
    const loose = `  ${text.toUpperCase().replaceAll(' ', '  ')} `;
    expect(difference(parseLocation(loose, WHERE, options), statement)).toBeNull();
  });

  it.each(WRONG)('refuses %s at %s', (text, spot, wanted) => {
    let thrown: unknown;
    try {
      parseLocation(text, WHERE);
    } catch (error) {
      thrown = error;
    }
    expect(thrown).toBeInstanceOf(UserError);
    const { code, where, found, wanted: said } = (thrown as UserError).complaint;
    expect([code, where]).toEqual(['position_invalid', WHERE]);
    expect(said).toMatch(wanted);
    if (text === '') return;
    expect(found).toContain(JSON.stringify(text));
    expect(found).toMatch(spot === 'its end' ? /at its end$/ : /\(character \d+\)$/);
    if (spot !== 'its end') expect(found).toContain(`at ${JSON.stringify(spot)} (`);
  });

  it('has a table of at least 210 different texts, 60 of them wrong', () => {
    expect(RIGHT.length).toBeGreaterThanOrEqual(150);
    expect(WRONG.length).toBeGreaterThanOrEqual(60);
    expect(new Set([...RIGHT, ...WRONG].map(([text]) => text)).size).toBe(RIGHT.length + WRONG.length - TWICE);
  });

  it('refuses a story before it reads any of it', () => {
    expect(() => parseLocation('660 FNL 1980 FEL '.repeat(100), WHERE)).toThrow(/at most 400 characters/);
  });
});
