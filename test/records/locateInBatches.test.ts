import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { Random } from '../../src/numerics/random.js';
import { locateInBatches, locateRecords } from '../../src/records/locateRecords.js';
import type { RecordSource } from '../../src/records/recordSource.js';
import type { Records } from '../../src/records/types.js';
import { parseCsv } from '../../src/table/parseCsv.js';
import { testSite } from './testSite.js';

const settings = { columns: { recordId: 'id', latitude: 'lat', longitude: 'lon', datum: 'datum' }, unknownDatum: { NAD27: 0.7, NAD83: 0.3 } } as const;

function file(name: string, rows: readonly string[]): RecordSource {
  return { kind: 'table', name, settings, table: parseCsv(['id,lat,lon,datum', ...rows].join('\n'), name) };
}

/** Rows about the test site, of several digits and datums, one in ten unreadable. */
const random = new Random(8);
const rows = Array.from({ length: 57 }, (_, i) => {
  const place = `${(39.3 + 0.01 * random.uniform()).toFixed(3 + (i % 4))},${(-80.2 - 0.01 * random.uniform()).toFixed(3 + (i % 4))}`;
  return `w${i},${i % 10 === 9 ? 'no,where' : place},${['NAD27', '', 'NAD83'][i % 3]}`;
});

function together(batches: Iterable<Records>): Pick<Records, 'placed' | 'unplaced'> {
  const all = [...batches];
  return { placed: all.flatMap(({ placed }) => placed), unplaced: all.flatMap(({ unplaced }) => unplaced) };
}

describe('locateInBatches', () => {
  it('gives the same records whatever the size of a batch', () => {
    const sources = [file('a.csv', rows), file('b.csv', rows.map((row) => `b${row}`))];
    const whole = together(locateInBatches(sources, testSite(), { batchRows: 1000 }));
    expect(whole.placed).toHaveLength(104);
    for (const batchRows of [1, 10, 57]) expect(together(locateInBatches(sources, testSite(), { batchRows }))).toEqual(whole);
    // Nothing here is the same well twice, so the list as a whole has the same records.
    expect(locateRecords([sources[0]!], testSite()).placed).toEqual(whole.placed.slice(0, 52));
  });

  it('holds no more rows than a batch has', () => {
    const sizes = [...locateInBatches([file('a.csv', rows)], testSite(), { batchRows: 10 })].map(({ placed, unplaced }) => placed.length + unplaced.length);
    expect(sizes).toEqual([10, 10, 10, 10, 10, 7]);
  });

  it('reads a file when its turn comes', () => {
    const read: string[] = [];
    const sources = function* (): Generator<RecordSource> {
      for (const name of ['a.csv', 'b.csv']) {
        read.push(name);
        yield file(name, rows);
      }
    };
    const batches = locateInBatches(sources(), testSite(), { batchRows: 30 });
    batches.next();
    expect(read).toEqual(['a.csv']);
  });

  it('knows a row of an earlier batch again', () => {
    const twice = ['A,39.3001,-80.2001,NAD83', 'B,39.3002,-80.2002,NAD83', 'A,39.3001,-80.2001,NAD83', 'B,39.3009,-80.2009,NAD83'];
    const { placed, unplaced } = together(locateInBatches([file('a.csv', twice)], testSite(), { batchRows: 1 }));
    expect(placed.map(({ recordId }) => recordId)).toEqual(['A', 'B', 'B#2']);
    expect(unplaced.map(({ row, problem }) => [row, problem])).toEqual([[3, 'repeats the id and the place of a.csv, row 1']]);
  });

  it('throws a slip that a whole file shares at its end', () => {
    const swapped = ['A,-80.2001,39.3001,NAD83', 'B,-80.2002,39.3002,NAD83', 'C,-80.2003,39.3003,NAD83'];
    const batches = locateInBatches([file('a.csv', swapped)], testSite(), { batchRows: 1 });
    expect(() => together(batches)).toThrow(UserError);
  });
});
