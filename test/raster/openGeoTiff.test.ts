import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs } from '../../src/geodesy/crs.js';
import { memorySource } from '../../src/raster/byteStores.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { httpSource } from '../../src/raster/httpSource.js';
import { openGeoTiff } from '../../src/raster/openGeoTiff.js';
import { halve } from '../../src/raster/overviews.js';
import { readTiffDirectories } from '../../src/raster/tiffDirectories.js';
import type { Grid } from '../../src/raster/types.js';
import { deflate, firstDifference, madeGrid } from './made.js';

const GRID = madeGrid({ width: 1400, height: 1111, gaps: 'some', west: 500_000, north: 4_400_000, cellM: 2 });
const TILE = 256;

let cog: Uint8Array;
let plan: ReturnType<typeof readTiffDirectories>;

beforeAll(async () => {
  cog = await encodeCog(GRID, { crs: crs(26917), deflate, tileSize: TILE, unit: 'nT', description: 'Residual' });
  plan = readTiffDirectories(cog);
});

/** The cells of a window, cut out of the whole. */
function cut({ width, values }: Pick<Grid, 'width' | 'values'>, window: { column: number; row: number; width: number; height: number }): Float32Array {
  const out = new Float32Array(window.width * window.height);
  for (let row = 0; row < window.height; row += 1) {
    const from = (window.row + row) * width + window.column;
    out.set(values.subarray(from, from + window.width), row * window.width);
  }
  return out;
}

/** Bytes of the tiles that a window touches, as the file's own index states them. */
function tileBytes(level: number, tiles: readonly number[]): number {
  const counts = plan.directories[level]!.tags.get(325)!.values;
  return tiles.reduce((sum, tile) => sum + counts[tile]!, 0);
}

describe('openGeoTiff', () => {
  it('says what the file says', async () => {
    const tiff = await openGeoTiff(memorySource(cog));
    expect(tiff).toMatchObject({ width: 1400, height: 1111, west: 500_000, north: 4_400_000, cellM: 2, band: { unit: 'nT', description: 'Residual', scale: 1, offset: 0 } });
    expect(tiff.crs.epsg).toBe(26917);
    expect(tiff.levels.map(({ width, height }) => [width, height])).toEqual([[1400, 1111], [700, 556], [350, 278], [175, 139]]);
    // OGC 21-026, 7.3.2: the scale of an overview is that of the image times the ratio of their sides.
    expect(tiff.levels[1]!.cellHeightM).toBeCloseTo((2 * 1111) / 556, 12);
    const valid = [...GRID.values].filter((value) => !Number.isNaN(value));
    expect(tiff.band.statistics!.mean).toBeCloseTo(valid.reduce((a, b) => a + b, 0) / valid.length, 9);
  });

  it.each([
    { column: 0, row: 0, width: 1, height: 1 }, { column: 255, row: 255, width: 2, height: 2 }, { column: 1399, row: 1110, width: 1, height: 1 },
    { column: 300, row: 10, width: 900, height: 1000 }, { column: 0, row: 0, width: 1400, height: 1111 },
  ])('reads the window $column, $row, $width × $height', async (window) => {
    const read = await (await openGeoTiff(memorySource(cog))).readWindow(window);
    expect(firstDifference(read.values, cut(GRID, window))).toBe(-1);
    expect(read).toMatchObject({ width: window.width, height: window.height, west: 500_000 + 2 * window.column, north: 4_400_000 - 2 * window.row });
  });

  it('reads windows of overviews', async () => {
    const window = { column: 100, row: 31, width: 77, height: 200 };
    const read = await (await openGeoTiff(memorySource(cog))).readWindow(window, 2);
    const level = halve(halve(GRID));
    expect(firstDifference(read.values, cut(level, window))).toBe(-1);
  });

  it('reads all cells that bounds touch, and no others', async () => {
    const tiff = await openGeoTiff(memorySource(cog));
    const read = await tiff.readBounds({ west: 500_100.5, east: 500_104, south: 4_399_899.9, north: 4_399_903 });
    expect(read).toMatchObject({ west: 500_100, width: 2, north: 4_399_904, height: 3 });
    expect(firstDifference(read.values, cut(GRID, { column: 50, row: 48, width: 2, height: 3 }))).toBe(-1);
    const clipped = await tiff.readBounds({ west: 0, east: 500_003, south: 0, north: 1e7 });
    expect([clipped.width, clipped.height, clipped.west, clipped.north]).toEqual([2, 1111, 500_000, 4_400_000]);
    await expect(tiff.readBounds({ west: 0, east: 499_999, south: 0, north: 1e7 })).rejects.toMatchObject({ code: 'outside_area' });
  });

  it('refuses windows that are not in the image', async () => {
    const tiff = await openGeoTiff(memorySource(cog));
    for (const window of [{ column: -1, row: 0, width: 2, height: 2 }, { column: 1399, row: 0, width: 2, height: 1 }, { column: 0.5, row: 0, width: 1, height: 1 }, { column: 0, row: 0, width: 0, height: 1 }]) {
      await expect(tiff.readWindow(window)).rejects.toThrow(RangeError);
    }
    await expect(tiff.readWindow({ column: 0, row: 0, width: 1, height: 1 }, 4)).rejects.toThrow('level 4');
  });
});

describe('a plain static server', () => {
  let server: Server;
  let address: string;
  let sent: Array<{ range: string; bytes: number }> = [];
  let answer: 'ranges' | 'whole' | 'changed' = 'ranges';

  beforeAll(async () => {
    server = createServer((request, response) => {
      const range = /^bytes=(\d+)-(\d+)$/.exec(request.headers.range ?? '');
      if (request.url !== '/grid.tif') {
        response.writeHead(404).end();
      } else if (!range || answer === 'whole') {
        response.writeHead(200, { 'content-length': cog.length }).end(cog);
      } else {
        const body = cog.subarray(Number(range[1]), Number(range[2]) + 1);
        sent.push({ range: request.headers.range!, bytes: body.length });
        response.writeHead(206, { etag: answer === 'changed' ? `"${sent.length}"` : '"1"', 'content-range': `bytes ${range[1]}-${Number(range[1]) + body.length - 1}/${cog.length}` }).end(body);
      }
    });
    await new Promise<void>((resolve) => void server.listen(0, '127.0.0.1', resolve));
    address = `http://127.0.0.1:${(server.address() as AddressInfo).port}/grid.tif`;
  });
  afterAll(() => void server.close());

  const total = (): number => sent.reduce((sum, { bytes }) => sum + bytes, 0);
  const FIRST = 32_768;

  it('sends the directories in one request, then the tiles of a window and nothing else', async () => {
    [sent, answer] = [[], 'ranges'];
    const tiff = await openGeoTiff(await httpSource(address, fetch));
    expect(sent.map(({ bytes }) => bytes)).toEqual([FIRST]);
    // Within the one tile of column 4, row 3 of 6 × 5.
    const window = { column: 4 * TILE + 10, row: 3 * TILE + 5, width: 100, height: 50 };
    const read = await tiff.readWindow(window);
    expect(firstDifference(read.values, cut(GRID, window))).toBe(-1);
    expect(sent.slice(1).map(({ bytes }) => bytes)).toEqual([tileBytes(0, [3 * 6 + 4])]);
  });

  it('sends tiles that lie side by side at once, with their eight bytes between', async () => {
    [sent, answer] = [[], 'ranges'];
    const tiff = await openGeoTiff(await httpSource(address, fetch));
    const window = { column: TILE - 5, row: TILE - 5, width: TILE + 10, height: 10 };
    const read = await tiff.readWindow(window);
    expect(firstDifference(read.values, cut(GRID, window))).toBe(-1);
    expect(sent.slice(1).map(({ bytes }) => bytes)).toEqual([tileBytes(0, [0, 1, 2]) + 16, tileBytes(0, [6, 7, 8]) + 16]);
  });

  it('sends an overview of the whole for a small part of the file', async () => {
    [sent, answer] = [[], 'ranges'];
    const tiff = await openGeoTiff(await httpSource(address, fetch));
    const read = await tiff.readWindow({ column: 0, row: 0, width: 175, height: 139 }, 3);
    expect(firstDifference(read.values, halve(halve(halve(GRID))).values)).toBe(-1);
    expect(total()).toBeLessThanOrEqual(FIRST + tileBytes(3, [0]));
    expect(total()).toBeLessThan(cog.length / 20);
  });

  it('is said to be none where it sends whole files, nothing, or another file', async () => {
    answer = 'whole';
    const complaint = await httpSource(address, fetch).catch((problem: unknown) => problem);
    expect(complaint).toBeInstanceOf(UserError);
    expect(complaint).toMatchObject({ code: 'file_unreadable', complaint: { where: address, found: expect.stringContaining('200') as string } });
    await expect(httpSource(`${address}.gone`, fetch)).rejects.toMatchObject({ code: 'file_unreadable' });
    await expect(httpSource('http://127.0.0.1:1/grid.tif', fetch)).rejects.toMatchObject({ code: 'file_unreadable' });
    answer = 'changed';
    const tiff = await openGeoTiff(await httpSource(address, fetch));
    await expect(tiff.readWindow({ column: 0, row: 1000, width: 1, height: 1 })).rejects.toMatchObject({ code: 'file_unreadable' });
  });
});
