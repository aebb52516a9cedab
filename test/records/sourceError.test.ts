import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { mapErrorSdM, metres, sourceError } from '../../src/records/sourceError.js';

const nothing = { errorM: null, error90M: null, error95M: null };

describe('mapErrorSdM', () => {
  // National Map Accuracy Standards as quoted on USGS topographic maps: 1:24,000 is 40 ft for 90 %; 90 % radial ÷ 2.146.
  it.each([
    { scale: 24_000, radius90Ft: 40, source: 'USGS Fact Sheet 171-99' },
    { scale: 100_000, radius90Ft: 166.7, source: 'USGS Fact Sheet 171-99 (about 167 ft)' },
    { scale: 20_000, radius90Ft: 20_000 / 50 / 12, source: 'the standard: 1/50 inch at 1:20,000' },
    { scale: 12_000, radius90Ft: 12_000 / 30 / 12, source: 'the standard: 1/30 inch above' },
  ])('gives 1:$scale $radius90Ft ft for 90 %', ({ scale, radius90Ft }) => {
    expect(mapErrorSdM(scale) * 2.146 / 0.3048).toBeCloseTo(radius90Ft, 1);
  });
  it('gives 5.7 m per axis at 1:24,000', () => expect(mapErrorSdM(24_000)).toBeCloseTo(5.68, 2));
});

describe('sourceError', () => {
  it('takes a stated error as it is named', () => {
    const gps = { class: 'gps', mapScale: null } as const;
    expect(sourceError({ ...nothing, errorM: 3 }, gps, 'a.csv').sdM).toBe(3);
    // Radial quantiles of a circular Gaussian: 2.1460 σ holds 90 %, 2.4477 σ holds 95 %.
    expect(sourceError({ ...nothing, error90M: 2.146 }, gps, 'a.csv').sdM).toBeCloseTo(1, 4);
    expect(sourceError({ ...nothing, error95M: 2.4477 }, gps, 'a.csv').sdM).toBeCloseTo(1, 4);
  });
  it('falls back to the class and says so', () => {
    expect(sourceError(nothing, { class: 'map', mapScale: 24_000 }, 'a.csv')).toEqual({
      sdM: mapErrorSdM(24_000), words: '1:24,000 map 5.7 m (National Map Accuracy Standards)',
    });
    expect(sourceError(nothing, { class: 'gps', mapScale: null }, 'a.csv').sdM).toBeCloseTo(2.13, 2);
    expect(sourceError(nothing, { class: 'unknown', mapScale: null }, 'a.csv').words).toContain('not stated');
  });
  it('refuses two statements, and a map without a scale', () => {
    expect(() => sourceError({ errorM: 3, error90M: 4, error95M: null }, { class: 'gps', mapScale: null }, 'a.csv')).toThrow(UserError);
    expect(() => sourceError(nothing, { class: 'map', mapScale: null }, 'a.csv')).toThrow(/a\.csv: found source "map" without map_scale/);
    expect(sourceError({ ...nothing, errorM: 12 }, { class: 'map', mapScale: null }, 'a.csv').sdM).toBe(12);
  });
});

describe('metres', () => {
  it.each([[0.123, '0.12 m'], [5.68, '5.7 m'], [1609.3, '1609 m']])('writes %s as %s', (value, text) => expect(metres(value)).toBe(text));
});
