import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { CONUS } from '../../src/geodesy/conus.js';
import { crs } from '../../src/geodesy/crs.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { ELLIPSOIDS, metresPerDegree } from '../../src/geodesy/ellipsoid.js';
import { meanShiftAt, MEAN_SHIFT_LEAST_SD_M } from '../../src/geodesy/meanShift.js';
import { parseAngle } from '../../src/geodesy/parseAngle.js';
import type { Datum, ReceiverFrame, ShiftGrid } from '../../src/geodesy/types.js';
import { US_SURVEY_FOOT_M } from '../../src/units.js';

const POINTS = new URL('../../../shared/checks/nad27_nad83_points.csv', import.meta.url);
const WITHOUT_GRID = { shipped: false };

function apartM(lonA: number, latA: number, lonB: number, latB: number): { eastM: number; northM: number; m: number } {
  const { lonM, latM } = metresPerDegree(ELLIPSOIDS.NAD83, latA);
  const [eastM, northM] = [(lonA - lonB) * lonM, (latA - latB) * latM];
  return { eastM, northM, m: Math.hypot(eastM, northM) };
}

function errorOf(run: () => unknown): UserError {
  try { run(); } catch (error) { if (error instanceof UserError) return error; throw error; }
  throw new Error('nothing was thrown');
}

describe('NAD27 to NAD83 by the shipped grid', () => {
  const toNad83 = datumShift('NAD27', 'NAD83');

  it('moves 39.3 N 80.2 W as PROJ does with the same grid', () => {
    // Source: PROJ 9.1, hgridshift with `conus`.
    const place = toNad83.place(-80.2, 39.3);
    expect(place.latDeg).toBeCloseTo(39.300090305836, 10);
    expect(place.lonDeg).toBeCloseTo(-80.199806993403, 10);
    expect(place).toMatchObject({ shift: 'NADCON conus', sdM: 0.15, sharedSdM: 0 });
  });

  // Source: PROJ 9.1, hgridshift with `conus`: Maine, Washington, Texas coast.
  it.each([[-66.99, 44.85, -66.98942363818, 44.850080020848], [-122.3, 47.6, -122.301236449023, 47.599820816087], [-96, 28.5, -96.000243842501, 28.500274795547]])(
    'agrees with PROJ at %s, %s', (lon, lat, lon83, lat83) => {
      const place = toNad83.place(lon, lat);
      expect(place.lonDeg).toBeCloseTo(lon83, 10);
      expect(place.latDeg).toBeCloseTo(lat83, 10);
    });

  // Source: PROJ's test suite, cs2cs with `conus`, printed to 0.001″ (half of which is 1.4e-7°).
  it.each([[-111, 44, -111.000774444, 43.999923611], [-111, 39, -111.000723333, 38.999975556], [-79.966666667, 37.033333333, -79.966423889, 37.0334725]])(
    'agrees with the printed value at %s, %s', (lon, lat, lon83, lat83) => {
      const place = toNad83.place(lon, lat);
      expect(Math.abs(place.lonDeg - lon83)).toBeLessThan(1.4e-7);
      expect(Math.abs(place.latDeg - lat83)).toBeLessThan(1.4e-7);
    });

  it.skipIf(!existsSync(POINTS))('agrees with every published point within its own tolerance', () => {
    const rows = readFileSync(POINTS, 'utf8').trim().split('\n').slice(1);
    for (const row of rows) {
      const [lon27, lat27, lon83, lat83, tolerance] = row.split(',').slice(-5).map(Number) as [number, number, number, number, number];
      const place = toNad83.place(lon27, lat27);
      expect(Math.abs(place.lonDeg - lon83), row).toBeLessThanOrEqual(tolerance);
      expect(Math.abs(place.latDeg - lat83), row).toBeLessThanOrEqual(tolerance);
    }
    expect(rows.length).toBeGreaterThanOrEqual(7);
  });

  it('comes to the same place from every form in which the place is written', () => {
    // UTM and State Plane coordinates of 39.3 N 80.2 W on NAD27. Source: PROJ 9.1, EPSG:4267 to 26717 and 32050.
    const forms: [number, number][] = [
      deg('-80.2', '39.3'), deg('80°12\'00" W', '39°18\'00" N'), deg('W 80 12', '39-18-00'),
      crs(26717).inverse(UTM_17N[0], UTM_17N[1]),
      crs(32050).inverse(WV_NORTH_FT[0] * US_SURVEY_FOOT_M, WV_NORTH_FT[1] * US_SURVEY_FOOT_M),
    ];
    for (const form of forms) {
      const place = toNad83.place(...form);
      expect(place.lonDeg).toBeCloseTo(-80.199806993403, 8);
      expect(place.latDeg).toBeCloseTo(39.300090305836, 8);
    }
  });

  it('comes back to where it started, all over the grid', () => {
    const back = datumShift('NAD83', 'NAD27');
    for (let lon = -124.9; lon < -66; lon += 2.3) {
      for (let lat = 25.1; lat < 49; lat += 1.7) {
        const there = toNad83.place(lon, lat);
        const again = back.place(there.lonDeg, there.latDeg);
        expect(apartM(again.lonDeg, again.latDeg, lon, lat).m).toBeLessThan(1e-6);
        expect(again.shift).toMatch(/^NADCON conus, reversed/);
      }
    }
  });

  it('prefers a grid of the user where it covers the place', () => {
    const local: ShiftGrid = { name: 'grid local.gsb', from: 'NAD27', to: 'NAD83', accuracyM: 0.05, offsetAt: (lon) => (lon > -81 ? [0.0002, 0.0001] : null) };
    const hawaiian: ShiftGrid = { ...local, name: 'grid hawaii.tif', from: 'Old Hawaiian' };
    const shift = datumShift('NAD27', 'NAD83', { grids: [hawaiian, local] });
    expect(shift.place(-80, 40)).toMatchObject({ lonDeg: -79.9998, latDeg: 40.0001, shift: 'grid local.gsb', sdM: 0.05 });
    expect(shift.place(-82, 40).shift).toBe('NADCON conus');
  });
});

function deg(lon: string, lat: string): [number, number] {
  return [parseAngle(lon, 'longitude', 'test').deg, parseAngle(lat, 'latitude', 'test').deg];
}

function on2015(frame: ReceiverFrame): { lonDeg: number; latDeg: number } {
  return datumShift('WGS 84', 'NAD83(2011)', { receiver: { frame, epoch: 2015 } }).place(-80, 40);
}

/** 39.3 N 80.2 W on NAD27, to 0.1 mm. */
const UTM_17N = [568982.1504, 4350165.1951] as const;
const WV_NORTH_FT = [1801903.5293, 292147.9075] as const;

describe('the shipped grid beyond the lower 48', () => {
  it.each([[-79.4, 43.7], [-112, 49.6], [-106, 28.6], [-103, 25.6], [-71.2, 46.8]])('still moves %s, %s, but claims no published accuracy', (lon, lat) => {
    const place = datumShift('NAD27', 'NAD83').place(lon, lat);
    expect(place.shift).toBe('NADCON conus, beyond its area of use');
    expect(place.sdM).toBe(1.5);
  });

  it.each([[-90, 27], [-67.2, 44.9], [-124.2, 40.8], [-97.4, 26.1], [-82.5, 27.9], [-104.9, 48.9], [-70.3, 43.6], [-117, 32.7], [-106.3, 31.9]])('claims it at %s, %s', (lon, lat) => {
    expect(datumShift('NAD27', 'NAD83').place(lon, lat)).toMatchObject({ shift: 'NADCON conus', sdM: 0.15 });
  });
});

describe('NAD27 where no grid covers the place', () => {
  const byMean = datumShift('NAD27', 'NAD83', WITHOUT_GRID);
  const byGrid = datumShift('NAD27', 'NAD83');

  it('misses the grid by 1 to 17 m at places over the lower 48, by no more than its error makes likely', () => {
    // Places spread over the 48 states. Source of the range: physics of the 27 places that PROJ's fall-back was tried at.
    const places = [[-80.2, 39.3], [-68.8, 44.8], [-122.3, 47.6], [-96, 28.5], [-104.9, 39.7], [-84.4, 33.8], [-93.3, 45], [-118.2, 34.1], [-112, 46.6], [-81.4, 28.5], [-71.1, 42.4], [-100.8, 46.8]] as const;
    const misses = places.map(([lon, lat]) => {
      const [mean, grid] = [byMean.place(lon, lat), byGrid.place(lon, lat)];
      expect(mean.shift).toMatch(/^mean US-48 (east|west) \(TR8350\.2, EPSG:117[45]\)$/);
      return apartM(mean.lonDeg, mean.latDeg, grid.lonDeg, grid.latDeg).m;
    });
    expect(Math.max(...misses)).toBeLessThan(17);
    expect(Math.max(...misses)).toBeGreaterThan(5);
    expect(Math.min(...misses)).toBeGreaterThan(0.5);
  });

  it('states an error that holds the real miss: root mean square on each axis below it, shared, region by region', () => {
    const squares = new Map<string, { east: number; north: number; count: number; sd: number }>();
    for (let lon = -124; lon < -67; lon += 0.5) {
      for (let lat = 25.5; lat < 49; lat += 0.5) {
        const mean = byMean.place(lon, lat);
        if (!/US-48 (east|west)/.test(mean.shift)) continue;
        const grid = byGrid.place(lon, lat);
        const { eastM, northM } = apartM(mean.lonDeg, mean.latDeg, grid.lonDeg, grid.latDeg);
        const sum = squares.get(mean.shift) ?? { east: 0, north: 0, count: 0, sd: mean.sharedSdM };
        squares.set(mean.shift, { east: sum.east + eastM ** 2, north: sum.north + northM ** 2, count: sum.count + 1, sd: mean.sharedSdM });
        expect(mean.sdM).toBe(0);
      }
    }
    expect(squares.size).toBe(2);
    for (const { east, north, count, sd } of squares.values()) {
      const rms = Math.sqrt((east + north) / 2 / count);
      expect(rms).toBeLessThan(sd);
      expect(rms).toBeGreaterThan(sd / 3);
    }
  });

  it('misses neighbours the same way: within 10 km the miss changes by under a metre', () => {
    for (const [lon, lat] of [[-80.2, 39.3], [-70, 44.5], [-105, 41], [-97, 31]] as const) {
      const miss = (at: number): { eastM: number; northM: number } => {
        const [mean, grid] = [byMean.place(at, lat), byGrid.place(at, lat)];
        return apartM(mean.lonDeg, mean.latDeg, grid.lonDeg, grid.latDeg);
      };
      expect(Math.hypot(miss(lon).eastM - miss(lon + 0.1).eastM, miss(lon).northM - miss(lon + 0.1).northM)).toBeLessThan(1);
    }
  });

  // Source of the numbers: NGA TR8350.2 as EPSG operations carry it.
  it.each([
    [-97, 32, 'US-48 west', -8, 159, 175], [-80, 40, 'US-48 east', -9, 161, 179], [-91.9, 31, 'US-48 east', -9, 161, 179], [-92.4, 34.7, 'US-48 west', -8, 159, 175],
    [-83.5, 41.7, 'US-48 east', -9, 161, 179], [-78.8, 42.9, 'US-48 east', -9, 161, 179],
    [-150, 65, 'Alaska mainland', -5, 135, 172], [-134.4, 58.3, 'Alaska mainland', -5, 135, 172], [-135, 60.7, 'Canada, Yukon', -7, 139, 181],
    [-114, 51, 'Canada, Alberta and British Columbia', -7, 162, 188], [-81.2, 43.2, 'Canada, Manitoba and Ontario', -9, 157, 184], [-79.4, 43.7, 'Canada, Manitoba and Ontario', -9, 157, 184],
    [-71, 47, 'Canada, eastern provinces', -22, 160, 190], [-106, 52, 'Canada, Northwest Territories, Nunavut and Saskatchewan', 4, 159, 188],
    [-99, 19, 'Mexico', -12, 130, 190], [-174.2, 52.2, 'Aleutian Islands east', -2, 152, 149], [-60, 20, 'Caribbean', -3, 142, 183],
  ])('takes the mean of the region at %s, %s: %s', (lon, lat, name, dx, dy, dz) => {
    const mean = meanShiftAt(lon, lat);
    expect(mean.name).toContain(`mean ${name} (TR8350.2, EPSG:`);
    expect([mean.dxM, mean.dyM, mean.dzM]).toEqual([dx, dy, dz]);
    expect(mean.sharedSdM).toBeGreaterThanOrEqual(MEAN_SHIFT_LEAST_SD_M);
  });

  it('says so far offshore, with a larger error', () => {
    const place = byMean.place(-64.5, 38);
    expect(place.shift).toContain('outside its area');
    expect(place.sharedSdM).toBeGreaterThan(11);
  });

  it('comes back within its own geometry', () => {
    const place = byMean.place(-80.2, 39.3);
    const back = datumShift('NAD83', 'NAD27', WITHOUT_GRID).place(place.lonDeg, place.latDeg);
    // Heights on the two ellipsoids differ by tens of metres, which a shift of longitude and latitude leaves out.
    expect(apartM(back.lonDeg, back.latDeg, -80.2, 39.3).m).toBeLessThan(0.01);
  });
});

describe('NAD83 and WGS 84', () => {
  // Source: PROJ 9.1, EPSG:9000 to 6318 (operation EPSG:8970), longitude and latitude at the epoch given.
  it.each([
    [-80, 40, 2026.9, -79.999990812926, 39.999991138937], [-122, 38, 2026.9, -121.999982150193, 37.999998487843], [-70, 44, 2026.9, -69.999993190481, 43.999988916715],
    [-97, 30, 2026.9, -96.999988342581, 29.999995721087], [-123, 47, 2010, -122.99998249096, 46.999996045505], [-150, 65, 2026.9, -149.99996715342, 65.000004254904],
  ])('follows EPSG:8970 at %s, %s in %s', (lon, lat, epoch, lon83, lat83) => {
    const place = datumShift('WGS 84', 'NAD83(2011)', { receiver: { frame: 'ITRF2014', epoch } }).place(lon, lat);
    expect(place.lonDeg).toBeCloseTo(lon83, 11);
    expect(place.latDeg).toBeCloseTo(lat83, 11);
    expect(place.shift).toBe(`ITRF2014 at ${epoch.toFixed(2)} to NAD83(2011) (EPSG:8970)`);
  });

  it('lie 0.9 to 1.7 m apart over the lower 48 in late 2026, 1.2 to 1.6 m in most of it', () => {
    const shift = datumShift('WGS 84', 'NAD83(2011)', { receiver: { frame: 'WGS 84', epoch: 2026.9 } });
    const distances: number[] = [];
    for (let lon = -122; lon <= -70; lon += 4) {
      for (let lat = 32; lat <= 47; lat += 3) {
        const place = shift.place(lon, lat);
        distances.push(apartM(place.lonDeg, place.latDeg, lon, lat).m);
      }
    }
    expect(Math.min(...distances)).toBeGreaterThan(0.9);
    expect(Math.max(...distances)).toBeLessThan(1.7);
    expect(distances.filter((m) => m >= 1.2 && m <= 1.6).length / distances.length).toBeGreaterThan(0.7);
  });

  it('comes back to where it started, in every frame', () => {
    for (const frame of ['WGS 84', 'ITRF2014', 'ITRF2020', 'NAD83(2011)'] as const) {
      for (const to of ['NAD27', 'NAD83', 'NAD83(2011)'] as const) {
        const receiver = { frame, epoch: 2026.28 };
        const there = datumShift('WGS 84', to, { receiver }).place(-80.2, 39.3);
        const back = datumShift(to, 'WGS 84', { receiver }).place(there.lonDeg, there.latDeg);
        expect(apartM(back.lonDeg, back.latDeg, -80.2, 39.3).m).toBeLessThan(5e-6);
      }
    }
  });

  it('differs by millimetres between ITRF2014 and ITRF2020', () => {
    // Source: EPSG:9991: 1.4, 0.9, −1.4 mm and 0.42 ppb (2.7 mm of height).
    const [a, b] = [on2015('ITRF2014'), on2015('ITRF2020')];
    const { m } = apartM(a.lonDeg, a.latDeg, b.lonDeg, b.latDeg);
    expect(m).toBeGreaterThan(1e-4);
    expect(m).toBeLessThan(3e-3);
  });

  it('is null where nobody states the receiver\'s frame, named with its accuracy', () => {
    expect(datumShift('WGS 84', 'NAD83').place(-80, 40)).toEqual({ lonDeg: -80, latDeg: 40, shift: 'none (NAD83 as WGS 84, EPSG:1188)', sdM: 0, sharedSdM: 2 });
    const realised = datumShift('NAD83(2011)', 'WGS 84').place(-80, 40);
    expect(realised.shift).toBe('none (NAD83(2011) as WGS 84, EPSG:9774)');
    expect(realised.sharedSdM).toBeCloseTo(2 / Math.sqrt(3), 12);
    const nad83 = datumShift('NAD83', 'NAD83(2011)').place(-80, 40);
    expect(nad83.shift).toBe('none (NAD83 as NAD83(2011), EPSG:8971)');
    expect(nad83.sharedSdM).toBeCloseTo(1 / Math.sqrt(3), 12);
  });

  it('knows less west of the plate\'s edge and more where the frame is stated', () => {
    const shift = datumShift('WGS 84', 'NAD83(2011)', { receiver: { frame: 'ITRF2014', epoch: 2026.9 } });
    expect(shift.place(-80, 40).sharedSdM).toBeLessThan(0.1);
    expect(shift.place(-121, 36).sharedSdM).toBeGreaterThan(0.3);
    expect(datumShift('WGS 84', 'NAD83(2011)').place(-80, 40).sharedSdM).toBeGreaterThan(1);
  });

  it.each([[{ frame: 'NAD27', epoch: 2026 }], [{ frame: 'WGS 84', epoch: NaN }], [{ frame: 'WGS 84', epoch: 26.9 }], [{ frame: 'WGS 84' }]])('refuses the receiver %j', (receiver) => {
    expect(errorOf(() => datumShift('WGS 84', 'NAD83', { receiver: receiver as { frame: ReceiverFrame; epoch: number } })).code).toBe('key_invalid');
  });
});

describe('every way', () => {
  const DATUMS: readonly Datum[] = ['NAD27', 'NAD83', 'NAD83(2011)', 'WGS 84'];

  it('names a shift and its error, or says that none was needed', () => {
    for (const setting of [{}, { receiver: { frame: 'WGS 84', epoch: 2026.28 } }] as const) {
      for (const from of DATUMS) {
        for (const to of DATUMS) {
          const place = datumShift(from, to, setting).place(-80.2, 39.3);
          expect(place.shift).not.toBe('');
          if (from === to) expect(place).toEqual({ lonDeg: -80.2, latDeg: 39.3, shift: `none (${from})`, sdM: 0, sharedSdM: 0 });
          else expect(Math.hypot(place.sdM, place.sharedSdM)).toBeGreaterThan(0);
        }
      }
    }
  });

  it('chains NAD27 over NAD83 to WGS 84 and adds the variances', () => {
    const setting = { receiver: { frame: 'ITRF2014', epoch: 2026.9 } } as const;
    const chain = datumShift('NAD27', 'WGS 84', setting).place(-80.2, 39.3);
    expect(chain.shift).toBe('NADCON conus + none (NAD83 as NAD83(2011), EPSG:8971) + NAD83(2011) to ITRF2014 at 2026.90 (EPSG:8970, reversed)');
    const first = datumShift('NAD27', 'NAD83').place(-80.2, 39.3);
    const second = datumShift('NAD83', 'WGS 84', setting).place(first.lonDeg, first.latDeg);
    expect(chain.lonDeg).toBeCloseTo(second.lonDeg, 12);
    expect(chain.sdM).toBeCloseTo(Math.hypot(first.sdM, second.sdM), 12);
    expect(chain.sharedSdM).toBeCloseTo(Math.hypot(first.sharedSdM, second.sharedSdM), 12);
    const unsaid = datumShift('NAD27', 'WGS 84').place(-80.2, 39.3);
    expect(unsaid.shift).toBe('NADCON conus + none (NAD83 as WGS 84, EPSG:1188)');
    expect(unsaid).toMatchObject({ sdM: 0.15, sharedSdM: 2 });
  });

  it('never takes NAD27 for another datum without moving it', () => {
    for (const shipped of [true, false]) {
      for (const to of DATUMS.slice(1)) {
        for (const [lon, lat] of [[-80.2, 39.3], [-150, 65], [-99, 19], [-114, 51], [-60, 47], [-64.5, 38]] as const) {
          const place = datumShift('NAD27', to, { shipped }).place(lon, lat);
          expect(apartM(place.lonDeg, place.latDeg, lon, lat).m).toBeGreaterThan(5);
        }
      }
    }
  });

  it('runs over columns as over single places', () => {
    const shift = datumShift('NAD27', 'NAD83');
    const lon = Float64Array.of(-80.2, NaN, -150, -97);
    const lat = Float64Array.of(39.3, 39.3, 65, NaN);
    const columns = shift.arrays(lon, lat);
    const [first, third] = [shift.place(-80.2, 39.3), shift.place(-150, 65)];
    expect([...columns.lonDeg]).toEqual([first.lonDeg, NaN, third.lonDeg, NaN]);
    expect([...columns.latDeg]).toEqual([first.latDeg, NaN, third.latDeg, NaN]);
    expect(columns.shifts).toEqual([first.shift, third.shift]);
    expect(columns).toMatchObject({ sdM: first.sdM, sharedSdM: third.sharedSdM });
    expect(shift.arrays([], [])).toMatchObject({ shifts: [], sdM: 0, sharedSdM: 0 });
    expect(() => shift.arrays(lon, [1])).toThrow();
  });

  it('refuses what is no place and where the datum means nothing', () => {
    const shift = datumShift('NAD27', 'NAD83');
    for (const [lon, lat] of [[NaN, 40], [-80, NaN], [-80, 91], [Infinity, 40], [-800, 40]] as const) expect(errorOf(() => shift.place(lon, lat)).code).toBe('position_invalid');
    for (const [lon, lat] of [[80.2, 39.3], [-80, -40], [0, 0], [-80, -90]] as const) {
      expect(errorOf(() => shift.place(lon, lat)).code).toBe('outside_area');
      expect(errorOf(() => datumShift('WGS 84', 'NAD83').place(lon, lat)).code).toBe('outside_area');
    }
    // Hawaii's old maps are on a datum of their own.
    expect(errorOf(() => shift.place(-157.8, 21.3)).code).toBe('outside_area');
    expect(datumShift('NAD83', 'WGS 84').place(-157.8, 21.3).shift).toBe('none (NAD83 as WGS 84, EPSG:1188)');
    expect(datumShift('WGS 84', 'WGS 84').place(149, -25)).toMatchObject({ lonDeg: 149, latDeg: -25 });
    expect(shift.place(280, 40).lonDeg).toBeCloseTo(shift.place(-80, 40).lonDeg, 12);
    expect(CONUS.offsetAt(-80, 90)).toBeNull();
  });
});
