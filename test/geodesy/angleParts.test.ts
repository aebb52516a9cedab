import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { packedParts } from '../../src/geodesy/angleParts.js';
import { parseAngle, type Axis } from '../../src/geodesy/parseAngle.js';

const S = 1 / 3600;

describe('angles whose spelling the column is known for', () => {
  it.each<[string, Axis, number, number]>([
    ['392230', 'latitude', 39 + 22 / 60 + 30 * S, S],
    ['392230.5 N', 'latitude', 39 + 22 / 60 + 30.5 * S, S / 10],
    ['-0801500.25', 'longitude', -(80 + 15 / 60 + 0.25 * S), S / 100],
    ['801500W', 'longitude', -(80 + 15 / 60), S],
    ['1041530', 'longitude', 104 + 15 / 60 + 30 * S, S],
    ['39.375', 'latitude', 39.375, 1e-3],
    ['39', 'latitude', 39, 1],
  ])('reads packed %s as a %s', (text, axis, deg, resolutionDeg) => {
    const angle = parseAngle(text, axis, 'x', { packed: true });
    expect(angle.deg).toBeCloseTo(deg, 12);
    expect(angle.resolutionDeg).toBeCloseTo(resolutionDeg, 15);
  });

  it.each<[string, number, number]>([['39,3750', 39.375, 1e-4], ['39° 22,5\'', 39.375, 1 / 600], ['39°22\'30,25" N', 39 + 22 / 60 + 30.25 * S, S / 100]])('reads %s with a decimal comma', (text, deg, resolutionDeg) => {
    const angle = parseAngle(text, 'latitude', 'x', { decimalComma: true });
    expect(angle.deg).toBeCloseTo(deg, 12);
    expect(angle.resolutionDeg).toBeCloseTo(resolutionDeg, 15);
  });

  it.each<[string, Axis]>([['396130', 'latitude'], ['392260', 'latitude'], ['0392230', 'latitude'], ['912230', 'latitude'], ['1811500', 'longitude'], ['39223', 'latitude'], ['39,375,1', 'latitude']])('refuses %s as a %s all the same', (text, axis) => {
    expect(() => parseAngle(text, axis, 'x', { packed: true, decimalComma: true })).toThrow(UserError);
  });

  it('leaves both out where nobody asks for them', () => {
    expect(() => parseAngle('392230', 'latitude', 'x')).toThrow(UserError);
    expect(() => parseAngle('39,3750', 'latitude', 'x')).toThrow(UserError);
  });

  it('cuts digits that run together', () => {
    expect(packedParts('0801500.5', null)).toEqual(['080', '15', '00.5']);
    expect(packedParts('0801500', 'latitude')).toBeNull();
    expect(packedParts('80150', null)).toBeNull();
  });
});
