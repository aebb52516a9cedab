import { describe, expect, it } from 'vitest';
import { ByteText } from '../../src/table/byteText.js';
import { column } from '../../src/table/column.js';
import { numberColumn } from '../../src/table/numberColumn.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { parseTimeColumn } from '../../src/table/parseTimeColumn.js';
import { writeCsv } from '../../src/table/writeCsv.js';

const text = (bytes: Uint8Array): string => new TextDecoder().decode(bytes);

function number(value: number, decimals: number): string {
  const out = new ByteText();
  out.number(value, decimals);
  return text(out.toBytes());
}

describe('numbers', () => {
  it.each([
    [0, 0, '0'], [-0, 2, '0.00'], [-0.004, 2, '0.00'], [-0.005, 2, '-0.01'], [0.05, 2, '0.05'], [1.5, 0, '2'], [-1.5, 0, '-2'], [12.345, 1, '12.3'], [0.001, 3, '0.001'],
    [123456789.25, 2, '123456789.25'], [-79.123456789, 9, '-79.123456789'], [4e9, 0, '4000000000'], [1e15, 3, '1000000000000000.000'], [1e18, 0, '1000000000000000000'],
    [2 ** 31, 0, '2147483648'], [2 ** 31 - 1, 0, '2147483647'], [NaN, 3, ''], [99.9999, 2, '100.00'],
  ])('%d with %d decimals', (value, decimals, expected) => expect(number(value, decimals)).toBe(expected));
  it('agrees with the language wherever rounding is not a tie', () => {
    for (let i = 0; i < 5000; i++) {
      const value = Math.sin(i * 12.9898) * 10 ** (i % 8);
      const decimals = i % 7;
      expect(number(value, decimals)).toBe(value.toFixed(decimals).replace(/^-(0\.?0*)$/, '$1'));
    }
  });
  it('does not write an infinity', () => expect(() => number(Infinity, 2)).toThrow('infinity'));
});

describe('writeCsv', () => {
  it('quotes what has to be quoted', () => {
    const bytes = writeCsv([{ name: 'a,b', texts: ['x', 'say "so"', 'two\nlines', ' edge', 'Ő, 北'] }, { name: 'v', values: [1, NaN, -0, 2.25, 3], decimals: 1 }]);
    expect(text(bytes)).toBe('"a,b",v\nx,1.0\n"say ""so""",\n"two\nlines",0.0\n" edge",2.3\n"Ő, 北",3.0\n');
  });
  it('comes back as it was, across many buffers', () => {
    const count = 20_000;
    const utcS = Float64Array.from({ length: count }, (_, i) => 1776171900 + i / 10);
    const values = Float64Array.from({ length: count }, (_, i) => (i % 50 === 7 ? NaN : Math.round(Math.cos(i) * 5e7) / 1000));
    const texts = Array.from({ length: count }, (_, i) => `größe ${i}, "北"`);
    const table = parseCsv(writeCsv([{ name: 'utc', utcS, decimals: 1 }, { name: 'nt', values, decimals: 3 }, { name: 'note', texts }]), 'x.csv');
    expect(table.notes).toBeUndefined();
    expect(parseTimeColumn(column(table, 'utc'), {}, { source: 'x.csv', column: 'utc' })).toEqual(utcS);
    expect(numberColumn(table, 'nt', { allowEmpty: true })).toEqual(values);
    expect(column(table, 'note')).toEqual(texts);
  });
  it('refuses columns of different lengths', () => {
    expect(() => writeCsv([{ name: 'a', values: [1], decimals: 0 }, { name: 'b', values: [], decimals: 0 }])).toThrow('rows');
  });
});
