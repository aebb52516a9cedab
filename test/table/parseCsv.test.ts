import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { column } from '../../src/table/column.js';
import { numberColumn } from '../../src/table/numberColumn.js';
import { parseCsv } from '../../src/table/parseCsv.js';

const utf8 = (text: string): Uint8Array => new TextEncoder().encode(text);

function complaint(run: () => unknown): UserError['complaint'] {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.complaint;
    throw error;
  }
  throw new Error('nothing was thrown');
}

describe('parseCsv', () => {
  const CASES: ReadonlyArray<readonly [what: string, text: string, names: string[], rows: string[][]]> = [
    ['plain', 'a,b\n1,2\n3,4\n', ['a', 'b'], [['1', '2'], ['3', '4']]],
    ['no newline at the end', 'a,b\n1,2', ['a', 'b'], [['1', '2']]],
    ['CRLF', 'a,b\r\n1,2\r\n3,4\r\n', ['a', 'b'], [['1', '2'], ['3', '4']]],
    ['line ends of every kind in one file', 'a,b\r\n1,2\n3,4\r5,6\r\n', ['a', 'b'], [['1', '2'], ['3', '4'], ['5', '6']]],
    ['lone CR', 'a,b\r1,2\r', ['a', 'b'], [['1', '2']]],
    ['byte-order mark', '\uFEFFa,b\n1,2\n', ['a', 'b'], [['1', '2']]],
    ['tabs', 'a\tb\n1\t2,5\n', ['a', 'b'], [['1', '2,5']]],
    ['semicolons', 'a;b\n1;2,5\n', ['a', 'b'], [['1', '2,5']]],
    ['quoted separator and quote', 'a,b\n"x, y","say ""so"""\n', ['a', 'b'], [['x, y', 'say "so"']]],
    ['seconds of arc, whose quotation mark stands inside a cell', 'lat,b\n40°18\'07",2\n', ['lat', 'b'], [['40°18\'07"', '2']]],
    ['quoted newline', 'a,b\n"x\ny",2\n', ['a', 'b'], [['x\ny', '2']]],
    ['separator in a quoted name', '"a;x;y",b\n1,2\n', ['a;x;y', 'b'], [['1', '2']]],
    ['names with spaces', ' a , b \n1,2\n', ['a', 'b'], [['1', '2']]],
    ['cells stay as they stand', 'a,b\n 1 ,\n', ['a', 'b'], [[' 1 ', '']]],
    ['one column', 'a\n1\n2\n', ['a'], [['1'], ['2']]],
    ['separator at the end of every line', 'a,b,\n1,2,\n', ['a', 'b'], [['1', '2']]],
    ['other scripts', 'név,β\nŐrség,北\n', ['név', 'β'], [['Őrség', '北']]],
  ];
  it.each(CASES)('%s', (_, text, names, rows) => {
    for (const table of [parseCsv(text, 'x.csv'), parseCsv(utf8(text), 'x.csv')]) {
      expect(table.names).toEqual(names);
      expect(table.rows).toBe(rows.length);
      expect(rows.map((_row, r) => names.map(name => column(table, name)[r]))).toEqual(rows);
      expect(table.notes).toBeUndefined();
    }
  });

  it('leaves blank lines out and says so', () => {
    const table = parseCsv('a,b\n1,2\n\n  \n3,4\n\n', 'x.csv');
    expect(column(table, 'a')).toEqual(['1', '3']);
    expect(table.notes).toHaveLength(1);
    expect(table.notes![0]).toContain('3 blank lines');
  });

  it('reads Windows-1252 with a note, never as broken UTF-8 in silence', () => {
    const table = parseCsv(Uint8Array.of(...utf8('a\nCa'), 0xf1, ...utf8('on '), 0x80, 10), 'x.csv');
    expect(column(table, 'a')).toEqual(['Cañon €']);
    expect(table.notes![0]).toContain('Windows-1252');
  });

  it('reads UTF-16 by its mark', () => {
    const text = '\uFEFFa\tb\r\nő\t2\r\n';
    const bytes = new Uint8Array(Uint16Array.from(text, letter => letter.charCodeAt(0)).buffer);
    expect(column(parseCsv(bytes, 'x.csv'), 'a')).toEqual(['ő']);
  });

  const BAD: ReadonlyArray<readonly [what: string, text: string, code: string, where: string, found: RegExp]> = [
    ['empty file', '', 'file_empty', 'x.csv', /no text/],
    ['blank file', '\uFEFF\r\n  \n', 'file_empty', 'x.csv', /no text/],
    ['header alone', 'a,b\n', 'file_empty', 'x.csv', /no rows/],
    ['short row', 'a,b\n1,2\n3\n', 'file_unreadable', 'x.csv, row 2', /^1 cell$/],
    ['long row', 'a,b\n1,2,3\n', 'file_unreadable', 'x.csv, row 1', /^3 cells$/],
    ['name twice', 'a,b,a\n1,2,3\n', 'file_unreadable', 'x.csv, header', / a twice/],
    ['no name over values', 'a,,c\n1,2,3\n', 'file_unreadable', 'x.csv, header, column 2', /no name/],
    ['open quote', 'a,b\n1,2\n"3,4\n', 'file_unreadable', 'x.csv, row 2', /quotation mark/],
    ['zero byte', 'a,b\n1,\0\n', 'file_unreadable', 'x.csv', /zero byte/],
    ['workbook', 'PK\u0003\u0004', 'file_unreadable', 'x.csv', /ZIP/],
  ];
  it.each(BAD)('refuses: %s', (_, text, code, where, found) => {
    const said = complaint(() => parseCsv(utf8(text), 'x.csv'));
    expect(said.code).toBe(code);
    expect(said.where).toBe(where);
    expect(said.found).toMatch(found);
  });
});

describe('column', () => {
  const table = parseCsv('permit_no,Latitude,lon\n1,2,3\n', 'permits.csv');
  it.each([['latitude', 'Latitude'], ['permitno', 'permit_no'], ['lat_itude', 'Latitude'], ['lom', 'lon']])('%s: hints at %s', (wanted, hint) => {
    const said = complaint(() => column(table, wanted));
    expect(said.code).toBe('column_missing');
    expect(said.where).toBe('permits.csv');
    expect(said.wanted).toContain(wanted);
    expect(said.found).toContain('permit_no, Latitude, lon');
    expect(said.advice).toContain(hint);
  });
  it('does not hint at a name that is far off', () => {
    expect(complaint(() => column(table, 'depth')).advice).not.toContain('perhaps');
  });
});

describe('numberColumn', () => {
  it('reads every plain form of a number', () => {
    const table = parseCsv('v\n1\n-2.5\n+.5\n 3. \n1e3\n-1.5E-2\n', 'x.csv');
    expect([...numberColumn(table, 'v')]).toEqual([1, -2.5, 0.5, 3, 1000, -0.015]);
  });
  it('makes NaN of an empty cell where that is allowed', () => {
    const table = parseCsv('v,w\n1,x\n,x\nNaN,x\n', 'x.csv');
    expect([...numberColumn(table, 'v', { allowEmpty: true })]).toEqual([1, NaN, NaN]);
    expect(complaint(() => numberColumn(table, 'v'))).toMatchObject({ code: 'value_invalid', where: 'x.csv, row 2, column v', found: 'an empty cell' });
  });
  it.each(['1 2', '0x10', 'Infinity', '12a', '-', '.', '1e', '*', "39°24'"])('refuses %s', text => {
    const table = parseCsv(`v,w\n7,x\n${text},x\n`, 'x.csv');
    const said = complaint(() => numberColumn(table, 'v', { allowEmpty: true }));
    expect(said).toMatchObject({ code: 'value_invalid', where: 'x.csv, row 2, column v', found: JSON.stringify(text) });
  });
  it('says what to do about a decimal comma', () => {
    expect(complaint(() => numberColumn(parseCsv('v;w\n1,5;x\n', 'x.csv'), 'v')).advice).toContain('point');
  });
});
