import { beforeAll, describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { crs } from '../../src/geodesy/crs.js';
import { Random } from '../../src/numerics/random.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { openGeoTiff } from '../../src/raster/openGeoTiff.js';
import { readGeoTiff } from '../../src/raster/readGeoTiff.js';
import { readTiffDirectories } from '../../src/raster/tiffDirectories.js';
import { withGdal } from '../support/gdal.js';
import { deflate, madeGrid, zstdFrame } from './made.js';

/** Damaged files of each seed; IRONPLAT_FUZZ raises it, for a longer look. */
const CASES = Number(process.env['IRONPLAT_FUZZ'] ?? 500);
/** A case that hangs ends the test at this time; all of them together take a tenth of it on a quiet machine. */
const TIMEOUT_MS = 60_000 + CASES * 150;

/** Files of every form that is read: both TIFFs, both byte orders, each compression, each sample type, strips, an RGB picture. */
const SEEDS: Array<{ name: string; bytes: Uint8Array }> = [];

beforeAll(async () => {
  const grid = madeGrid({ width: 70, height: 45, gaps: 'some' });
  const ours = await encodeCog(grid, { crs: crs(2272), deflate, tileSize: 256, unit: 'nT', description: 'x' });
  const three = await encodeCog(madeGrid({ width: 600, height: 300 }), { crs: crs(26917), deflate, tileSize: 256, bigTiff: 'always', sample: 'int16', scale: 0.1 });
  SEEDS.push({ name: 'classic', bytes: ours }, { name: 'BigTIFF with overviews', bytes: three }, { name: 'Zstandard', bytes: await encodeCog(grid, { crs: crs(2222), zstd: zstdFrame, tileSize: 256 }) });
  for (const [name, ...options] of [
    ['strips'], ['LZW', '-co', 'COMPRESS=LZW', '-co', 'PREDICTOR=3', '-co', 'TILED=YES', '-co', 'BLOCKXSIZE=16', '-co', 'BLOCKYSIZE=16'],
    ['PackBits', '-co', 'COMPRESS=PACKBITS', '-ot', 'Int32'], ['big-endian', '-co', 'ENDIANNESS=BIG', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=2', '-ot', 'UInt16'],
    ['64 bits', '-ot', 'Float64'], ['three bands', '-b', '1', '-b', '1', '-b', '1', '-co', 'INTERLEAVE=PIXEL', '-co', 'COMPRESS=LZW'],
  ] as const) {
    SEEDS.push({ name, bytes: await withGdal({ 'a.tif': ours }, async (api, dataset) => {
      const { local } = await api.gdal_translate(dataset, ['-of', 'GTiff', '-q', ...options], `fuzz-${name.replace(/\W/g, '')}`);
      return api.Module.FS.readFile(local).slice();
    }) });
  }
});

/** Ways to damage a file; each gives a new one. */
const DAMAGES: ReadonlyArray<(bytes: Uint8Array, random: Random) => Uint8Array> = [
  // Cut short.
  (bytes, random) => bytes.slice(0, random.integer(bytes.length)),
  // A few bits turned, most of them in the directories.
  (bytes, random) => changed(bytes, (copy) => {
    const within = random.uniform() < 0.8 ? Math.min(bytes.length, 1200) : bytes.length;
    for (let i = 0; i <= random.integer(6); i += 1) copy[random.integer(within)]! ^= 1 << random.integer(8);
  }),
  // A pointer to the first directory, or to the next, that leads anywhere.
  (bytes, random) => changed(bytes, (copy, view) => {
    const { big, littleEndian, directories } = readTiffDirectories(bytes);
    const directory = directories[random.integer(directories.length)]!;
    const at = random.uniform() < 0.4 ? (big ? 8 : 4) : directory.offset + (big ? 8 : 2) + directory.tags.size * (big ? 20 : 12);
    const target = random.uniform() < 0.9 ? random.integer(copy.length + 40) : 0xfffffff0;
    if (big) view.setBigUint64(at, BigInt(target), littleEndian);
    else view.setUint32(at, target, littleEndian);
  }),
  // A field of a directory with another number in it: type, count or value.
  (bytes, random) => changed(bytes, (_, view) => {
    const { big, littleEndian, directories } = readTiffDirectories(bytes);
    const directory = directories[random.integer(directories.length)]!;
    const [head, entry] = big ? [8, 20] : [2, 12];
    const at = directory.offset + head + random.integer(directory.tags.size) * entry;
    const number = [0, 1, 2, 16, 255, 65_535, 1 << 20, 0x7fffffff, 0xffffffff][random.integer(9)]!;
    if (random.uniform() < 0.3) view.setUint16(at + 2, random.integer(20), littleEndian);
    else view.setUint32(at + [4, 8, big ? 12 : 8][random.integer(3)]!, number, littleEndian);
  }),
  // A stretch overwritten with noise or with a copy of another.
  (bytes, random) => changed(bytes, (copy) => {
    const [from, to, length] = [random.integer(copy.length), random.integer(copy.length), random.integer(64)];
    if (random.uniform() < 0.5) copy.copyWithin(to, from, from + length);
    else for (let i = to; i < Math.min(copy.length, to + length); i += 1) copy[i] = random.integer(256);
  }),
];

function changed(bytes: Uint8Array, change: (copy: Uint8Array, view: DataView) => void): Uint8Array {
  const copy = bytes.slice();
  change(copy, new DataView(copy.buffer));
  return copy;
}

/** What a reader makes of a file; anything but a result or a complaint is a fault of ours. */
async function outcome(read: () => unknown): Promise<'read' | 'complaint'> {
  try {
    await read();
    return 'read';
  } catch (problem) {
    if (problem instanceof UserError) return 'complaint';
    throw problem;
  }
}

describe('damaged files', () => {
  it(`are read, or complained about, or have violations: ${CASES} of each form`, async () => {
    const counts = { read: 0, complaint: 0, violations: 0 };
    for (const [number, { name, bytes }] of SEEDS.entries()) {
      for (let i = 0; i < CASES; i += 1) {
        const random = new Random(1000 * number + i);
        const bad = DAMAGES[i % DAMAGES.length]!(bytes, random);
        try {
          counts[await outcome(() => readGeoTiff(bad, 'bad.tif'))] += 1;
          if (checkCog(bad).length > 0) counts.violations += 1;
        } catch (problem) {
          throw new Error(`${name}, case ${i}: ${problem instanceof Error ? problem.stack : String(problem)}`, { cause: problem });
        }
      }
    }
    // The damage is neither without effect nor total.
    expect(counts.read).toBeGreaterThan(CASES / 10);
    expect(counts.complaint).toBeGreaterThan(CASES);
    expect(counts.violations).toBeGreaterThan(CASES);
  }, TIMEOUT_MS);

  it('are complained about in parts as in whole', async () => {
    for (let i = 0; i < CASES / 5; i += 1) {
      const bad = DAMAGES[i % DAMAGES.length]!(SEEDS[1]!.bytes, new Random(i));
      const source = { size: bad.length, read: async (offset: number, length: number) => bad.slice(offset, offset + length) };
      const inParts = await outcome(async () => {
        const tiff = await openGeoTiff(source);
        await tiff.readWindow({ column: 0, row: 0, width: tiff.width, height: tiff.height });
      });
      expect(inParts).toBe(await outcome(() => readGeoTiff(bad)));
    }
  }, TIMEOUT_MS);

  it('that say they are longer than they are end with a complaint', async () => {
    const { bytes } = SEEDS[1]!;
    for (const length of [0, 7, 100, 400, 700, bytes.length - 9]) {
      const source = { size: bytes.length, read: (offset: number, wanted: number) => bytes.slice(offset, Math.min(length, offset + wanted)) };
      await expect(openGeoTiff(source).then((tiff) => tiff.readWindow({ column: 0, row: 0, width: tiff.width, height: tiff.height }))).rejects.toBeInstanceOf(UserError);
    }
  });
});

describe('files made to be bad', () => {
  const word = (view: DataView, at: number, value: number): void => view.setUint32(at, value, true);

  it('have no endless directories: a thousand that share one long list of values are soon given up', async () => {
    const bytes = new Uint8Array(1_000_000);
    const view = new DataView(bytes.buffer);
    bytes.set([0x49, 0x49, 42, 0]);
    word(view, 4, 8);
    for (let at = 8; at < 8 + 18 * 1000; at += 18) {
      view.setUint16(at, 1, true);
      view.setUint16(at + 2, 700, true);
      view.setUint16(at + 4, 1, true);
      word(view, at + 6, 900_000);
      word(view, at + 10, 8);
      word(view, at + 14, at + 18);
    }
    expect(checkCog(bytes)[0]).toBe('requirement use-geotiff: its directories and their values together are larger than the file');
    await expect(readGeoTiff(bytes)).rejects.toMatchObject({ code: 'grid_file_invalid' });
  });

  it('do not make a small file a huge grid', async () => {
    const bytes = await encodeCog(madeGrid({ width: 4, height: 4 }), { crs: crs(26917), deflate, tileSize: 256 });
    const { directories } = readTiffDirectories(bytes);
    const huge = bytes.slice();
    const view = new DataView(huge.buffer);
    for (let at = directories[0]!.offset + 2; at < directories[0]!.offset + 2 + 12 * directories[0]!.tags.size; at += 12) {
      if ([256, 257].includes(view.getUint16(at, true))) word(view, at + 8, 1_048_560);
      if ([322, 323].includes(view.getUint16(at, true))) {
        view.setUint16(at + 2, 4, true);
        word(view, at + 8, 1_048_560);
      }
    }
    await expect(readGeoTiff(huge)).rejects.toMatchObject({ code: 'grid_file_invalid' });
  });
});
