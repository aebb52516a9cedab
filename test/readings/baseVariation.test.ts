import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { baseVariation, readBase } from '../../src/readings/baseVariation.js';
import { REDUCE_DEFAULTS } from '../../src/readings/reduceOptions.js';
import { START_S, table } from './support.js';

function log(times: readonly number[], field: readonly number[]) {
  return readBase({ table: table([{ name: 't', utcS: times.map((t) => START_S + t), decimals: 2 }, { name: 'f', values: field, decimals: 2 }], 'base.csv'), columns: { time: 't', field: 'f' } }, 51_600);
}

function variation(times: readonly number[], base: ReturnType<typeof log>, options = {}) {
  return baseVariation(Float64Array.from(times, (t) => START_S + t), base, { ...REDUCE_DEFAULTS, ...options });
}

function complaint(run: () => unknown): UserError {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error;
    throw error;
  }
  throw new Error('nothing was thrown');
}

describe('baseVariation', () => {
  it('interpolates linearly and counts from the median, by hand', () => {
    const base = log([0, 10, 20, 30, 40], [100, 102, 106, 104, 101]);
    const { variation: v, datumNT } = variation([0, 5, 10, 18, 40], base);
    expect(datumNT).toBe(102);
    [-2, -1, 0, 3.2, -1].forEach((wanted, i) => expect(v[i]).toBeCloseTo(wanted, 9));
  });

  it('is nothing for a constant base', () => {
    const base = log([0, 50, 100], [48_000, 48_000, 48_000]);
    expect([...variation([0, 1, 37.5, 99], base).variation]).toEqual([0, 0, 0, 0]);
  });

  it('fills a gap, leaves it out on request, and leaves out one that is too long', () => {
    const base = log([0, 10, 310, 320, 2000, 2010], [100, 100, 130, 130, 100, 100]);
    const filled = variation([5, 160, 1000], base);
    expect(filled.variation[1]! - filled.variation[0]!).toBeCloseTo(15, 9);
    expect(filled.variation[2]).toBeNaN();
    expect(filled).toMatchObject({ filled: 1, longestFilledS: 300, uncovered: 1 });
    const left = variation([5, 160, 1000], base, { baseGaps: 'leave_out' });
    expect(left.variation[1]).toBeNaN();
    expect(left).toMatchObject({ filled: 0, uncovered: 2 });
  });

  it('holds its ends for as long as a gap may be', () => {
    const base = log([0, 10], [100, 104]);
    const { variation: v, uncovered } = variation([-50, -70, 5, 60, 80], base);
    expect(v[0]! - v[2]!).toBeCloseTo(-2, 9);
    expect(v[3]! - v[2]!).toBeCloseTo(2, 9);
    expect([v[1], v[4]]).toEqual([NaN, NaN]);
    expect(uncovered).toBe(2);
  });

  it('leaves false base readings, zeros, empty cells and doubles out, and sorts', () => {
    const times = Array.from({ length: 60 }, (_, i) => 3 * i);
    const field = times.map((_, i) => 51_650 + Math.round(10 * Math.sin(i / 9)) / 100);
    field[20]! += 250;
    const base = log([...times, 6, 30.5, 31.5].toReversed(), [...field, 51_650, 0, NaN].toReversed());
    expect(base.spikes).toBe(1);
    expect(base.timeS).toHaveLength(59);
    expect([...base.timeS]).toEqual([...base.timeS].toSorted((a, b) => a - b));
    expect(Math.max(...base.field)).toBeLessThan(51_651);
  });

  it('refuses a log that does not overlap, with both spans, and sees hours of a wrong zone', () => {
    const base = log([4 * 3600, 4 * 3600 + 600], [100, 100]);
    const error = complaint(() => variation([0, 600], base));
    expect(error.code).toBe('base_no_overlap');
    expect(error.message).toContain('2026-04-14T17:05:00Z to 2026-04-14T17:15:00Z');
    expect(error.message).toContain('2026-04-14T13:05:00Z to 2026-04-14T13:15:00Z');
    expect(error.message).toContain('4 h apart');
    expect(complaint(() => variation([-40 * 86_400], base)).message).toContain('check the dates');
  });

  it('refuses a log in microtesla and takes one that counts from its own zero', () => {
    const error = complaint(() => log([0, 3, 6], [51.61, 51.62, 51.61]));
    expect(error.code).toBe('field_out_of_range');
    expect(error.message).toContain('base.csv, column f');
    expect([...variation([3], log([0, 3, 6], [-4, 2, 6])).variation]).toEqual([0]);
  });

  it('refuses a log with fewer than two readings', () => {
    expect(complaint(() => log([0, 1], [0, 51_000])).code).toBe('no_data');
  });
});
