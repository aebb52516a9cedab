import { beforeAll, describe, expect, it } from 'vitest';
import { crs, crsCodes } from '../../src/geodesy/crs.js';
import { crsFromWkt } from '../../src/geodesy/crsFromWkt.js';
import { wktOf } from '../../src/geodesy/wktOf.js';
import { loadProj, type ProjWasm } from './projWasm.js';

const GEOGRAPHIC = { NAD27: 4267, NAD83: 4269, 'NAD83(2011)': 6318, 'WGS 84': 4326 } as const;
/** proj4's and PROJ's series agree far better than a receiver; the registry's 15 digits cost nanometres. */
const TOLERANCE_M = 2e-6;

/** Places through an area of use, a little inside its edges. */
function places({ west, south, east, north }: { west: number; south: number; east: number; north: number }): { lon: number[]; lat: number[] } {
  const width = east >= west ? east - west : east - west + 360;
  const parts = [0.03, 0.4, 0.97];
  return {
    lon: parts.flatMap((u) => parts.map(() => { const lon = west + u * width; return lon > 180 ? lon - 360 : lon; })),
    lat: parts.flatMap(() => parts.map((v) => south + v * (north - south))),
  };
}

describe('the registry against PROJ', () => {
  let proj: ProjWasm;
  beforeAll(async () => { proj = await loadProj(); });

  it('gives the same eastings and northings, in metres and in the unit of the system', () => {
    const misses: string[] = [];
    // Every seventh system passes through all datums, methods and units.
    const codes = crsCodes().filter((code, index) => (index % 7 === 0 || code === 2272 || code === 3857 || code === 26731 || code === 6201) && crs(code).kind === 'projected');
    for (const code of codes) {
      const system = crs(code);
      const { lon, lat } = places(system.areaOfUse);
      const { x, y } = proj.transform(`EPSG:${GEOGRAPHIC[system.datum]}`, `EPSG:${code}`, lon, lat);
      lon.forEach((_, i) => {
        const [east, north] = system.forward(lon[i]!, lat[i]!);
        const miss = Math.hypot(east - x[i]! * system.metresPerUnit, north - y[i]! * system.metresPerUnit);
        if (!(miss <= TOLERANCE_M)) misses.push(`${code} ${system.name} at ${lon[i]}, ${lat[i]}: ${miss}`);
      });
    }
    expect(misses).toEqual([]);
    expect(codes.length).toBeGreaterThan(200);
  });

  it('writes a .prj that PROJ takes for the same system', () => {
    const misses: string[] = [];
    for (const code of crsCodes().filter((_, index) => index % 17 === 0)) {
      const system = crs(code);
      if (system.kind === 'geographic') continue;
      const { lon, lat } = places(system.areaOfUse);
      // Without its code, so that the parameters count.
      const prj = wktOf(system).replace(/,AUTHORITY\[[^\]]*\]/, '');
      const { x, y } = proj.transform(`EPSG:${GEOGRAPHIC[system.datum]}`, prj, lon, lat);
      lon.forEach((_, i) => {
        const [east, north] = system.forward(lon[i]!, lat[i]!);
        const miss = Math.hypot(east - x[i]! * system.metresPerUnit, north - y[i]! * system.metresPerUnit);
        if (!(miss <= 1e-5)) misses.push(`${code} ${system.name} at ${lon[i]}, ${lat[i]}: ${miss}`);
      });
    }
    expect(misses).toEqual([]);
  });

  it('knows the systems that PROJ describes in WKT 1, with their codes and without', () => {
    const misses: string[] = [];
    for (const code of crsCodes().filter((value, index) => index % 11 === 0 && value !== 3857)) {
      const wkt = proj.wkt(`EPSG:${code}`);
      for (const text of [wkt, wkt.replace(/,AUTHORITY\["EPSG","\d+"\]/g, '')]) {
        const found = crsFromWkt(text, 'parcel.prj');
        if (found.epsg !== code) misses.push(`${code} taken for ${found.code}`);
      }
    }
    expect(misses).toEqual([]);
  });
});
