import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { apiStates } from '../../src/records/apiCounties.js';
import { parseApiNumber } from '../../src/records/apiNumber.js';

const WHERE = 'permits.csv, row 7, column api';

describe('parseApiNumber', () => {
  it.each([
    ['3705901234', '37-059-01234'],
    ['370590123400', '37-059-01234-00'],
    ['37059012340001', '37-059-01234-00-01'],
    ['37-059-01234', '37-059-01234'],
    ['37-059-01234-00-01', '37-059-01234-00-01'],
    ['37-059-01234-0001', '37-059-01234-00-01'],
    ['37 059 01234', '37-059-01234'],
    ['37.059.01234.00.00', '37-059-01234-00-00'],
    ['37/059/01234', '37-059-01234'],
    ['37-05901234', '37-059-01234'],
    ['37059-01234', '37-059-01234'],
    ['37\u2013059\u201301234', '37-059-01234'],
    ['API 37-059-01234', '37-059-01234'],
    ['API No. 37-059-01234', '37-059-01234'],
    ['api# 3705901234', '37-059-01234'],
    ['A.P.I. Number: 37-059-01234', '37-059-01234'],
    ['US Well Number 37059012340000', '37-059-01234-00-00'],
    [' 37-059-01234 ', '37-059-01234'],
    ['02-001-20001', '02-001-20001'],
  ])('reads %s as %s', (text, plain) => {
    const number = parseApiNumber(text, WHERE);
    expect(number.text).toBe(plain);
    expect(number.well).toBe(plain.slice(0, 12).replaceAll('-', ''));
    expect(number.remarks).toEqual([]);
    // Its own text reads again to the same.
    expect(parseApiNumber(number.text, WHERE)).toEqual(number);
  });

  it('names the parts', () => {
    // The example of the standard as commonly quoted: Texas, Yoakum County, sidetrack 03.
    expect(parseApiNumber('42-501-20130-03-00', WHERE)).toMatchObject({ state: '42', county: '501', unique: '20130', sidetrack: '03', event: '00', well: '4250120130', remarks: [] });
    expect(parseApiNumber('42-501-20130', WHERE)).toMatchObject({ sidetrack: null, event: null });
  });

  it('takes the state from the options where the file leaves it out', () => {
    expect(parseApiNumber('059-01234', WHERE, { state: '37' }).text).toBe('37-059-01234');
    expect(parseApiNumber('05901234', WHERE, { state: '37' }).text).toBe('37-059-01234');
    expect(parseApiNumber('37-059-01234', WHERE, { state: '37' }).text).toBe('37-059-01234');
    expect(() => parseApiNumber('059-01234', WHERE)).toThrow(UserError);
  });

  it.each([
    ['', /no API number/], ['unknown', /10, 12 or 14 digits/], ['37-059', /it has 5 digits/], ['37-059-0123X', /10, 12 or 14 digits/], ['370590123', /it has 9 digits: where a leading zero/],
    ['2001200010000', /it has 13 digits: where a leading zero/], ['370590123456789', /it has 15 digits/], ['370-59-01234', /marks stand between other digits/], ['37-59-001234', /marks stand between/],
    ['3.7059E+09', /10, 12 or 14 digits/], ['-3705901234', /10, 12 or 14 digits/], ['3705901234; 3705901235', /10, 12 or 14 digits/],
  ])('refuses %s', (text, words) => {
    let thrown: unknown;
    try { parseApiNumber(text, WHERE); } catch (error) { thrown = error; }
    expect(thrown).toBeInstanceOf(UserError);
    expect((thrown as UserError).code).toBe('value_invalid');
    expect((thrown as UserError).message).toMatch(words);
    expect((thrown as UserError).message).toContain(WHERE);
  });

  it.each([
    ['99-001-00001', /state 99 is not in the table/], ['37-002-00001', /county 002 is not in the table for Pennsylvania/], ['37-135-00001', /county 135 is not/], ['60-811-40001', /county 811 was not checked/], ['37-059-00000', /names no well/],
    ['39-059-01234', /none/], ['52-001-00001', /state 52/],
  ])('lists what it does not know of %s', (text, words) => {
    expect(parseApiNumber(text, WHERE).remarks.join('; ') || 'none').toMatch(words);
  });
});

describe('the table of API states and counties', () => {
  it('numbers the states in the order of their names, the District of Columbia among them, then Alaska and Hawaii', () => {
    // Source: API Bulletin D12A: 01 Alabama to 49 Wyoming, 50 Alaska, 51 Hawaii, 55, 56, 60 and 61 offshore.
    const states = [...apiStates().values()];
    expect(states.map((state) => state.code)).toEqual([...Array.from({ length: 51 }, (_, i) => String(i + 1).padStart(2, '0')), '55', '56', '60', '61']);
    const names = states.slice(0, 49).map((state) => state.name);
    expect(names).toEqual([...names].toSorted());
    expect([apiStates().get('42')!.name, apiStates().get('15')!.postal, apiStates().get('47')!.postal]).toEqual(['Texas', 'KS', 'WV']);
  });

  /**
   * Counties in their states, as the Census counts them (2020), where every county of today had its number in 1979 or was
   * given one since; beside them the codes that are no counties (offshore, lakes, cities of Virginia) have been left out.
   */
  it.each([
    ['PA', 67, 133], ['OH', 88, 175], ['WV', 55, 109], ['KY', 120, 239], ['NY', 62, 123], ['TX', 254, 507], ['OK', 77, 153], ['KS', 105, 209], ['CO', 64, 125], ['NM', 33, 61],
    ['UT', 29, 57], ['ND', 53, 105], ['IL', 102, 203], ['IN', 92, 183], ['MI', 83, 165], ['LA', 64, 127], ['MS', 82, 163], ['AL', 67, 133], ['AR', 75, 149], ['MO', 115, 229],
    ['NE', 93, 185], ['TN', 95, 189], ['IA', 99, 197], ['WA', 39, 77], ['OR', 36, 71], ['AZ', 15, 27], ['GA', 159, 321], ['FL', 67, 133], ['MN', 87, 173], ['WI', 72, 141],
  ])('%s has %i counties up to %i', (postal, count, last) => {
    const { counties } = [...apiStates().values()].find((state) => state.postal === postal)!;
    const odd = [...counties!].filter((county) => county <= last && county % 2 === 1).length;
    // Counties founded after the numbering, and Florida's and Georgia's sheets of sea, have even numbers.
    const later: Readonly<Record<string, number>> = { CO: 1, NM: 2, AZ: 1, WI: 1 };
    expect(odd + (later[postal] ?? 0)).toBe(count);
    expect(counties!.has(last)).toBe(true);
    expect(counties!.has(last + 2)).toBe(postal === 'LA');
  });

  it('has the exceptions', () => {
    const has = (state: string, county: number): boolean => apiStates().get(state)!.counties!.has(county);
    // La Paz, Cibola, Los Alamos, Kern's second, Broomfield, Menominee: given later, with even numbers.
    expect([has('02', 12), has('30', 6), has('30', 28), has('04', 30), has('05', 14), has('48', 78)]).toEqual([true, true, true, true, true, true]);
    expect([has('37', 2), has('10', 41), has('51', 1), has('51', 35), has('34', 534)]).toEqual([false, false, false, true, true]);
    expect([...apiStates().values()].reduce((sum, state) => sum + (state.counties?.size ?? 0), 0)).toBe(3669);
  });
});
