import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { encodeCog, type CogOptions } from '../../src/raster/encodeCog.js';
import { overviewSizes } from '../../src/raster/overviews.js';
import { readGeoTiff } from '../../src/raster/readGeoTiff.js';
import { SAMPLE_FORMATS, type SampleKind } from '../../src/raster/sampleFormats.js';
import type { Grid } from '../../src/raster/types.js';
import { HAS_DEBIAN_GDAL } from '../support/debianTools.js';
import { deflate, firstDifference, madeGrid, zstdFrame } from './made.js';

/** Sides of the grids: one cell, one tile and a cell more or less either way, odd, tall, wide, several overviews. */
const SIZES: ReadonlyArray<readonly [width: number, height: number]> = [
  [1, 1], [1, 2], [3, 1], [16, 16], [255, 256], [256, 256], [257, 256], [256, 257], [511, 3], [512, 512], [513, 512], [512, 513],
  [513, 513], [1, 700], [700, 1], [2, 3000], [3000, 2], [5, 1500], [1025, 1024], [1037, 1291], [1300, 300], [299, 1700],
];
const SAMPLES: ReadonlyArray<{ sample: SampleKind; scale: number; offset: number }> = [
  { sample: 'float32', scale: 1, offset: 0 }, { sample: 'int16', scale: 0.1, offset: 0 }, { sample: 'byte', scale: 10, offset: -100 },
];
/** Metres, US survey feet, international feet, degrees; NAD27, NAD83, NAD83(2011), WGS 84. */
const SYSTEMS = [26917, 2272, 2222, 32040, 6565, 4326, 32754];
const GAPS = ['none', 'some', 'none', 'some', 'some', 'all'] as const;

interface Case { readonly name: string; readonly grid: Grid; readonly options: CogOptions & { scale: number; offset: number; sample: SampleKind; tileSize: 256 | 512 } }

/** Every size with every sample type; systems, gaps, tiles and TIFF's two forms go round at different paces. */
const DEFLATED: readonly Case[] = SIZES.flatMap(([width, height], i) => SAMPLES.map(({ sample, scale, offset }, j): Case => {
  const n = i * SAMPLES.length + j;
  const system = crs(SYSTEMS[n % SYSTEMS.length]!);
  const degrees = system.kind === 'geographic';
  const grid = madeGrid({ width, height, gaps: GAPS[n % GAPS.length]!, ...(degrees ? { west: -80.5, north: 40.25, cellM: 2 ** -14 } : { west: 610_000, north: 90_000, cellM: 1.5 }) });
  const options = { crs: system, deflate, sample, scale, offset, tileSize: n % 4 < 2 ? 256 : 512, bigTiff: n % 5 === 0 ? 'always' : 'auto', unit: 'nT', description: `Grid ${n}` } as const;
  return { name: `${String(n).padStart(2, '0')}-${width}x${height}-${sample}`, grid, options };
}));

const CASES: readonly Case[] = [...DEFLATED, ...DEFLATED.filter((_, i) => i % 16 === 9).map(({ name, grid, options }): Case => (
  { name: `${name}-zstd`, grid, options: { ...options, deflate: undefined, zstd: zstdFrame } }
))];

/** What the file should hold, from the rule in the documentation and not from the writer. */
function stored({ grid, options: { sample, scale, offset } }: Case): Float32Array | Int16Array | Uint8Array {
  if (sample === 'float32') return Float32Array.from(grid.values);
  const whole = (value: number): number => (Number.isNaN(value) ? SAMPLE_FORMATS[sample].nodata : Math.round((value - offset) / scale));
  return sample === 'int16' ? Int16Array.from(grid.values, whole) : Uint8Array.from(grid.values, whole);
}

/** What inspectCogs.py says of a file. */
interface Inspected {
  name: string; errors: string[]; messages: string[]; size: [number, number]; transform: number[]; epsg: number; metresPerUnit: number; area: string;
  layout: string; compression: string; type: string; nodata: string; unit: string; description: string; scale: number | null; offset: number | null;
  stated: Record<string, number>; computed: Record<string, number>; cellsEqual: boolean; overviews: Array<[number, number]>; overviewsApart: number[];
}

/** Means are rounded to 32 bits on both sides, level after level: two steps of a float between 1,024 and 2,048. */
const FLOAT_ROUNDING = 2 ** -12;
/** A mean of means, each rounded to a whole number by GDAL; ours are rounded once. */
const WHOLE_ROUNDING = 1;

const files = new Map<string, Uint8Array>();

beforeAll(async () => {
  for (const { name, grid, options } of CASES) files.set(name, await encodeCog(grid, options));
});

describe(`${CASES.length} files of all kinds`, () => {
  it('are 60 at least', () => expect(CASES.length).toBeGreaterThanOrEqual(60));

  it.each(CASES)('$name passes our check of the standard', ({ name }) => expect(checkCog(files.get(name)!)).toEqual([]));

  it.each(CASES)('$name comes back through our own reader', async ({ name, grid, options }) => {
    const content = await readGeoTiff(files.get(name)!);
    expect(content).toMatchObject({ epsg: options.crs.epsg, unit: 'nT', description: options.description, overviews: overviewSizes(grid.width, grid.height, options.tileSize).length });
    expect([content.grid.width, content.grid.height]).toEqual([grid.width, grid.height]);
    expect(content.grid.west).toBeCloseTo(grid.west, 6);
    expect(content.grid.north).toBeCloseTo(grid.north, 6);
    expect(content.grid.cellM).toBeCloseTo(grid.cellM, 9);
    const { sample, scale, offset } = options;
    const wanted = Float64Array.from(stored({ name, grid, options }), (value) => (value === SAMPLE_FORMATS[sample].nodata ? NaN : sample === 'float32' ? value : value * scale + offset));
    expect(firstDifference(content.grid.values, wanted)).toBe(-1);
  });
});

describe.skipIf(!HAS_DEBIAN_GDAL)('the same files in Debian\'s GDAL', () => {
  const inspected = new Map<string, Inspected>();

  beforeAll(() => {
    const folder = mkdtempSync(join(tmpdir(), 'ironplat-test-'));
    try {
      for (const each of CASES) {
        writeFileSync(join(folder, `${each.name}.tif`), files.get(each.name)!);
        const samples = stored(each);
        writeFileSync(join(folder, `${each.name}.bin`), new Uint8Array(samples.buffer));
      }
      const lines = execFileSync('/usr/bin/python3', [join(import.meta.dirname, 'inspectCogs.py'), folder], { encoding: 'utf8', maxBuffer: 1 << 26 });
      for (const line of lines.trim().split('\n')) {
        const one = JSON.parse(line.replace(/\bInfinity\b/g, '1e999')) as Inspected;
        inspected.set(one.name, one);
      }
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  });

  it.each(CASES)('$name', ({ name, grid, options }) => {
    const seen = inspected.get(name)!;
    const { crs: system, sample, scale, offset, tileSize } = options;
    expect(seen.errors).toEqual([]);
    expect(seen.messages).toEqual([]);
    expect(seen).toMatchObject({
      size: [grid.width, grid.height], epsg: system.epsg, area: 'Area', layout: 'COG', compression: options.zstd ? 'ZSTD' : 'DEFLATE', unit: 'nT', description: options.description,
      type: { float32: 'Float32', int16: 'Int16', byte: 'Byte' }[sample], nodata: { float32: 'nan', int16: '-32768.0', byte: '255.0' }[sample],
      cellsEqual: true, overviews: overviewSizes(grid.width, grid.height, tileSize).map(({ width, height }) => [width, height]),
    });
    expect([seen.scale ?? 1, seen.offset ?? 0]).toEqual([scale, offset]);
    expect(seen.metresPerUnit).toBeCloseTo(system.metresPerUnit, 12);
    const [west, cell, , north, , down] = seen.transform;
    expect(west! * system.metresPerUnit).toBeCloseTo(grid.west, 6);
    expect(north! * system.metresPerUnit).toBeCloseTo(grid.north, 6);
    expect(cell! * system.metresPerUnit).toBeCloseTo(grid.cellM, 9);
    expect(down).toBe(-cell!);
    expect(Object.keys(seen.stated).toSorted()).toEqual(Object.keys(seen.computed).toSorted());
    for (const [key, value] of Object.entries(seen.computed)) {
      // GDAL's convention keeps the share of valid cells to two digits.
      if (key === 'STATISTICS_VALID_PERCENT') expect(seen.stated[key]).toBeCloseTo(value, 1);
      else expect(Math.abs(seen.stated[key]! - value)).toBeLessThanOrEqual(1e-9 * Math.max(1, Math.abs(value)));
    }
    for (const apart of seen.overviewsApart) expect(apart).toBeLessThanOrEqual(sample === 'float32' ? FLOAT_ROUNDING : WHOLE_ROUNDING);
  });
});
