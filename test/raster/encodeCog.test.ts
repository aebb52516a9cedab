import { deflateSync } from 'node:zlib';
import { fromArrayBuffer } from 'geotiff';
import { describe, expect, it } from 'vitest';
import { crs, crsCodes } from '../../src/geodesy/crs.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { encodeCog, type CogOptions } from '../../src/raster/encodeCog.js';
import { halve, overviewSizes, type Level } from '../../src/raster/overviews.js';
import { readGeoTiff } from '../../src/raster/readGeoTiff.js';
import type { Grid } from '../../src/raster/types.js';
import { HAS_DEBIAN_GDAL, runPython } from '../support/debianTools.js';
import { cellsWithGdal, openWithGdal } from '../support/gdal.js';
import { deflate, firstDifference, madeGrid } from './made.js';

const UTM = crs('EPSG:26917');

/** What a test writes: a grid and its options, named for the report of the tests. */
const CASES: ReadonlyArray<{ name: string; grid: Grid; options?: Partial<CogOptions>; overviews: number }> = [
  { name: 'one cell', grid: madeGrid({ width: 1, height: 1 }), overviews: 0 },
  { name: 'one cell without a value', grid: madeGrid({ width: 1, height: 1, gaps: 'all' }), overviews: 0 },
  { name: 'exactly one tile', grid: madeGrid({ width: 256, height: 256, gaps: 'some' }), options: { tileSize: 256 }, overviews: 0 },
  { name: 'one cell more than a tile', grid: madeGrid({ width: 257, height: 256 }), options: { tileSize: 256 }, overviews: 1 },
  { name: 'odd sizes and three overviews', grid: madeGrid({ width: 1037, height: 1291, gaps: 'some' }), options: { tileSize: 256 }, overviews: 3 },
  { name: 'tiles of 512', grid: madeGrid({ width: 701, height: 513, gaps: 'some' }), overviews: 1 },
  { name: 'no value at all', grid: madeGrid({ width: 300, height: 280, gaps: 'all' }), options: { tileSize: 256 }, overviews: 1 },
  { name: 'a long strip', grid: madeGrid({ width: 1500, height: 5 }), options: { tileSize: 256 }, overviews: 3 },
  { name: 'a strip one cell thin', grid: madeGrid({ width: 1, height: 700 }), options: { tileSize: 256 }, overviews: 0 },
  { name: 'BigTIFF', grid: madeGrid({ width: 600, height: 290, gaps: 'some' }), options: { tileSize: 256, bigTiff: 'always' }, overviews: 2 },
  { name: 'BigTIFF of one tile', grid: madeGrid({ width: 9, height: 4 }), options: { bigTiff: 'always' }, overviews: 0 },
];

function encode(grid: Grid, options: Partial<CogOptions> = {}): Promise<Uint8Array> {
  return encodeCog(grid, { crs: UTM, deflate, description: 'Residual <total field> & more', unit: 'nT', ...options });
}

/** The overviews as they should be, level by level. */
function levels(grid: Grid, count: number): Level[] {
  const list: Level[] = [grid];
  while (list.length <= count) list.push(halve(list.at(-1)!));
  return list;
}

describe.each(CASES)('a COG of $name', ({ grid, options, overviews }) => {
  it('passes our check of the standard', async () => {
    expect(checkCog(await encode(grid, options))).toEqual([]);
  });

  it('says the same to GDAL: place, CRS, nodata, unit, statistics, overviews', async () => {
    const { raster, messages } = await openWithGdal({ 'a.tif': await encode(grid, options) });
    expect(messages).toEqual([]);
    expect(raster!.size).toEqual([grid.width, grid.height]);
    expect(raster!.geoTransform).toEqual([grid.west, grid.cellM, 0, grid.north, 0, -grid.cellM]);
    expect(raster!.stac?.['proj:epsg']).toBe(26917);
    expect(raster!.metadata['IMAGE_STRUCTURE']).toMatchObject({ COMPRESSION: 'DEFLATE', PREDICTOR: '3', LAYOUT: 'COG' });
    expect(raster!.metadata['']).toMatchObject({ AREA_OR_POINT: 'Area' });
    const band = raster!.bands[0]!;
    expect(band.type).toBe('Float32');
    expect(Number(band.noDataValue)).toBeNaN();
    expect(band.unit).toBe('nT');
    expect(band.description).toBe('Residual <total field> & more');
    expect(band.overviews?.map(({ size }) => size) ?? []).toEqual(levels(grid, overviews).slice(1).map(({ width, height }) => [width, height]));
    const valid = [...grid.values].filter((value) => !Number.isNaN(value));
    const stated = band.metadata?.['']?.['STATISTICS_MEAN'];
    expect(stated === undefined).toBe(valid.length === 0);
    if (stated === undefined) return;
    const mean = valid.reduce((a, b) => a + b, 0) / valid.length;
    expect(Number(stated)).toBeCloseTo(mean, 9);
    expect(Number(band.metadata!['']!['STATISTICS_MAXIMUM'])).toBe(valid.reduce((a, b) => Math.max(a, b)));
    expect(Number(band.metadata!['']!['STATISTICS_MINIMUM'])).toBe(valid.reduce((a, b) => Math.min(a, b)));
  });

  it('gives GDAL and geotiff the same cells, level by level', async () => {
    const bytes = await encode(grid, options);
    const tiff = await fromArrayBuffer(bytes.slice().buffer);
    expect(await tiff.getImageCount()).toBe(overviews + 1);
    for (const [index, level] of levels(grid, overviews).entries()) {
      const gdal = await cellsWithGdal(bytes, index === 0 ? undefined : index - 1);
      expect([gdal.width, gdal.height]).toEqual([level.width, level.height]);
      expect(gdal.messages).toEqual([]);
      expect(firstDifference(gdal.values, level.values)).toBe(-1);
      const [band] = await (await tiff.getImage(index)).readRasters();
      expect(firstDifference(band as Float32Array, level.values)).toBe(-1);
    }
  });

  it('comes back through our own reader', async () => {
    const content = await readGeoTiff(await encode(grid, options));
    expect({ ...content.grid, values: null }).toEqual({ ...grid, values: null });
    expect(firstDifference(content.grid.values, grid.values)).toBe(-1);
    expect(content).toMatchObject({ epsg: 26917, description: 'Residual <total field> & more', unit: 'nT', overviews });
  });
});

describe('encodeCog', () => {
  it('states statistics that GDAL itself computes', async () => {
    const bytes = await encode(madeGrid({ width: 301, height: 207, gaps: 'some' }));
    const stated = (await openWithGdal({ 'a.tif': bytes })).raster!.bands[0]!.metadata!['']!;
    // A file without our statistics, so that GDAL has to compute its own.
    const silent = withoutStatistics(bytes);
    const computed = (await openWithGdal({ 'a.tif': silent }, { gdalinfo: ['-stats'] })).raster!.bands[0]!.metadata!['']!;
    for (const key of ['STATISTICS_MINIMUM', 'STATISTICS_MAXIMUM', 'STATISTICS_MEAN', 'STATISTICS_STDDEV'] as const) {
      expect(Number(stated[key]) / Number(computed[key])).toBeCloseTo(1, 9);
    }
    expect(Number(stated['STATISTICS_VALID_PERCENT'])).toBeCloseTo(Number(computed['STATISTICS_VALID_PERCENT']), 1);
  });

  it('gives the same bytes twice, and from 64-bit values that are the same in 32', async () => {
    const grid = madeGrid({ width: 523, height: 400, gaps: 'some' });
    const bytes = await encode(grid);
    expect(firstDifference(await encode(grid), bytes)).toBe(-1);
    expect(firstDifference(await encode({ ...grid, values: Float64Array.from(grid.values) }), bytes)).toBe(-1);
  });

  it('gives the same bytes whatever NaN stands in the gaps', async () => {
    const grid = madeGrid({ width: 20, height: 20, gaps: 'some' });
    const odd = grid.values.slice() as Float32Array;
    const bits = new Uint32Array(odd.buffer);
    for (let i = 0; i < odd.length; i += 1) if (Number.isNaN(odd[i]!)) bits[i] = 0xffc00123;
    expect(await encode({ ...grid, values: odd })).toEqual(await encode(grid));
  });

  // Scale and offset of a whole-number file: value = stored × scale + offset.
  it.each([
    { sample: 'int16', scale: 0.1, offset: 0, type: 'Int16', nodata: -32768 },
    { sample: 'int16', scale: 0.25, offset: 100, type: 'Int16', nodata: -32768 },
    { sample: 'byte', scale: 10, offset: -100, type: 'Byte', nodata: 255 },
  ] as const)('keeps $sample with scale $scale and offset $offset', async ({ sample, scale, offset, type, nodata }) => {
    const grid = madeGrid({ width: 530, height: 300, gaps: 'some' });
    const bytes = await encode(grid, { sample, scale, offset, tileSize: 256 });
    expect(checkCog(bytes)).toEqual([]);
    const band = (await openWithGdal({ 'a.tif': bytes })).raster!.bands[0]!;
    expect(band).toMatchObject({ type, noDataValue: nodata, scale, offset });
    const gdal = await cellsWithGdal(bytes);
    const half = scale / 2 + 1e-4;
    const wrongInGdal = [...grid.values].filter((value, i) => (Number.isNaN(value) ? gdal.values[i] !== nodata : !(Math.abs(gdal.values[i]! * scale + offset - value) <= half)));
    expect(wrongInGdal).toEqual([]);
    const { grid: back } = await readGeoTiff(bytes);
    const wrong = [...back.values].filter((value, i) => (Number.isNaN(grid.values[i]!) ? !Number.isNaN(value) : !(Math.abs(value - grid.values[i]!) <= half)));
    expect(wrong).toEqual([]);
  });

  it('refuses a value that whole numbers cannot hold', async () => {
    const grid = madeGrid({ width: 8, height: 8 });
    await expect(encode(grid, { sample: 'int16', scale: 0.01 })).rejects.toThrow(RangeError);
    await expect(encode(grid, { sample: 'byte' })).rejects.toThrow(RangeError);
  });

  it('refuses a value that only 64 bits can hold, and keeps an infinite one', async () => {
    const grid = { ...madeGrid({ width: 2, height: 1 }), values: Float64Array.of(1, 1e300) };
    await expect(encode(grid)).rejects.toThrow('does not fit float32');
    const back = await readGeoTiff(await encode({ ...grid, values: Float64Array.of(1, -Infinity) }));
    expect([...back.grid.values]).toEqual([1, -Infinity]);
  });

  it('refuses a grid whose values do not fill it', async () => {
    await expect(encode({ ...madeGrid({ width: 8, height: 8 }), height: 9 })).rejects.toThrow('8 × 9');
    await expect(encode({ ...madeGrid({ width: 8, height: 8 }), width: 0, values: new Float32Array(0) })).rejects.toThrow('0 values');
  });
});

describe('coordinate systems', () => {
  // Unit codes: EPSG 9001 metre, 9002 foot, 9003 US survey foot.
  it.each([
    { code: 2272, name: 'NAD83 / Pennsylvania South (ftUS)', unit: 1200 / 3937 },
    { code: 6565, name: 'NAD83(2011) / Pennsylvania South (ftUS)', unit: 1200 / 3937 },
    { code: 2222, name: 'NAD83 / Arizona East (ft)', unit: 0.3048 },
    { code: 32040, name: 'NAD27 / Texas South Central', unit: 1200 / 3937 },
    { code: 26717, name: 'NAD27 / UTM zone 17N', unit: 1 },
    { code: 32754, name: 'WGS 84 / UTM zone 54S', unit: 1 },
    { code: 3857, name: 'WGS 84 / Pseudo-Mercator', unit: 1 },
  ])('$code: the file is in its own unit, and metres come back', async ({ code, name, unit }) => {
    const grid = madeGrid({ width: 40, height: 30, west: 610_000, north: 90_000, cellM: 1.5 });
    const bytes = await encode(grid, { crs: crs(code) });
    const { raster, messages } = await openWithGdal({ 'a.tif': bytes });
    expect(messages).toEqual([]);
    expect(raster!.stac?.['proj:epsg']).toBe(code);
    expect(raster!.coordinateSystem!.wkt).toContain(`"${name}"`);
    const [west, cell, , north, , down] = raster!.geoTransform;
    expect(west! * unit).toBeCloseTo(grid.west, 6);
    expect(north! * unit).toBeCloseTo(grid.north, 6);
    expect(cell! * unit).toBeCloseTo(grid.cellM, 9);
    expect(down).toBe(-cell!);
    const back = await readGeoTiff(bytes);
    expect(back.epsg).toBe(code);
    expect(back.grid.west).toBeCloseTo(grid.west, 6);
    expect(back.grid.north).toBeCloseTo(grid.north, 6);
    expect(back.grid.cellM).toBeCloseTo(grid.cellM, 9);
    expect(checkCog(bytes)).toEqual([]);
  });

  it.each([4326, 4269, 4267])('EPSG:%i, in degrees', async (code) => {
    const bytes = await encode(madeGrid({ width: 4, height: 3, west: -80.5, north: 40.25, cellM: 0.125 }), { crs: crs(code) });
    const { raster } = await openWithGdal({ 'a.tif': bytes });
    expect(raster!.stac?.['proj:epsg']).toBe(code);
    expect(raster!.geoTransform).toEqual([-80.5, 0.125, 0, 40.25, 0, -0.125]);
    expect(checkCog(bytes)).toEqual([]);
  });
});

describe('the registry', () => {
  const grid = madeGrid({ width: 3, height: 2 });

  // Every hundredth system in the GDAL that comes along; all of them in Debian's, below.
  it('gives GDAL the code, the unit and the cell of every kind of system', async () => {
    for (const code of crsCodes().filter((_, i) => i % 100 === 0)) {
      const system = crs(code);
      const { raster, messages } = await openWithGdal({ 'a.tif': await encodeCog(grid, { crs: system, deflate, tileSize: 256 }) });
      expect(messages).toEqual([]);
      expect(raster!.stac?.['proj:epsg']).toBe(code);
      expect(raster!.coordinateSystem!.wkt).toContain(`"${system.unit}"`);
      expect(raster!.geoTransform[1]! * system.metresPerUnit).toBeCloseTo(1, 9);
    }
  });

  it.skipIf(!HAS_DEBIAN_GDAL)("gives Debian's GDAL the code, the unit and the cell of every system", async () => {
    const files: Record<string, Uint8Array> = {};
    const fast = (bytes: Uint8Array): Uint8Array => new Uint8Array(deflateSync(bytes, { level: 1 }));
    for (const code of crsCodes()) files[`${code}.tif`] = await encodeCog(grid, { crs: crs(code), deflate: fast, tileSize: 256 });
    const { stdout, stderr } = runPython(['-c', `
import glob
from osgeo import gdal
gdal.UseExceptions()
for path in glob.glob("*.tif"):
    dataset = gdal.Open(path)
    system = dataset.GetSpatialRef()
    units = system.GetLinearUnits() if system.IsProjected() else 1
    print(path[:-4], system.GetAuthorityCode(None), repr(units), repr(dataset.GetGeoTransform()[1]))
`], files);
    expect(stderr).toBe('');
    const lines = stdout.trim().split('\n').map((line) => line.split(' ').map(Number));
    expect(lines.length).toBe(crsCodes().length);
    const wrong = lines.filter(([code, read, units, cell]) => code !== read
      || Math.abs(units! / crs(code!).metresPerUnit - 1) > 1e-12 || Math.abs(cell! * crs(code!).metresPerUnit - 1) > 1e-12);
    expect(wrong).toEqual([]);
  });
});

describe('overviews', () => {
  it('has none where the grid fits a tile, else halves until it fits', () => {
    expect(overviewSizes(512, 512, 512)).toEqual([]);
    expect(overviewSizes(513, 12, 512)).toEqual([{ width: 257, height: 6 }]);
    expect(overviewSizes(1025, 1024, 512).map(({ width }) => width)).toEqual([513, 257]);
    expect(overviewSizes(1, 9000, 256)).toEqual([]);
  });

  it('is the mean of two by two where sides are even', () => {
    const level = halve({ width: 4, height: 2, values: Float64Array.of(1, 3, 10, NaN, 5, 7, NaN, NaN) });
    expect([...level.values]).toEqual([4, 10]);
  });

  it('keeps the mean of the whole, odd sides included', () => {
    let level: Level = madeGrid({ width: 37, height: 91 });
    const mean = [...level.values].reduce((a, b) => a + b, 0) / level.values.length;
    for (let i = 0; i < 5; i += 1) {
      level = halve(level);
      expect([...level.values].reduce((a, b) => a + b, 0) / level.values.length).toBeCloseTo(mean, 3);
    }
  });

  it('has a value exactly where a cell under it has one', () => {
    const grid = madeGrid({ width: 61, height: 34, gaps: 'some' });
    const level = halve(grid);
    for (let row = 0; row < level.height; row += 1) {
      for (let column = 0; column < level.width; column += 1) {
        const under = [];
        for (let y = Math.floor((row * 34) / 17); y < ((row + 1) * 34) / 17; y += 1) {
          for (let x = Math.floor((column * 61) / 31); x < ((column + 1) * 61) / 31; x += 1) under.push(grid.values[y * 61 + x]!);
        }
        expect(Number.isNaN(level.values[row * 31 + column]!)).toBe(under.every(Number.isNaN));
      }
    }
  });

  it('does not move the picture: a slope stays the same slope, to the edge', () => {
    const width = 7;
    const level = halve({ width, height: 7, values: Float64Array.from({ length: 49 }, (_, i) => (i % width) + 0.5) });
    // Cell centres of the level in cells of the grid, OGC 21-026: pixel scale 7/4.
    for (let column = 0; column < 4; column += 1) expect(Math.abs(level.values[column]! - (column + 0.5) * (7 / 4))).toBeLessThan(0.15);
    expect([0, 1, 2, 3].reduce((sum, column) => sum + level.values[column]!, 0) / 4).toBeCloseTo(3.5, 6);
  });
});

function withoutStatistics(bytes: Uint8Array): Uint8Array {
  const text = Buffer.from(bytes).toString('latin1');
  return new Uint8Array(Buffer.from(text.replace(/STATISTICS_/g, 'STATISTICA_'), 'latin1'));
}
