import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import type { Datum } from '../../../src/geodesy/types.js';
import { callOrigins } from '../../../src/records/locationText/callOrigins.js';
import { completeReference } from '../../../src/records/locationText/completeReference.js';
import { formatAngle } from '../../../src/records/locationText/formatAngle.js';
import { formatLength } from '../../../src/records/locationText/formatLength.js';
import { parseLocation } from '../../../src/records/locationText/parseLocation.js';
import { projectedCrs } from '../../../src/records/locationText/projectedCrs.js';
import { stateZones } from '../../../src/records/locationText/statePlaneZones.js';
import type { ProjectedStatement, SectionStatement } from '../../../src/records/locationText/types.js';
import { US_SURVEY_FOOT_M } from '../../../src/units.js';
import { dms, PA_SOUTH, projected, SECOND, trs, UTM17 } from './statements.js';

const code = (run: () => unknown): string => {
  try {
    run();
  } catch (error) {
    if (error instanceof UserError) return error.code;
    throw error;
  }
  return 'none';
};

describe('projectedCrs', () => {
  // EPSG codes as the EPSG registry has them: 2272 and 32129 Pennsylvania South, 4455 on NAD27, 26717 and 26917 UTM 17N.
  it.each<[Partial<ProjectedStatement>, Datum, number]>([
    [{ system: PA_SOUTH, unit: 'US survey foot' }, 'NAD83', 2272],
    [{ system: PA_SOUTH, unit: 'foot' }, 'NAD83', 2272],
    [{ system: PA_SOUTH, unit: 'metre' }, 'NAD83', 32129],
    [{ system: PA_SOUTH, unit: null }, 'NAD27', 4455],
    [{ system: PA_SOUTH, unit: 'foot', datum: 'NAD27' }, 'NAD83', 4455],
    [UTM17, 'NAD27', 26717],
    [UTM17, 'NAD83', 26917],
    [{ system: { kind: 'State Plane', zone: 404, name: 'California zone 4' }, unit: 'foot' }, 'NAD27', 26744],
    [{ system: { kind: 'State Plane', zone: 3601, name: 'Oregon North' }, unit: 'foot' }, 'NAD83', 2269],
  ])('finds %j on %s', (rest, datum, epsg) => {
    expect(projectedCrs(projected(1_900_000, 300_000, rest), datum, 'x').epsg).toBe(epsg);
  });

  it('guesses neither unit nor system', () => {
    expect(code(() => projectedCrs(projected(1, 1, { system: PA_SOUTH, unit: null }), 'NAD83', 'x'))).toBe('crs_unknown');
    expect(code(() => projectedCrs(projected(1, 1, { system: PA_SOUTH, unit: 'metre' }), 'NAD27', 'x'))).toBe('crs_unknown');
    expect(code(() => projectedCrs(projected(1, 1), 'NAD83', 'x'))).toBe('crs_unknown');
    // Utah's zones are in the registry in both feet.
    expect(code(() => projectedCrs(projected(1, 1, { system: { kind: 'State Plane', zone: 4301, name: 'Utah North' }, unit: 'foot' }), 'NAD83', 'x'))).toBe('crs_unknown');
  });

  it('knows every zone on at least one datum, by the name that its table gives', () => {
    const zones = stateZones();
    expect(zones.length).toBeGreaterThan(120);
    for (const { zone, name } of zones) {
      const found = (['NAD83', 'NAD27'] as const).filter((datum) => code(() => projectedCrs(projected(1, 1, { system: { kind: 'State Plane', zone, name }, unit: datum === 'NAD83' ? 'metre' : null }), datum, 'x')) === 'none');
      expect(found, `${zone} ${name}`).not.toEqual([]);
      // A zone's number is its state's number in the standard times a hundred, and a few (NOAA Manual NOS NGS 5).
      expect((parseLocation(`Easting 1 Northing 1 State Plane zone ${zone}`, 'x') as ProjectedStatement).system).toEqual({ kind: 'State Plane', zone, name });
    }
  });
});

describe('completeReference', () => {
  it('puts text and columns together', () => {
    expect(completeReference({ section: 12 }, trs('-5N-3W', { meridian: 'Sixth' }), 'x')).toEqual(trs('12-5N-3W', { meridian: 'Sixth' }));
  });

  it('refuses what is missing and what disagrees', () => {
    expect(() => completeReference({ section: 12 }, {}, 'x')).toThrow(/without its township and range/);
    expect(() => completeReference(trs('12-5N-3W'), { section: 13 }, 'x')).toThrow(/section 12 in the location and 13/);
    expect(() => completeReference(trs('12-5N-3W'), { rangeDir: 'E' }, 'x')).toThrow(UserError);
  });
});

describe('callOrigins', () => {
  it.each<[string, boolean, boolean]>([
    ['1980 FNL 660 FEL, SE/4 NE/4', true, false],
    ['330 FSL 330 FWL, NE/4 SW/4', false, true],
    ['660 FNL 660 FEL, NE/4 NE/4', true, true],
    ['2310 FNL 2310 FEL, SW/4 SW/4', false, false],
    ['2640 FNL 1320 FWL, NW/4', true, true],
    ['2640 FNL 1320 FWL, S/2 NW/4', true, false],
  ])('of %s: section %s, part %s', (text, fromSection, fromPart) => {
    const { footage, part } = parseLocation(text, 'x') as SectionStatement;
    expect(footage!.of).toBe('unsaid');
    expect(callOrigins(footage!.calls, part!.steps)).toEqual({ section: fromSection, part: fromPart });
  });
});

describe('formatAngle and formatLength', () => {
  it.each<[number, number, string]>([
    [dms(39, 22, 30), SECOND, '39°22\'30"'], [dms(39, 0, 0), SECOND, '39°00\'00"'], [dms(39, 59, 59.96), SECOND / 10, '40°00\'00.0"'],
    [39.5, 1 / 600, "39°30.0'"], [39.5, 0.001, '39.500'], [39, 1, '39'],
  ])('%d to %d is %s', (deg, resolution, text) => {
    expect(formatAngle(deg, resolution)).toBe(text);
  });

  it.each<[number, number, string]>([
    [660, 1, '660 ft'], [660, 16.5, '40 rods'], [660, 66, '10 chains'], [660, 0.66, '10.00 chains'], [660.66, 0.66, '10.01 chains'], [660.5, 0.5, '660 1/2 ft'], [318.5, 1, '19 rods 5 ft'], [0, 1, '0 ft'],
  ])('%d ft to %d ft is %s', (ft, digit, text) => {
    expect(formatLength({ m: ft * US_SURVEY_FOOT_M, resolutionM: digit * US_SURVEY_FOOT_M })).toBe(text);
  });

  it('does not hide a resolution that no digit has', () => {
    expect(() => formatLength({ m: 201.2, resolutionM: 0.017 })).toThrow(RangeError);
    expect(() => formatAngle(39, 0.37)).toThrow(RangeError);
  });
});
