import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { Random } from '../../src/numerics/random.js';
import { numberColumn } from '../../src/table/numberColumn.js';
import { NumberReader, readNumberColumns } from '../../src/table/numberReader.js';
import { parseCsv } from '../../src/table/parseCsv.js';

const encode = (text: string): Uint8Array => new TextEncoder().encode(text);

function code(run: () => unknown): { code: string; where: string } {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return { code: error.code, where: error.complaint.where };
    throw error;
  }
  return { code: 'none', where: '' };
}

/** Digits as files have them: short, long, with and without point, sign, exponent, leading and trailing zeros. */
function written(random: Random): string {
  const digits = (count: number): string => Array.from({ length: count }, () => random.integer(10)).join('');
  const sign = ['', '-', '+', ' '][random.integer(4)]!;
  const whole = digits(random.integer(12));
  const tail = random.integer(3) === 0 ? '' : `.${digits(random.integer(18))}`;
  const body = /\d/.test(whole + tail) ? whole + tail : `${whole}7`;
  return sign + body + (random.integer(8) === 0 ? `e${random.integer(60) - 30}` : '');
}

describe('readNumberColumns', () => {
  it('gives exactly what Number() gives, for 200,000 ways to write a number', () => {
    const random = new Random(1);
    const cells = Array.from({ length: 200_000 }, () => written(random));
    const { columns: [values], rows } = readNumberColumns(encode(`a,v\n${cells.map((cell) => `x,${cell}`).join('\n')}`), ['v'], { source: 'f.csv' });
    expect(rows).toBe(cells.length);
    cells.forEach((cell, n) => {
      if (!Object.is(values![n], Number(cell))) throw new Error(`${cell}: ${values![n]}, not ${Number(cell)}`);
    });
    // The shortest text of any double comes back as that double.
    const doubles = Array.from({ length: 20_000 }, () => random.normal() * 10 ** (random.integer(30) - 15));
    const back = readNumberColumns(encode(`v\n${doubles.join('\n')}\n`), ['v'], { source: 'f.csv' }).columns[0]!;
    doubles.forEach((value, n) => expect(back[n]).toBe(value));
  });

  it.each([
    ['plain', 'x,y\n1,2\n3,4\n'],
    ['semicolons, a mark, carriage returns', '\uFEFFx;y\r\n1.5;2\r\n\r\n3;4'],
    ['carriage returns alone, and tabs', 'x\ty\r1\t2\r3\t4\r'],
    ['blank lines before, between and after', '\n\nx,y\n1,2\n   \n3,4\n\n'],
    ['quotes and separators in other columns', 'name,x,y\n"a, b",1,2\n"c ""d""",3,"4"\n'],
    ['a separator at the end of every line', 'x,y,\n1,2,\n3,4,\n'],
    ['blanks around', ' x , y\n 1 , 2\n3,\t4 \n'],
  ])('reads what parseCsv reads, in pieces of any size: %s', (_, text) => {
    const table = parseCsv(text, 'f.csv');
    const bytes = encode(text);
    for (const size of [1, 2, 3, 5, 1000]) {
      const reader = new NumberReader(['y', 'x'], { source: 'f.csv' });
      for (let at = 0; at < bytes.length; at += size) reader.push(bytes.slice(at, at + size));
      const { columns: [y, x] } = reader.end();
      expect([...y!]).toEqual([...numberColumn(table, 'y')]);
      expect([...x!]).toEqual([...numberColumn(table, 'x')]);
    }
  });

  it.each([
    'x,y\n1,2\n3\n', 'x,y\n1,2\n3,4,5\n', 'x,y\n1,2\n3,1O\n', 'x,y\n1,0x10\n', 'x,y\n1,\n', 'x,y\n1,1.5.2\n', 'x,y\n1,-\n', 'x,y\n1,Infinity\n',
    '', '\n\n', 'x,y\n', 'x,z\n1,2\n', 'x,y,y\n1,2,3\n', 'x,y\n"1,5",2\n',
  ])('complains as parseCsv and numberColumn do: %j', (text) => {
    const slow = code(() => {
      const table = parseCsv(text, 'f.csv');
      numberColumn(table, 'x');
      numberColumn(table, 'y');
    });
    const fast = code(() => readNumberColumns(encode(text), ['x', 'y'], { source: 'f.csv' }));
    expect(slow.code).not.toBe('none');
    expect(fast.code).toBe(slow.code);
    if (slow.where.includes('row')) expect(fast.where).toBe(slow.where);
  });

  it('takes empty cells for NaN where it may', () => {
    const { columns: [v] } = readNumberColumns(encode('v,w\n,1\nnan,1\n2,1\n'), ['v'], { source: 'f.csv', allowEmpty: true });
    expect([...v!]).toEqual([NaN, NaN, 2]);
  });

  it('keeps what it has when its columns grow', () => {
    const rows = 200_000;
    const { columns: [v] } = readNumberColumns(encode(`v\n${Array.from({ length: rows }, (_, n) => n).join('\n')}`), ['v'], { source: 'f.csv' });
    expect(v!.length).toBe(rows);
    expect(v!.every((value, n) => value === n)).toBe(true);
  });
});
