import { describe, expect, it } from 'vitest';
import { convergenceDeg, pointScale } from '../../src/geodesy/convergence.js';
import { crs } from '../../src/geodesy/crs.js';

const RAD = Math.PI / 180;
/** GRS 1980. */
const E2 = 0.00669438002290;

/** Cone constant of Lambert with two standard parallels. Source: Snyder 1987, equations 14-15, 15-8 and 15-9. */
function coneConstant(lat1: number, lat2: number): number {
  const e = Math.sqrt(E2);
  const m = (lat: number): number => Math.cos(lat) / Math.sqrt(1 - E2 * Math.sin(lat) ** 2);
  const t = (lat: number): number => Math.tan(Math.PI / 4 - lat / 2) / ((1 - e * Math.sin(lat)) / (1 + e * Math.sin(lat))) ** (e / 2);
  return Math.log(m(lat1 * RAD) / m(lat2 * RAD)) / Math.log(t(lat1 * RAD) / t(lat2 * RAD));
}

describe('convergenceDeg', () => {
  it('is the cone constant times the longitude from the meridian, for Lambert', () => {
    const n = coneConstant(40 + 58 / 60, 39 + 56 / 60);
    for (const [lon, lat] of [[-80.4, 40], [-77.75, 40.3], [-74.8, 39.8]] as const) {
      expect(Math.abs(convergenceDeg(crs(2272), ...crs(2272).forward(lon, lat)) - n * (lon + 77.75))).toBeLessThan(1e-6);
    }
  });

  it('follows the series for Transverse Mercator', () => {
    // Source: NOAA Manual NOS NGS 5, section 3.33: γ = ω sinφ (1 + F2 L² (…)) with L = Δλ cosφ, F2 = (1 + 3η² + 2η⁴)/3, F4 = (2 − tan²φ)/15.
    for (const [lon, lat] of [[-78.3, 40], [-81, 35], [-83.7, 45]] as const) {
      const dl = (lon + 81) * RAD;
      const eta2 = (E2 / (1 - E2)) * Math.cos(lat * RAD) ** 2;
      const l2 = (dl * Math.cos(lat * RAD)) ** 2;
      const gamma = dl * Math.sin(lat * RAD) * (1 + l2 * ((1 + 3 * eta2 + 2 * eta2 ** 2) / 3 + (l2 * (2 - Math.tan(lat * RAD) ** 2)) / 15));
      expect(Math.abs(convergenceDeg(crs(26917), ...crs(26917).forward(lon, lat)) - gamma / RAD)).toBeLessThan(1e-6);
    }
  });

  it('is positive east of the meridian in the north, negative in the south, nothing in degrees', () => {
    expect(convergenceDeg(crs(32617), 700_000, 4_400_000)).toBeGreaterThan(1);
    expect(convergenceDeg(crs(32717), 700_000, 5_600_000)).toBeLessThan(-1);
    expect(convergenceDeg(crs(32617), 500_000, 4_400_000)).toBeCloseTo(0, 9);
    expect(convergenceDeg(crs(4269), -80, 40)).toBe(0);
  });

  it('throws rather than return a number for no place', () => {
    expect(() => convergenceDeg(crs(32617), NaN, 0)).toThrow();
  });
});

describe('pointScale', () => {
  it('is 0.9996 on a UTM meridian, the scale of the zone on a State Plane one, 1 on a standard parallel', () => {
    expect(Math.abs(pointScale(crs(32617), 500_000, 4_400_000) - 0.9996)).toBeLessThan(1e-8);
    expect(Math.abs(pointScale(crs(26729), ...crs(26729).forward(-85.8333333333333, 32)) - 0.99996)).toBeLessThan(1e-8);
    for (const lat of [40 + 58 / 60, 39 + 56 / 60]) expect(Math.abs(pointScale(crs(2272), ...crs(2272).forward(-76, lat)) - 1)).toBeLessThan(1e-8);
    expect(pointScale(crs(2272), ...crs(2272).forward(-76, 40.4))).toBeLessThan(1);
  });

  it('grows with the distance from the meridian as 1 + E²/2R²', () => {
    // Source: NOAA Manual NOS NGS 5, section 3.33, first term; the next is below 1e-7 at 100 km.
    const r = 6_378_000;
    expect(Math.abs(pointScale(crs(32617), 600_000, 4_400_000) / 0.9996 - (1 + (100_000 / 0.9996) ** 2 / 2 / r ** 2))).toBeLessThan(1e-6);
  });
});
