import type { Area } from '../../src/density/types.js';
import { crs } from '../../src/geodesy/crs.js';
import type { Datum, DatumShift } from '../../src/geodesy/types.js';
import type { Site } from '../../src/site/types.js';

/** Shift of every datum in these tests: NAD27 moves as NADCON moves it near 39.3 N 80.2 W, the others stay. */
const SHIFTS: Readonly<Record<Datum, { lon: number; lat: number; shift: string; sdM: number; sharedSdM: number }>> = {
  NAD27: { lon: 0.00019, lat: 0.00009, shift: 'test NAD27', sdM: 0.15, sharedSdM: 0 },
  NAD83: { lon: 0, lat: 0, shift: 'none', sdM: 0, sharedSdM: 0 },
  'NAD83(2011)': { lon: 0, lat: 0, shift: 'none (NAD83(2011) as NAD83)', sdM: 0.1, sharedSdM: 0 },
  'WGS 84': { lon: 0, lat: 0, shift: 'none (WGS 84 as NAD83)', sdM: 2, sharedSdM: 5 },
};

export const frame = crs('EPSG:26917');
export const [centreX, centreY] = frame.forward(-80.2, 39.3);

function notUsed(): never {
  throw new Error('records are placed one by one');
}

function square(halfM: number): Area {
  const corners = [[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]] as const;
  return [[corners.map(([sx, sy]) => [centreX + sx * halfM, centreY + sy * halfM] as const)]];
}

/** A parcel of 400 m by 400 m round 39.3 N 80.2 W in UTM 17N (NAD83). */
export function testSite(shifts: Partial<typeof SHIFTS> = {}): Site {
  const known = { ...SHIFTS, ...shifts };
  const parcel = square(200);
  const shiftFrom = (from: Datum): DatumShift => {
    const { lon, lat, ...rest } = known[from];
    return { from, to: 'NAD83', place: (lonDeg, latDeg) => ({ lonDeg: lonDeg + lon, latDeg: latDeg + lat, ...rest }), arrays: notUsed };
  };
  return {
    title: 'Test ground', frame, parcel, exclusions: [], open: parcel, decimalYear: 2026.3,
    mainField: { totalNT: 51_000, inclinationDeg: 65, declinationDeg: -9, convergenceDeg: 0.5, unit: [-0.07, 0.42, -0.906] },
    target: { poleAM: [60, 400], depthM: [0, 2.5], basis: 'test' },
    shiftFrom, toWgs84: { from: 'NAD83', to: 'WGS 84', place: (lonDeg, latDeg) => ({ lonDeg, latDeg, shift: 'none', sdM: 2, sharedSdM: 0 }), arrays: notUsed },
  };
}
