import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs, crsCodes } from '../../src/geodesy/crs.js';
import { projectArrays, unprojectArrays } from '../../src/geodesy/projectArrays.js';
import { FOOT_M, US_SURVEY_FOOT_M } from '../../src/units.js';

const DEG_M = 111_320;

function errorOf(run: () => unknown): UserError {
  try { run(); } catch (error) { if (error instanceof UserError) return error; throw error; }
  throw new Error('nothing was thrown');
}

describe('crs', () => {
  it.each([2272, '2272', 'EPSG:2272', 'epsg:2272', ' EPSG:2272 ', 'urn:ogc:def:crs:EPSG::2272', 'http://www.opengis.net/def/crs/EPSG/0/2272'])('takes %s', (code) => {
    expect(crs(code)).toBe(crs(2272));
    expect(crs(code)).toMatchObject({ code: 'EPSG:2272', name: 'NAD83 / Pennsylvania South (ftUS)', datum: 'NAD83', kind: 'projected', unit: 'US survey foot', metresPerUnit: 1200 / 3937 });
  });

  it.each([4968, 'EPSG:32600', '', 'NAD27', 27, -2272, 2272.5, 'ESRI:102729'])('does not know %s', (code) => {
    const error = errorOf(() => crs(code, 'survey.json, crs'));
    expect(error.code).toBe('crs_unknown');
    expect(error.message).toContain('survey.json, crs');
  });

  it('names systems of the name that was given instead of a code', () => {
    expect(errorOf(() => crs('NAD83 Pennsylvania South')).message).toContain('EPSG:2272 (NAD83 / Pennsylvania South (ftUS))');
    expect(errorOf(() => crs('UTM 17N NAD27')).complaint.advice).toContain('EPSG:26717');
  });

  it('holds what surveys are made in, in the legal units', () => {
    // Legal foot of a state. Source: NOAA Manual NOS NGS 5 and EPSG.
    expect(crs(2223).unit).toBe('foot'); // Arizona Central
    expect(crs(2253).unit).toBe('foot'); // Michigan South
    expect(crs(2273).unit).toBe('foot'); // South Carolina
    expect(crs(2278).unit).toBe('US survey foot'); // Texas South Central
    expect(crs(6588).datum).toBe('NAD83(2011)');
    expect(crs(32040)).toMatchObject({ datum: 'NAD27', unit: 'US survey foot' });
    for (let zone = 1; zone <= 60; zone++) {
      expect(crs(32600 + zone).datum).toBe('WGS 84');
      expect(crs(32700 + zone).datum).toBe('WGS 84');
    }
    for (let zone = 1; zone <= 22; zone++) {
      expect(crs(26700 + zone).name).toBe(`NAD27 / UTM zone ${zone}N`);
      expect(crs(26900 + zone).name).toBe(`NAD83 / UTM zone ${zone}N`);
    }
    for (const code of [4267, 4269, 6318, 4326]) expect(crs(code)).toMatchObject({ kind: 'geographic', unit: 'degree', metresPerUnit: 1 });
    expect(crsCodes().length).toBeGreaterThan(1400);
  });

  it('keeps false eastings to the micrometre', () => {
    // Pennsylvania South 600000 m; Alaska zone 2 NAD27 500000 ft US; Montana 600000 m in international feet.
    expect(crs(2272).forward(-77.75, 40)[0]).toBeCloseTo(600_000, 6);
    expect(crs(26732).forward(-142, 60)[0]).toBeCloseTo(500_000 * US_SURVEY_FOOT_M, 6);
    expect(crs(2256).forward(-109.5, 46)[0]).toBeCloseTo(599_999.9999976, 6);
  });
});

describe('published coordinates', () => {
  // Source: IOGP Guidance Note 7-2, the worked example of each method.
  it.each([
    ['Lambert (2SP), NAD27 / Texas South Central', 32040, -96, 28.5, 2963503.91, 254759.80, US_SURVEY_FOOT_M],
    ['Lambert (2SP Michigan), NAD27 / Michigan Central', 6201, -(83 + 10 / 60), 43.75, 2308335.75, 160210.48, US_SURVEY_FOOT_M],
    ['Pseudo-Mercator', 3857, -(100 + 20 / 60), 24 + 22 / 60 + 54.433 / 3600, -11169055.58, 2800000.0, 1],
  ])('%s', (_, code, lon, lat, east, north, unitM) => {
    const [x, y] = crs(code).forward(lon, lat);
    expect(Math.abs(x / unitM - east)).toBeLessThan(0.0051);
    expect(Math.abs(y / unitM - north)).toBeLessThan(0.0051);
    const [lonBack, latBack] = crs(code).inverse(east * unitM, north * unitM);
    expect(Math.abs(lonBack - lon) * DEG_M).toBeLessThan(0.01);
    expect(Math.abs(latBack - lat) * DEG_M).toBeLessThan(0.01);
  });

  it('tells the two feet apart by 4.0 ft of easting in Utah North', () => {
    // Source: IOGP GIGS test 5103: the same place in EPSG:2280 (foot) and EPSG:3560 (US survey foot), some 2,000,000 ft east.
    const [inFeet] = crs(2280).forward(-110.2, 41);
    const [inSurveyFeet] = crs(3560).forward(-110.2, 41);
    expect(crs(2280).metresPerUnit).toBe(FOOT_M);
    // Utah's law rounds the false easting to 500000.0001504 m in feet and 500000.00001016 m in survey feet (EPSG).
    expect(inFeet - inSurveyFeet).toBeCloseTo(0.00014024, 7);
    const apart = inFeet / crs(2280).metresPerUnit - inSurveyFeet / crs(3560).metresPerUnit;
    expect(apart).toBeGreaterThan(3.95);
    expect(apart).toBeLessThan(4.05);
  });

  it('gives State Plane values of the old USGS projection program', () => {
    // Source: PROJ's test suite, tables of that program, US survey feet, printed to 0.001.
    for (const [code, lon, lat, east, north] of [[26732 + 1, -146, 56 + 30.5 / 60, 500000, 916085.508], [26737, -162, 65.25, 700000, 4111525.687]] as const) {
      const [x, y] = crs(code).forward(lon, lat);
      expect(Math.abs(x / US_SURVEY_FOOT_M - east)).toBeLessThan(0.002);
      expect(Math.abs(y / US_SURVEY_FOOT_M - north)).toBeLessThan(0.002);
    }
  });
});

describe('projections', () => {
  it('come back to the same place everywhere in every area of use', () => {
    let worst = 0;
    for (const code of crsCodes()) {
      const system = crs(code);
      const { west, south, east, north } = system.areaOfUse;
      const width = east >= west ? east - west : east - west + 360;
      for (const u of [0.02, 0.5, 0.98]) {
        for (const v of [0.02, 0.5, 0.98]) {
          const [lon, lat] = [west + u * width, south + v * (north - south)];
          const [lonBack, latBack] = system.inverse(...system.forward(lon, lat));
          const turn = ((lonBack - lon + 540) % 360) - 180;
          worst = Math.max(worst, Math.hypot(turn * Math.cos((lat * Math.PI) / 180), latBack - lat) * DEG_M);
        }
      }
    }
    expect(worst).toBeLessThan(5e-6);
  });

  it.each([[NaN, 40], [-78, NaN], [Infinity, 40], [-78, 91], [-78, -90.1], [400, 40]])('refuse longitude %s, latitude %s', (lon, lat) => {
    for (const code of [2272, 32617, 26731, 3857, 4267]) expect(errorOf(() => crs(code).forward(lon, lat)).code).toBe('position_invalid');
  });

  it('never return what is not finite at a pole or far from the zone', () => {
    for (const code of [2272, 32617, 26731, 3857, 5070]) {
      for (const [lon, lat] of [[-81, 90], [-81, -90], [9, 0], [99, 0], [102.25, -39]] as const) {
        try {
          const [x, y] = crs(code).forward(lon, lat);
          expect(Number.isFinite(x) && Number.isFinite(y)).toBe(true);
        } catch (error) {
          expect((error as UserError).code).toBe('position_invalid');
        }
      }
    }
    // A cone cannot show the other pole.
    expect(errorOf(() => crs(2272).forward(-77, -90)).code).toBe('position_invalid');
  });

  it.each([[NaN, 0], [0, Infinity]])('refuse easting %s, northing %s', (east, north) => {
    for (const code of [2272, 32617, 26731, 3857]) expect(errorOf(() => crs(code).inverse(east, north)).code).toBe('position_invalid');
  });

  it('run over columns as over single places, and leave a gap a gap', () => {
    const lon = Float64Array.of(-78, NaN, -77.5, -77.2);
    const lat = Float64Array.of(40, 40, NaN, 40.2);
    const { x, y } = projectArrays(crs(2272), lon, lat);
    expect([x[0], y[0]]).toEqual(crs(2272).forward(-78, 40));
    expect([x[3], y[3]]).toEqual(crs(2272).forward(-77.2, 40.2));
    expect([x[1], y[1], x[2], y[2]]).toEqual([NaN, NaN, NaN, NaN]);
    const back = unprojectArrays(crs(2272), x, y);
    expect(back.x[0]).toBeCloseTo(-78, 10);
    expect(back.y[3]).toBeCloseTo(40.2, 10);
    expect(back.x[1]).toBeNaN();
    expect(() => projectArrays(crs(2272), lon, lat.subarray(1))).toThrow();
    expect(errorOf(() => projectArrays(crs(2272), [-78], [140])).code).toBe('position_invalid');
  });
});
