import { execFileSync } from 'node:child_process';
import { mkdtempSync, openSync, readFileSync, readSync, readdirSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { unzlibSync } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { deflate } from '../../cli/deflate.js';
import { fileSource } from '../../cli/fileSource.js';
import { writeCogFile } from '../../cli/rasterFiles.js';
import { crs } from '../../src/geodesy/crs.js';
import { Random } from '../../src/numerics/random.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { openGeoTiff } from '../../src/raster/openGeoTiff.js';
import type { RowSource } from '../../src/raster/types.js';
import { HAS_DEBIAN_GDAL } from '../support/debianTools.js';

const FRAME = crs(26917);
/** IRONPLAT_LARGE=20000 writes a grid of that many cells a side: 20,000 takes two minutes and 5 GB of the temporary folder. */
const LARGE = Number(process.env['IRONPLAT_LARGE'] ?? 0);

let folder: string;
beforeAll(() => void (folder = mkdtempSync(join(tmpdir(), 'ironplat-test-'))));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Waves with noise that repeats after 65,536 cells of a row: any cell can be named without the others. */
const NOISE = Float32Array.from({ length: 65_536 }, ((random) => () => random.normal())(new Random(3)));
const cell = (column: number, row: number): number => Math.fround(Math.fround(40 * Math.sin(column / 170) * Math.cos(row / 230)) + NOISE[(Math.imul(row, 40_503) + column * 4099) & 65_535]!);

function rowsOf(width: number, height: number): RowSource {
  const values = new Float32Array(width * 512);
  return {
    width, height, west: 500_000, north: 4_400_000, cellM: 1,
    readRows(first, count) {
      const across = Float64Array.from({ length: width }, (_, column) => 40 * Math.sin(column / 170));
      for (let row = 0; row < count; row += 1) {
        const down = Math.cos((first + row) / 230);
        const start = Math.imul(first + row, 40_503);
        for (let column = 0; column < width; column += 1) values[row * width + column] = Math.fround(across[column]! * down) + NOISE[(start + column * 4099) & 65_535]!;
      }
      return values.subarray(0, width * count);
    },
  };
}

describe('deflate', () => {
  const random = new Random(1);
  const noise = Uint8Array.from({ length: 600_000 }, () => random.integer(256));
  const words = Uint8Array.from({ length: 600_000 }, (_, i) => [7, 1, 9, 4, 4, 200, 13, 0, 0, 99, 3][(i * i) % 11]! + (i % 97 === 0 ? 1 : 0));

  it.each([['noise', noise], ['patterns', words], ['a few bytes', Uint8Array.of(1, 2, 3)], ['nothing', new Uint8Array(0)]])('of %s comes back', async (_, bytes) => {
    const back = unzlibSync(await deflate(bytes));
    expect(Buffer.compare(back, bytes)).toBe(0);
  });

  it('gives equal bytes for equal bytes, many at a time', async () => {
    const first = await deflate(words);
    for (const each of await Promise.all(Array.from({ length: 6 }, () => deflate(words)))) expect(Buffer.compare(each, first)).toBe(0);
  });

  it('looks for repeated strings where there are any', async () => {
    expect((await deflate(words)).length).toBeLessThan(words.length / 20);
    expect((await deflate(noise)).length).toBeLessThan(noise.length * 1.002);
  });
});

describe('writeCogFile', () => {
  it('writes the bytes of the grid in memory, and leaves nothing else in the folder', async () => {
    const [width, height] = [1300, 1100];
    const path = join(folder, 'same.tif');
    const { bytes } = await writeCogFile(rowsOf(width, height), path, { crs: FRAME, deflate });
    const values = new Float32Array(width * height);
    for (let row = 0; row < height; row += 1) for (let column = 0; column < width; column += 1) values[row * width + column] = cell(column, row);
    const inMemory = await encodeCog({ width, height, west: 500_000, north: 4_400_000, cellM: 1, values }, { crs: FRAME, deflate });
    expect(Buffer.compare(readFileSync(path), inMemory)).toBe(0);
    expect(bytes).toBe(inMemory.length);
    expect(readdirSync(folder)).toEqual(['same.tif']);
  });

  it('leaves what was there before when it fails', async () => {
    const path = join(folder, 'same.tif');
    const before = readFileSync(path);
    const failing = { ...rowsOf(600, 1100), readRows: () => { throw new Error('no rows'); } };
    await expect(writeCogFile(failing, path, { crs: FRAME, deflate })).rejects.toThrow('no rows');
    expect(Buffer.compare(readFileSync(path), before)).toBe(0);
    expect(readdirSync(folder)).toEqual(['same.tif']);
  });

  it.each([6000, ...(LARGE > 0 ? [LARGE] : [])])('streams %i cells a side: our check, Debian\'s validator, cells and overviews', async (side) => {
    const path = join(folder, 'large.tif');
    const { statistics } = await writeCogFile(rowsOf(side, side), path, { crs: FRAME, deflate, unit: 'nT' });
    expect(statistics!.validPercent).toBe(100);
    expect(checkCog(wholeFile(path))).toEqual([]);
    if (HAS_DEBIAN_GDAL) {
      const said = execFileSync('/usr/bin/python3', ['-m', 'osgeo_utils.samples.validate_cloud_optimized_geotiff', '--full-check=yes', path], { encoding: 'utf8' });
      expect(said).toContain('is a valid cloud optimized GeoTIFF');
    }
    const tiff = await openGeoTiff(await fileSource(path));
    for (const [column, row] of [[0, 0], [side - 40, side - 30], [side / 2 - 20, side / 2 - 15]] as const) {
      const { values } = await tiff.readWindow({ column, row, width: 40, height: 30 });
      const wrong = [...values].findIndex((value, i) => value !== cell(column + (i % 40), row + Math.floor(i / 40)));
      expect(wrong).toBe(-1);
    }
    // Sides are even: each cell of the first overview is a mean of four.
    const { values } = await tiff.readWindow({ column: side / 4, row: side / 4, width: 40, height: 30 }, 1);
    for (const [i, value] of values.entries()) {
      const [x, y] = [2 * (side / 4 + (i % 40)), 2 * (side / 4 + Math.floor(i / 40))];
      expect(value).toBeCloseTo((cell(x, y) + cell(x + 1, y) + cell(x, y + 1) + cell(x + 1, y + 1)) / 4, 4);
    }
  }, 60_000 + LARGE * 60);
});

/** readFileSync ends at 2 GB. */
function wholeFile(path: string): Uint8Array {
  const bytes = new Uint8Array(statSync(path).size);
  const file = openSync(path, 'r');
  for (let at = 0; at < bytes.length;) at += readSync(file, bytes, at, Math.min(bytes.length - at, 1 << 30), at);
  return bytes;
}
