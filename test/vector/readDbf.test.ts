import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { readDbf } from '../../src/vector/readDbf.js';

/** A table laid out byte by byte, after the published structure: name, kind and width of each column, and rows as text. */
function table(columns: ReadonlyArray<readonly [string, string, number]>, rows: readonly string[], driver = 0): Uint8Array {
  const head = 32 + 32 * columns.length + 1;
  const width = columns.reduce((sum, column) => sum + column[2], 1);
  const bytes = new Uint8Array(head + width * rows.length + 1);
  const view = new DataView(bytes.buffer);
  bytes.set([3, 126, 4, 14]);
  view.setUint32(4, rows.length, true);
  view.setUint16(8, head, true);
  view.setUint16(10, width, true);
  bytes[29] = driver;
  for (const [i, [name, kind, size]] of columns.entries()) {
    bytes.set([...name].map(letter => letter.charCodeAt(0)), 32 + 32 * i);
    bytes[32 + 32 * i + 11] = kind.charCodeAt(0);
    bytes[32 + 32 * i + 16] = size;
  }
  bytes[head - 1] = 0x0d;
  for (const [i, row] of rows.entries()) bytes.set([...row.padEnd(width)].map(letter => letter.charCodeAt(0)), head + i * width);
  return bytes;
}

describe('readDbf', () => {
  it('reads every kind of value, and null for what is none', () => {
    const bytes = table([['NAME', 'C', 6], ['N', 'N', 5], ['F', 'F', 6], ['L', 'L', 1], ['D', 'D', 8], ['MEMO', 'M', 10]], [
      ' a b     7.5  -1e2T202004140000000001', ' c     *****      ?00000000', ' ', '*gone  1    2     N20200101',
    ]);
    expect(readDbf(bytes, null, 'x.dbf').rows).toEqual([
      { NAME: 'a b', N: 7.5, F: -100, L: true, D: '2020-04-14', MEMO: null },
      { NAME: 'c', N: null, F: null, L: null, D: null, MEMO: null },
      { NAME: null, N: null, F: null, L: null, D: null, MEMO: null },
      null,
    ]);
  });
  it.each<[string, string | null, number, string, number]>([
    ['the .cpg', 'CP1252', 0, 'Ca\u00f1on \u0080', 0],
    ['the head', null, 0x57, 'Ca\u00f1on \u0080', 0],
    ['nobody', null, 0, 'Ca\u00f1on \u0080', 1],
  ])('reads texts in the encoding told by %s', (_, label, driver, raw, notes) => {
    const read = readDbf(table([['NAME', 'C', 8]], [` ${raw}`], driver), label, 'x.dbf');
    expect(read.rows).toEqual([{ NAME: 'Cañon €' }]);
    expect(read.notes).toHaveLength(notes);
  });
  it.each([['ISO 8859-1', 'ISO-8859-1'], ['ANSI 1252', 'windows'], ['88591', '']])('knows the label %s', label => {
    expect(readDbf(table([['NAME', 'C', 4]], [' \u00e9']), label, 'x.dbf').rows).toEqual([{ NAME: 'é' }]);
  });
  it('reads Central European and Cyrillic', () => {
    expect(readDbf(table([['NAME', 'C', 4]], [' \u00f5'], 0xc8), null, 'x.dbf').rows).toEqual([{ NAME: 'ő' }]);
    expect(readDbf(table([['NAME', 'C', 4]], [' \u00f5']), '1251', 'x.dbf').rows).toEqual([{ NAME: 'х' }]);
  });
  it.each([0, 10, 40, 70])('refuses a table cut off after %d bytes', length => {
    expect(() => readDbf(table([['NAME', 'C', 6]], [' a', ' b']).slice(0, length), null, 'x.dbf')).toThrow(UserError);
  });
});
