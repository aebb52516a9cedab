import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { flagFaults } from '../../src/readings/faults.js';
import type { RawReadings } from '../../src/readings/rawReadings.js';
import { FLAGS } from '../../src/readings/types.js';

const MAIN = 51_600;

function raw(field: readonly number[], change: Partial<RawReadings> = {}): RawReadings {
  const n = field.length;
  return {
    count: n, x: Float64Array.from({ length: n }, (_, i) => i), y: new Float64Array(n), heightM: new Float64Array(n).fill(1.7),
    timeS: Float64Array.from({ length: n }, (_, i) => i), field: Float64Array.from(field), line: new Int32Array(n), lineNames: ['1'],
    shifts: [], shiftSdM: 0, notes: [], ...change,
  };
}

function flags(readings: RawReadings, kind: 'total_field' | 'anomaly' = 'total_field'): string[] {
  return [...flagFaults(readings, { kind, mainNT: MAIN, source: 'readings.csv' })].map((code) => FLAGS[code]!);
}

function complaint(readings: RawReadings, kind: 'total_field' | 'anomaly' = 'total_field'): UserError {
  try {
    flags(readings, kind);
  } catch (error) {
    if (error instanceof UserError) return error;
    throw error;
  }
  throw new Error('nothing was thrown');
}

describe('flagFaults', () => {
  const good = [51_600, 51_700, 51_500, 51_650, 51_620];

  it('flags what is empty, zero or no field of the ground', () => {
    expect(flags(raw([...good, NaN, 0, 99_999, 57_000, 46_000]))).toEqual(['', '', '', '', '', 'dropout', 'dropout', 'out_of_range', '', '']);
  });

  it('flags missing and flown-off positions and repeated times', () => {
    const readings = raw([...good, 51_600, 51_600, 51_600]);
    readings.x[5] = NaN;
    readings.y[6] = 80_000;
    readings.timeS[7] = 6;
    expect(flags(readings).slice(5)).toEqual(['no_position', 'no_position', 'repeat_time']);
  });

  it('takes a zero anomaly for a reading', () => {
    expect(flags(raw([0, -120, 35]), 'anomaly')).toEqual(['', '', '']);
  });

  it.each([
    ['51.6', good.map((v) => v / 1000), 'total_field', 'another unit'],
    ['12.0', [12, -3, 40, 100], 'total_field', '"kind": "anomaly"'],
    ['31000', [31_000, 31_002, 30_998], 'total_field', 'place and the date'],
    ['51620', good, 'anomaly', '"kind": "total_field"'],
  ] as const)('refuses a survey with %s in its middle', (_, field, kind, advice) => {
    const error = complaint(raw(field), kind);
    expect(error.code).toBe('field_out_of_range');
    expect(error.message).toContain('51600 nT');
    expect(error.message).toContain(advice);
  });

  it('refuses readings without any field, or without any position', () => {
    expect(complaint(raw([NaN, 0, NaN])).code).toBe('no_data');
    expect(complaint(raw(good, { x: new Float64Array(5).fill(NaN) })).code).toBe('no_data');
  });
});
