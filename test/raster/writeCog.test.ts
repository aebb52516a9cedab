import { spawnSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { memoryScratch, memorySink } from '../../src/raster/byteStores.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { gridStatistics } from '../../src/raster/gridStatistics.js';
import { readGeoTiff } from '../../src/raster/readGeoTiff.js';
import type { RowSource } from '../../src/raster/types.js';
import { writeCog } from '../../src/raster/writeCog.js';
import { hasProgram } from '../support/debianTools.js';
import { deflate, firstDifference, madeGrid, madeValue, zstdFrame } from './made.js';

const FRAME = crs(26917);

/** A grid that is made row by row, in one array that is used again and again. */
function rowsOf(width: number, height: number, asked: Array<[number, number]> = []): RowSource {
  const values = new Float32Array(width * 512);
  return {
    width, height, west: 500_000, north: 4_400_000, cellM: 1,
    async readRows(first, count) {
      asked.push([first, count]);
      // What is left of the rows before must not matter any more.
      values.fill(NaN);
      for (let row = 0; row < count; row += 1) for (let column = 0; column < width; column += 1) values[row * width + column] = madeValue(column, first + row);
      return values.subarray(0, width * count);
    },
  };
}

async function written(source: RowSource, options: Partial<Parameters<typeof writeCog>[2]> = {}): Promise<Uint8Array> {
  const sink = memorySink();
  await writeCog(source, sink, { crs: FRAME, deflate, scratch: memoryScratch(), ...options });
  return sink.bytes();
}

describe('writeCog', () => {
  it.each([[700, 1537], [513, 1025], [1300, 1023], [40, 30]])('gives the bytes of the grid in memory, %i × %i', async (width, height) => {
    for (const tileSize of [256, 512] as const) {
      const grid = madeGrid({ width, height });
      expect(firstDifference(await written(rowsOf(width, height), { tileSize }), await encodeCog(grid, { crs: FRAME, deflate, tileSize }))).toBe(-1);
    }
  });

  it('asks for each row once, from north to south, never for more than a row of tiles', async () => {
    const asked: Array<[number, number]> = [];
    await written(rowsOf(300, 1100, asked), { tileSize: 256 });
    expect(asked).toEqual([[0, 256], [256, 256], [512, 256], [768, 256], [1024, 76]]);
  });

  it('writes the file from its first byte to its last, and says its length before', async () => {
    const lengths: number[] = [];
    let stated = 0;
    const { bytes } = await writeCog(rowsOf(300, 600), { begin: (total) => void (stated = total), write: (part) => void lengths.push(part.length) }, { crs: FRAME, deflate, scratch: memoryScratch(), tileSize: 256 });
    expect(lengths.reduce((a, b) => a + b, 0)).toBe(bytes);
    expect(stated).toBe(bytes);
  });

  it('says the statistics of the whole', async () => {
    const { statistics } = await writeCog(rowsOf(300, 1100), memorySink(), { crs: FRAME, deflate, scratch: memoryScratch(), tileSize: 256 });
    const whole = gridStatistics(madeGrid({ width: 300, height: 1100 }).values)!;
    for (const key of Object.keys(whole) as Array<keyof typeof whole>) expect(statistics![key]).toBeCloseTo(whole[key], 9);
  });

  it('keeps the digits of a small spread on a large value', async () => {
    // 50,000 nT with waves of 0.01 nT: one sum of squares in 64 bits would keep two digits of the spread.
    const values = Float64Array.from({ length: 400 * 700 }, (_, i) => 50_000 + (i % 2 === 0 ? 0.0078125 : -0.0078125));
    const source = { ...rowsOf(400, 700), readRows: (first: number, count: number) => values.subarray(first * 400, (first + count) * 400) };
    const { statistics } = await writeCog(source, memorySink(), { crs: FRAME, deflate, scratch: memoryScratch(), tileSize: 256 });
    expect(statistics!.standardDeviation).toBeCloseTo(0.0078125, 12);
    expect(statistics!.mean).toBeCloseTo(50_000, 12);
  });

  it('has as many tiles under way as it is told, and the same bytes whatever the order of their ends', async () => {
    let [now, most] = [0, 0];
    let turn = 0;
    const slow = async (bytes: Uint8Array): Promise<Uint8Array> => {
      now += 1;
      most = Math.max(most, now);
      turn = (turn * 5 + 3) % 7;
      await new Promise((resolve) => void setTimeout(resolve, turn));
      now -= 1;
      return deflate(bytes);
    };
    const bytes = await written(rowsOf(900, 900), { tileSize: 256, deflate: slow, tilesUnderWay: 3 });
    expect(most).toBe(3);
    expect(firstDifference(bytes, await written(rowsOf(900, 900), { tileSize: 256 }))).toBe(-1);
  });

  it('fails with what failed: rows, compressor, sink', async () => {
    const broken = { ...rowsOf(600, 600), readRows: (first: number) => { if (first > 0) throw new Error('no rows'); return new Float32Array(600 * 256); } };
    await expect(written(broken, { tileSize: 256 })).rejects.toThrow('no rows');
    await expect(written({ ...broken, readRows: () => new Float32Array(5) }, { tileSize: 256 })).rejects.toThrow('256 rows of 600 cells came as 5 values');
    let calls = 0;
    const failing = async (bytes: Uint8Array): Promise<Uint8Array> => { calls += 1; if (calls === 2) throw new Error('no memory'); return deflate(bytes); };
    await expect(written(rowsOf(600, 600), { tileSize: 256, deflate: failing })).rejects.toThrow('no memory');
    await expect(writeCog(rowsOf(60, 60), { write: () => { throw new Error('disk full'); } }, { crs: FRAME, deflate, scratch: memoryScratch() })).rejects.toThrow('disk full');
  });

  it('wants one compressor', async () => {
    await expect(written(rowsOf(4, 4), { zstd: deflate })).rejects.toThrow('either deflate or zstd');
    await expect(writeCog(rowsOf(4, 4), memorySink(), { crs: FRAME, scratch: memoryScratch() })).rejects.toThrow('either deflate or zstd');
  });
});

describe('Zstandard', () => {
  async function readsBack(zstd: (bytes: Uint8Array) => Uint8Array): Promise<void> {
    const grid = madeGrid({ width: 530, height: 301, gaps: 'some' });
    const bytes = await encodeCog(grid, { crs: FRAME, zstd, tileSize: 256 });
    expect(checkCog(bytes)).toEqual([]);
    expect(firstDifference((await readGeoTiff(bytes)).grid.values, grid.values)).toBe(-1);
  }

  it('in blocks as they are is read by our reader', () => readsBack(zstdFrame));

  it.skipIf(!hasProgram('zstd'))('of the zstd program is read by our reader',
    () => readsBack((bytes) => new Uint8Array(spawnSync('zstd', ['-q', '-c'], { input: bytes, maxBuffer: 1 << 26 }).stdout)));
});
