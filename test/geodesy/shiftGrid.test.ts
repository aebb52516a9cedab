import { createHash } from 'node:crypto';
import { existsSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { CONUS, conusBytes } from '../../src/geodesy/conus.js';
import { CONUS_SHA256 } from '../../src/geodesy/data/conusBytes.js';
import { datumShift } from '../../src/geodesy/datumShift.js';
import { reverseOffsetAt } from '../../src/geodesy/offsetTables.js';
import { readShiftGrid } from '../../src/geodesy/shiftGrid.js';
import { ctableBytes, ntv2Bytes, tiffBytes, type MadeTable, type TiffOptions } from './gridFiles.js';

const GRIDS = new URL('../../../shared/checks/grids/', import.meta.url);
/** Linear in both axes, so that bilinear interpolation has to return it exactly; signs and sizes of the axes differ. */
const LINEAR: MadeTable = {
  west: -82, south: 38, step: 0.25, width: 9, height: 7,
  offset: (lon, lat) => [0.0002 + 1e-5 * (lon + 80), 0.0001 - 2e-5 * (lat - 39)],
};
/** Offsets are stored as 32-bit floats: a few parts in 1e-8 of 0.0004°. */
const FLOAT_DEG = 1e-10;

async function codeOf(run: Promise<unknown>): Promise<string> {
  return run.then(() => 'no error', (error: unknown) => { if (error instanceof UserError) return error.code; throw error; });
}

describe('each format', () => {
  const tiff = (options: TiffOptions): Uint8Array => tiffBytes(LINEAR, options);
  it.each([
    ['CTABLE V2', ctableBytes(LINEAR, 'Alaska')],
    ['NTv2, little-endian', ntv2Bytes([LINEAR], { little: true })],
    ['NTv2, big-endian', ntv2Bytes([LINEAR], { little: false })],
    ['GeoTIFF, arc-seconds east', tiff({ unit: 'arc-second', positive: 'east' })],
    ['GeoTIFF, arc-seconds west', tiff({ unit: 'arc-second', positive: 'west' })],
    ['GeoTIFF, degrees, longitude first', tiff({ unit: 'degree', positive: 'east', lonFirst: true })],
    ['GeoTIFF, radians west, longitude first', tiff({ unit: 'radian', positive: 'west', lonFirst: true })],
    ['GeoTIFF, pixel is area', tiff({ unit: 'arc-second', positive: 'east', pixelIsArea: true })],
  ])('%s gives unit, sign and place right', async (_, bytes) => {
    const grid = await readShiftGrid('grids/made.grid', bytes);
    expect(grid).toMatchObject({ name: 'grid made.grid', from: 'NAD27', to: 'NAD83' });
    // A node, a corner on each side, points within cells.
    for (const [lon, lat] of [[-81, 39], [-82, 38], [-80, 39.5], [-82, 39.5], [-80, 38], [-80.9, 38.63], [-80.01, 39.49], [-81.999, 38.001], [279.1, 38.63]] as const) {
      const [dLon, dLat] = grid.offsetAt(lon, lat)!;
      const [wantedLon, wantedLat] = LINEAR.offset(lon > 180 ? lon - 360 : lon, lat);
      expect(Math.abs(dLon - wantedLon)).toBeLessThan(FLOAT_DEG);
      expect(Math.abs(dLat - wantedLat)).toBeLessThan(FLOAT_DEG);
    }
    for (const [lon, lat] of [[-82.01, 39], [-79.99, 39], [-81, 37.99], [-81, 39.51], [98, 39], [-81, -39], [NaN, 39], [-81, NaN], [-81, 90]] as const) {
      expect(grid.offsetAt(lon, lat)).toBeNull();
    }
  });

  it('comes back within a micrometre by iteration', async () => {
    const grid = await readShiftGrid('made.gsb', ntv2Bytes([LINEAR], { little: true }));
    for (const [lon, lat] of [[-81, 39], [-80.3, 38.4], [-81.7, 39.3]] as const) {
      const [dLon, dLat] = grid.offsetAt(lon, lat)!;
      const [backLon, backLat] = reverseOffsetAt(grid, lon + dLon, lat + dLat)!;
      expect(lon + dLon + backLon).toBeCloseTo(lon, 11);
      expect(lat + dLat + backLat).toBeCloseTo(lat, 11);
    }
    expect(reverseOffsetAt(grid, -90, 39)).toBeNull();
  });
});

describe('NTv2', () => {
  it('takes the sub-grid where there is one', async () => {
    const fine: MadeTable = { west: -81, south: 38.5, step: 0.05, width: 11, height: 7, offset: () => [0.0009, -0.0007] };
    const grid = await readShiftGrid('made.gsb', ntv2Bytes([LINEAR, fine], { little: true }));
    expect(grid.offsetAt(-80.8, 38.6)![0]).toBeCloseTo(0.0009, 9);
    expect(grid.offsetAt(-81.3, 38.6)![0]).toBeCloseTo(LINEAR.offset(-81.3, 38.6)[0], 9);
  });

  it('leads between the datums that its header names, and is used for no others', async () => {
    const grid = await readShiftGrid('swiss.gsb', ntv2Bytes([LINEAR], { little: true, from: 'CH1903', to: 'ETRS89' }));
    expect(grid).toMatchObject({ from: 'CH1903', to: 'ETRS89' });
    expect(datumShift('NAD27', 'NAD83', { grids: [grid] }).place(-81, 39).shift).toBe('NADCON conus');
    const csrs = await readShiftGrid('made.gsb', ntv2Bytes([LINEAR], { little: true, from: 'CLARKE', to: 'GRS80' }), { from: 'NAD27', to: 'NAD83' });
    expect(datumShift('NAD27', 'NAD83', { grids: [csrs] }).place(-81, 39)).toMatchObject({ shift: 'grid made.gsb', sdM: 1.5 });
  });
});

describe('GeoTIFF', () => {
  it('has no value beside a node without one', async () => {
    const grid = await readShiftGrid('made.tif', tiffBytes(LINEAR, { unit: 'degree', positive: 'east', holes: [[3, 4]] }));
    // Row 3 from the north of 7, column 4: longitude −81, latitude 38.75.
    expect(grid.offsetAt(-81.1, 38.8)).toBeNull();
    expect(grid.offsetAt(-81.3, 38.8)).not.toBeNull();
    const shift = datumShift('NAD27', 'NAD83', { grids: [grid] });
    expect(shift.place(-81.1, 38.8).shift).toBe('NADCON conus');
    expect(shift.place(-81.3, 38.8).shift).toBe('grid made.tif');
  });

  it('reads a file that is a window of a larger buffer', async () => {
    const bytes = tiffBytes(LINEAR, { unit: 'degree', positive: 'east' });
    const larger = new Uint8Array(bytes.length + 100);
    larger.set(bytes, 60);
    const grid = await readShiftGrid('made.tif', larger.subarray(60, 60 + bytes.length));
    expect(grid.offsetAt(-81, 39)![0]).toBeCloseTo(LINEAR.offset(-81, 39)[0], 9);
  });

  it('applies the scale and offset of its bands', async () => {
    const grid = await readShiftGrid('made.tif', tiffBytes(LINEAR, { unit: 'degree', positive: 'west', packed: { scale: 1e-6, offset: 0.0003 } }));
    const [dLon, dLat] = grid.offsetAt(-80.9, 38.63)!;
    expect(dLon).toBeCloseTo(LINEAR.offset(-80.9, 38.63)[0], 9);
    expect(dLat).toBeCloseTo(LINEAR.offset(-80.9, 38.63)[1], 9);
  });
});

describe('a file that is no grid', () => {
  const whole = { ctable: ctableBytes(LINEAR, 'Alaska'), ntv2: ntv2Bytes([LINEAR], { little: true }), tiff: tiffBytes(LINEAR, { unit: 'degree', positive: 'east' }) };
  it.each([
    ['empty', new Uint8Array(0)],
    ['text', new TextEncoder().encode('longitude,latitude\n'.repeat(20))],
    ['CTABLE cut short', whole.ctable.slice(0, -8)],
    ['CTABLE of unknown datums', ctableBytes(LINEAR, 'Maryland - HP')],
    ['NTv2 cut short', whole.ntv2.slice(0, -16)],
    ['NTv2 cut in its header', whole.ntv2.slice(0, 360)],
    ['NTv2 without datums', ntv2Bytes([LINEAR], { little: true, from: '', to: '' })],
    ['TIFF cut in its directory', whole.tiff.slice(0, 170)],
    ['TIFF cut in its nodes', whole.tiff.slice(0, -16)],
    ['TIFF of another type', tiffBytes(LINEAR, { unit: 'degree', positive: 'east', type: 'VERTICAL_OFFSET_GEOGRAPHIC_TO_VERTICAL' })],
    ['TIFF without described bands', tiffBytes(LINEAR, { unit: 'degree', positive: 'east', described: false })],
    ['TIFF without a target', tiffBytes(LINEAR, { unit: 'degree', positive: 'east', target: '' })],
  ])('%s is refused', async (_, bytes) => {
    expect(await codeOf(readShiftGrid('bad.bin', bytes))).toBe('grid_file_invalid');
  });
});

describe('the shipped grid', () => {
  it('is the file of NOAA, byte for byte', () => {
    const bytes = conusBytes();
    expect(bytes.length).toBe(264_424);
    expect(createHash('sha256').update(bytes).digest('hex')).toBe(CONUS_SHA256);
  });

  it('ends where its header says: 131° to 63° W, 20° to 50° N', () => {
    for (const [lon, lat] of [[-131, 20], [-63, 50], [-131, 50], [-63, 20]] as const) expect(CONUS.offsetAt(lon, lat)).not.toBeNull();
    for (const [lon, lat] of [[-131.01, 30], [-62.99, 30], [-100, 19.99], [-100, 50.01]] as const) expect(CONUS.offsetAt(lon, lat)).toBeNull();
  });

  it.skipIf(!existsSync(GRIDS))('equals the GeoTIFF of the same grid to a thousandth of a microdegree', async () => {
    const tiff = await readShiftGrid('us_noaa_conus.tif', readFileSync(new URL('us_noaa_conus.tif', GRIDS)));
    expect(tiff).toMatchObject({ from: 'NAD27', to: 'NAD83', accuracyM: 0.15 });
    // The user's own copy says no more than ours of Canada.
    expect(datumShift('NAD27', 'NAD83', { grids: [tiff] }).place(-79.4, 43.7)).toMatchObject({ shift: 'grid us_noaa_conus.tif, beyond its area of use', sdM: 1.5 });
    for (let lon = -130.9; lon < -63.1; lon += 0.37) {
      for (let lat = 20.1; lat < 50; lat += 0.31) {
        const [a, b] = [tiff.offsetAt(lon, lat)!, CONUS.offsetAt(lon, lat)!];
        expect(Math.max(Math.abs(a[0] - b[0]), Math.abs(a[1] - b[1]))).toBeLessThan(1e-9);
      }
    }
  });
});

describe.skipIf(!existsSync(GRIDS))('grids of other places', () => {
  it('moves NAD27 in Alaska by the Alaska grid, across the 180th meridian too', async () => {
    const alaska = await readShiftGrid('us_noaa_alaska.tif', readFileSync(new URL('us_noaa_alaska.tif', GRIDS)));
    const shift = datumShift('NAD27', 'NAD83', { grids: [alaska] });
    // Source: PROJ 9.1, hgridshift with the same file.
    for (const [lon, lat, lon83, lat83] of ALASKA) {
      const place = shift.place(lon, lat);
      expect(place).toMatchObject({ shift: 'grid us_noaa_alaska.tif', sdM: 0.5 });
      expect(place.lonDeg).toBeCloseTo(lon83, 9);
      expect(place.latDeg).toBeCloseTo(lat83, 9);
    }
    expect(shift.place(-80.2, 39.3).shift).toBe('NADCON conus');
  });

  it('reads the Hawaiian grid, whose datum is not NAD27', async () => {
    const hawaii = await readShiftGrid('us_noaa_hawaii.tif', readFileSync(new URL('us_noaa_hawaii.tif', GRIDS)));
    expect(hawaii).toMatchObject({ from: 'Old Hawaiian', to: 'NAD83', accuracyM: 0.2 });
    const [dLon, dLat] = hawaii.offsetAt(-157.8, 21.3)!;
    // Source: PROJ 9.1, hgridshift with the same file.
    expect(-157.8 + dLon).toBeCloseTo(HAWAII[0], 9);
    expect(21.3 + dLat).toBeCloseTo(HAWAII[1], 9);
    expect(() => datumShift('NAD27', 'NAD83', { grids: [hawaii] }).place(-157.8, 21.3)).toThrow(/Old Hawaiian/);
  });
});

const ALASKA = [[-150, 65, -150.002453365263, 64.999522835268], [173.1, 52.9, 173.09696656097, 52.898353705885], [-134.4, 58.3, -134.401769889344, 58.299672647768]] as const;
const HAWAII = [-157.797257687594, 21.296834969171] as const;
