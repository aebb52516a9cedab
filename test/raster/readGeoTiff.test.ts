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
    ['in 64 bits with differences', ['-ot', 'Float64', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2']],
    ['in 64 bits with byte planes', ['-ot', 'Float64', '-co', 'COMPRESS=LZW', '-co', 'PREDICTOR=3', '-co', 'BLOCKYSIZE=7']],
    ['with PackBits', ['-co', 'COMPRESS=PACKBITS', '-co', 'BLOCKYSIZE=5']],
    ['with differences, big-endian', ['-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2', '-co', 'ENDIANNESS=BIG']],
    ['with three bands side by side', ['-b', '1', '-b', '1', '-b', '1', '-co', 'INTERLEAVE=PIXEL', '-co', 'COMPRESS=LZW', '-co', 'PREDICTOR=3']],
    ['with three bands one after another', ['-b', '1', '-b', '1', '-b', '1', '-co', 'INTERLEAVE=BAND', '-co', 'COMPRESS=DEFLATE', '-co', 'TILED=YES', '-co', 'BLOCKXSIZE=16', '-co', 'BLOCKYSIZE=16']],
  ])('reads the grid as GDAL writes it %s', async (_, options) => {
    const { grid, epsg, unit, description } = await readGeoTiff(await foreign(options));
    expect({ ...grid, values: null }).toEqual({ ...GRID, values: null });
    expect(firstDifference(grid.values, GRID.values)).toBe(-1);
    expect({ epsg, unit, description }).toEqual({ epsg: 26917, unit: 'nT', description: 'Residual' });
  });

  it.each(['Byte', 'Int16', 'UInt16', 'Int32', 'UInt32'])('reads whole numbers of type %s', async (type) => {
    // GDAL rounds the values on the way; a grid of whole ones stays what it is.
    const whole = { ...GRID, values: GRID.values.map((value) => (Number.isNaN(value) ? 7 : Math.max(0, Math.min(250, Math.round(value))))) };
    for (const predictor of ['1', '2']) {
      const bytes = await withGdal({ 'a.tif': await encodeCog(whole, { crs: crs(26917), deflate }) }, async (api, dataset) => api.Module.FS.readFile(
        (await api.gdal_translate(dataset, ['-of', 'GTiff', '-q', '-ot', type, '-a_nodata', 'none', '-co', 'COMPRESS=LZW', '-co', `PREDICTOR=${predictor}`], `whole-${type}-${predictor}`)).local));
      expect(firstDifference((await readGeoTiff(bytes)).grid.values, whole.values)).toBe(-1);
    }
  });

  it('takes tiles that the file leaves out for cells without a value', async () => {
    const empty = madeGrid({ width: 40, height: 40, gaps: 'all' });
    const bytes = await withGdal({ 'a.tif': await encodeCog(empty, { crs: crs(26917), deflate }) },
      async (api, dataset) => api.Module.FS.readFile((await api.gdal_translate(dataset, ['-of', 'GTiff', '-q', '-co', 'SPARSE_OK=YES', '-co', 'TILED=YES', '-co', 'BLOCKXSIZE=16', '-co', 'BLOCKYSIZE=16'], 'sparse')).local));
    expect(bytes.length).toBeLessThan(40 * 40 * 4);
    expect((await readGeoTiff(bytes)).grid.values.every(Number.isNaN)).toBe(true);
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
