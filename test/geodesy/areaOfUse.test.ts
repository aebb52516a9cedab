import { describe, expect, it } from 'vitest';
import { areaOfUseWarning } from '../../src/geodesy/areaOfUse.js';
import { crs } from '../../src/geodesy/crs.js';

function km(text: string | null): number {
  return Number(/lies ([\d.]+) km outside/.exec(text ?? '')?.[1]);
}

describe('areaOfUseWarning', () => {
  it('is silent inside, on the edge and for no place', () => {
    expect(areaOfUseWarning(crs(2272), -79, 40.2)).toBeNull();
    expect(areaOfUseWarning(crs(2272), -80.53, 41.18)).toBeNull();
    expect(areaOfUseWarning(crs(2272), -80.532, 40)).toBeNull();
    expect(areaOfUseWarning(crs(2272), NaN, 40)).toBeNull();
    expect(areaOfUseWarning(crs(2272), -78, 117)).toBeNull();
  });

  it('says how far, along the meridian', () => {
    // One degree of latitude at 41.7° is 111.07 km (WGS 84 meridian arc).
    const text = areaOfUseWarning(crs(2272), -78, 42.18);
    expect(km(text)).toBe(111);
    expect(text).toContain('EPSG:2272 NAD83 / Pennsylvania South (ftUS)');
  });

  it('says how far, across meridians, to the nearest point of the side', () => {
    // 90 km east of the side at 40° N: 1.0539° of 85.394 km.
    expect(km(areaOfUseWarning(crs(2272), -74.72 + 90 / 85.394, 40))).toBe(90);
    expect(km(areaOfUseWarning(crs(2272), -74.72 + 3 / 85.394, 40))).toBeCloseTo(3, 1);
  });

  it('says how far, to a corner', () => {
    const text = areaOfUseWarning(crs(2272), -74, 42);
    expect(km(text)).toBe(Math.round(Math.hypot(0.72 * 83.3, 0.82 * 111.06)));
  });

  it('counts across the 180th meridian', () => {
    // NAD27's area runs from 167.65° E over the Pacific to 47.74° W.
    expect(areaOfUseWarning(crs(4267), 175, 53)).toBeNull();
    expect(areaOfUseWarning(crs(4267), -175, 53)).toBeNull();
    expect(areaOfUseWarning(crs(4267), 185, 53)).toBeNull();
    expect(km(areaOfUseWarning(crs(4267), 160, 53))).toBeGreaterThan(400);
  });

  it('finds a wrong sign far away', () => {
    expect(km(areaOfUseWarning(crs(2272), 79, 40.2))).toBeGreaterThan(9000);
    expect(km(areaOfUseWarning(crs(2272), -79, -40.2))).toBeGreaterThan(8000);
  });
});
