import geographiclib from 'geographiclib-geodesic';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../../src/errors.js';
import { ELLIPSOIDS } from '../../../src/geodesy/ellipsoid.js';
import { placeFromMapCorner } from '../../../src/geodesy/sections/placeFromMapCorner.js';
import { FT } from './madeSection.js';

const CLARKE = ELLIPSOIDS.NAD27;
const where = 'permits.csv, row 3';
const E2 = 0.00676866; // Clarke 1866. Source: Snyder 1987, table 1.
const RAD = Math.PI / 180;

/** Metres along a meridian from the equator. Source: Snyder 1987, equation 3-21. */
function meridianM(latDeg: number): number {
  const p = latDeg * RAD;
  return CLARKE.a * ((1 - E2 / 4 - (3 * E2 ** 2) / 64 - (5 * E2 ** 3) / 256) * p - ((3 * E2) / 8 + (3 * E2 ** 2) / 32 + (45 * E2 ** 3) / 1024) * Math.sin(2 * p)
    + ((15 * E2 ** 2) / 256 + (45 * E2 ** 3) / 1024) * Math.sin(4 * p) - ((35 * E2 ** 3) / 3072) * Math.sin(6 * p));
}

describe('placeFromMapCorner', () => {
  // 5,400 ft south of 39°22'30", 6,100 ft west of 80°15'00".
  const corner = { latDeg: 39.375, lonDeg: -80.25 };
  const offsets = { southM: 5400 * FT, westM: 6100 * FT };
  const place = placeFromMapCorner(corner, offsets, { ellipsoid: CLARKE, where });

  it('goes along the meridian and along the parallel', () => {
    expect(Math.abs(meridianM(corner.latDeg) - meridianM(place.latDeg) - offsets.southM)).toBeLessThan(0.002);
    // Source: Snyder 1987, equation 4-21, radius of a parallel.
    const radius = (CLARKE.a * Math.cos(place.latDeg * RAD)) / Math.sqrt(1 - E2 * Math.sin(place.latDeg * RAD) ** 2);
    expect(Math.abs((corner.lonDeg - place.lonDeg) * RAD * radius - offsets.westM)).toBeLessThan(0.002);
  });

  it('says how far the other readings of the same words lie off', () => {
    const geodesic = new geographiclib.Geodesic.Geodesic(CLARKE.a, 1 / CLARKE.inverseFlattening);
    const meridianFoot = geodesic.Direct(corner.latDeg, corner.lonDeg, 180, offsets.southM);
    const square = geodesic.Direct(meridianFoot.lat2!, meridianFoot.lon2!, 270, offsets.westM);
    const south = geodesic.Inverse(square.lat2!, square.lon2!, place.latDeg, square.lon2!).s12!;
    expect(Math.abs(south - place.readingNorthM)).toBeLessThan(0.001);
    expect(place.readingNorthM / FT).toBeCloseTo(0.73, 1);
    const alongTop = placeFromMapCorner(corner, { westM: offsets.westM }, { ellipsoid: CLARKE, where });
    const east = geodesic.Inverse(place.latDeg, alongTop.lonDeg, place.latDeg, place.lonDeg).s12!;
    expect(Math.abs(east - place.readingEastM)).toBeLessThan(0.001);
    expect(place.readingEastM / FT).toBeCloseTo(1.3, 1);
  });

  it('depends on the ellipsoid by an inch or so, and goes both ways', () => {
    const modern = placeFromMapCorner(corner, offsets, { ellipsoid: ELLIPSOIDS.NAD83, where });
    expect(Math.abs(modern.latDeg - place.latDeg) * 111_000).toBeGreaterThan(0.01);
    expect(Math.abs(modern.latDeg - place.latDeg) * 111_000).toBeLessThan(0.1);
    const back = placeFromMapCorner({ latDeg: place.latDeg, lonDeg: corner.lonDeg }, { northM: offsets.southM }, { ellipsoid: CLARKE, where });
    expect(Math.abs(back.latDeg - corner.latDeg)).toBeLessThan(1e-11);
    const east = placeFromMapCorner(corner, { eastM: 100 }, { ellipsoid: CLARKE, where });
    expect(east.lonDeg).toBeGreaterThan(corner.lonDeg);
    expect(placeFromMapCorner(corner, {}, { ellipsoid: CLARKE, where })).toMatchObject(corner);
  });

  it('refuses what is no corner and no distance', () => {
    const options = { ellipsoid: CLARKE, where };
    for (const bad of [{ southM: 5, northM: 5 }, { eastM: 5, westM: 5 }, { southM: -1 }, { westM: NaN }, { northM: 31_000 }]) {
      expect(() => placeFromMapCorner(corner, bad, options)).toThrow(UserError);
    }
    for (const bad of [{ latDeg: 91, lonDeg: 0 }, { latDeg: NaN, lonDeg: 0 }, { latDeg: 40, lonDeg: 400 }]) {
      expect(() => placeFromMapCorner(bad, {}, options)).toThrow(/permits.csv, row 3/);
    }
  });
});
