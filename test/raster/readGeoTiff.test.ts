import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { UserError } from '../../src/errors.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { readGeoTiff } from '../../src/raster/readGeoTiff.js';
import { withGdal } from '../support/gdal.js';
import { deflate, firstDifference, madeGrid } from './made.js';
import { entryOf, tampered } from './tamper.js';

const GRID = madeGrid({ width: 37, height: 23, gaps: 'some', west: 400_000, north: 80_000 });

function ours(code = 26917): Promise<Uint8Array> {
  return encodeCog(GRID, { crs: crs(code), deflate, description: 'Residual', unit: 'nT' });
}

/** The same grid as GDAL writes it, with its own ways. */
async function foreign(options: string[], code?: number): Promise<Uint8Array> {
  return withGdal({ 'a.tif': await ours(code) }, async (api, dataset) => {
    const { local } = await api.gdal_translate(dataset, ['-of', 'GTiff', '-q', ...options], 'foreign');
    return api.Module.FS.readFile(local);
  });
}

async function complaint(bytes: Uint8Array): Promise<string> {
  const error: unknown = await readGeoTiff(bytes, 'field.tif').catch((problem: unknown) => problem);
  expect(error).toBeInstanceOf(UserError);
  expect((error as UserError).complaint.where).toBe('field.tif');
  return (error as UserError).code;
}

describe('readGeoTiff', () => {
  it.each([
    ['in strips, not compressed', []],
    ['with LZW and a predictor', ['-co', 'COMPRESS=LZW', '-co', 'PREDICTOR=3', '-co', 'TILED=YES']],
    ['as BigTIFF, big-endian', ['-co', 'BIGTIFF=YES', '-co', 'ENDIANNESS=BIG']],
    ['in 64 bits', ['-ot', 'Float64']],
  ])('reads the grid as GDAL writes it %s', async (_, options) => {
    const { grid, epsg, unit, description } = await readGeoTiff(await foreign(options));
    expect({ ...grid, values: null }).toEqual({ ...GRID, values: null });
    expect(firstDifference(grid.values, GRID.values)).toBe(-1);
    expect({ epsg, unit, description }).toEqual({ epsg: 26917, unit: 'nT', description: 'Residual' });
  });

  it('takes the stated nodata for NaN', async () => {
    const bytes = await withGdal({ 'a.tif': await encodeCog({ ...GRID, values: GRID.values.map((value) => (Number.isNaN(value) ? -99999.9 : value)) }, { crs: crs(2272), deflate }) },
      async (api, dataset) => api.Module.FS.readFile((await api.gdal_translate(dataset, ['-of', 'GTiff', '-q', '-a_nodata', '-99999.9'], 'nodata')).local));
    const { grid } = await readGeoTiff(bytes);
    expect(firstDifference(grid.values, GRID.values)).toBe(-1);
    expect(grid.west).toBeCloseTo(GRID.west, 6);
  });

  it('moves a file whose cells are points by half a cell', async () => {
    const { grid } = await readGeoTiff(await foreign(['-mo', 'AREA_OR_POINT=Point']));
    expect([grid.west, grid.north]).toEqual([GRID.west, GRID.north]);
  });

  it('refuses what it cannot place', async () => {
    expect(await complaint(new TextEncoder().encode('no picture at all'))).toBe('grid_file_invalid');
    expect(await complaint(new Uint8Array(0))).toBe('grid_file_invalid');
    expect(await complaint(await foreign(['-a_ullr', '0', '23', '40', '0']))).toBe('grid_file_invalid');
    expect(await complaint(await foreign(['-a_srs', '+proj=tmerc +lon_0=-81 +k=0.9998 +datum=NAD83', '-q']))).toBe('crs_missing');
    expect(await complaint(await foreign(['-a_srs', 'EPSG:2154']))).toBe('crs_unknown');
    const unplaced = tampered(await ours(), (view) => view.setUint16(entryOf(view, 0, 33922).entryAt, 33921, true));
    expect(await complaint(unplaced)).toBe('grid_file_invalid');
  });
});
