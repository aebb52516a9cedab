import type { Crs } from '../geodesy/types.js';
import type { ByteScratch, ByteSink } from './byteStores.js';
import { COMPRESSION, imageTags, placeTags } from './cogTags.js';
import { gdalMetadata } from './gdalMetadata.js';
import { RunningStatistics, type GridStatistics } from './gridStatistics.js';
import { overviewSizes } from './overviews.js';
import { RowHalver } from './rowHalver.js';
import { SAMPLE_FORMATS, toSamples, type SampleFormat, type SampleKind } from './sampleFormats.js';
import { tileBytes } from './tileBytes.js';
import { LEADER_BYTES, TRAILER_BYTES, layoutTiff, type ImagePlan } from './tiffLayout.js';
import { TileQueue, type Compress, type WaitingTiles } from './tileQueue.js';
import { TAG, asciiTag } from './tiffTags.js';
import type { RowSource } from './types.js';

export interface CogOptions {
  /** The grid's CRS; the file is in the CRS's own unit. */
  readonly crs: Crs;
  /** Bytes to a zlib stream (RFC 1950). This or `zstd`. */
  readonly deflate?: Compress | undefined;
  /** Bytes to a Zstandard frame (RFC 8878). GDAL since 2.3 reads it; many other readers do not. */
  readonly zstd?: Compress | undefined;
  /** What the values are, in a few words. */
  readonly description?: string;
  /** Unit of the values, such as `nT`. */
  readonly unit?: string;
  readonly sample?: SampleKind;
  /** `value = stored × scale + offset`, for whole-number samples. */
  readonly scale?: number;
  readonly offset?: number;
  /** Side of a tile in cells. */
  readonly tileSize?: 256 | 512;
  /** `auto`: only where the file would pass 4 GB. */
  readonly bigTiff?: 'auto' | 'always';
  /** Tiles that are compressed at the same time, where the compressor gives promises. */
  readonly tilesUnderWay?: number;
}

export const COG_DEFAULTS = Object.freeze({
  description: '', unit: '', sample: 'float32', scale: 1, offset: 0, tileSize: 512, bigTiff: 'auto', tilesUnderWay: 8,
} as const);

export interface WrittenCog {
  readonly bytes: number;
  /** Of the numbers as stored, before scale and offset; null where no cell has a value. */
  readonly statistics: GridStatistics | null;
}

/** One image of the pyramid while rows come in. */
interface LevelState {
  readonly width: number;
  readonly height: number;
  readonly tiles: WaitingTiles;
  /** Rows of an overview that wait for a row of tiles to be full; the full image's come as such. */
  readonly strip: Float32Array;
  rowsInStrip: number;
  rowsMade: number;
  readonly halver: RowHalver | null;
}

interface Pass {
  readonly levels: readonly LevelState[];
  readonly format: SampleFormat;
  readonly scaling: { scale: number; offset: number };
  readonly tileSize: number;
  readonly queue: TileQueue;
  readonly statistics: RunningStatistics;
}

/**
 * Writes a grid as Cloud-Optimised GeoTIFF: one band, tiled, compressed, overviews by mean, statistics in the metadata,
 * NaN (for whole numbers a reserved number) as nodata. Equal grids and options give equal bytes as long as the
 * compressor does.
 *
 * The grid is read once, a row of tiles at a time, and the overviews are made on the way. Since the file begins with the
 * sizes of all tiles and goes on with the smallest overview, the compressed tiles wait in `scratch`; then the file is
 * written from its first byte to its last. In memory are two rows of tiles, as many tiles as are under way, and twelve
 * to sixteen bytes a tile.
 * Source: OGC 21-026 (COG), OGC 19-008r4 (GeoTIFF 1.1).
 */
export async function writeCog(source: RowSource, sink: ByteSink, options: CogOptions & { readonly scratch: ByteScratch }): Promise<WrittenCog> {
  const { crs, scratch, description, unit, sample, scale, offset, tileSize, bigTiff, tilesUnderWay } = { ...COG_DEFAULTS, ...options };
  const { compress, compression } = compressorOf(options);
  if (sample === 'float32' && (scale !== 1 || offset !== 0)) throw new Error('Scale and offset are for whole-number samples');
  const format = SAMPLE_FORMATS[sample];
  const pass: Pass = {
    levels: levelsOf(source, tileSize), format, scaling: { scale, offset }, tileSize,
    queue: new TileQueue(compress, scratch, tilesUnderWay), statistics: new RunningStatistics(format.nodata),
  };
  await compressAll(source, pass);

  const statistics = pass.statistics.result();
  const xml = gdalMetadata({ description, unit, scale, offset, statistics });
  const layout = layoutTiff(pass.levels.map((level, index): ImagePlan => ({
    tags: [
      ...imageTags(level, { format, tileSize, compression, reduced: index > 0 }),
      ...(index === 0 ? [...placeTags(source, crs), ...(description ? [asciiTag(TAG.imageDescription, description)] : [])] : []),
      ...(index === 0 && xml ? [asciiTag(TAG.gdalMetadata, xml)] : []),
    ].toSorted((a, b) => a.id - b.id),
    tileBytes: level.tiles.bytes,
  })), bigTiff);

  await sink.begin?.(layout.fileBytes);
  await sink.write(layout.header);
  for (const { tiles } of pass.levels.toReversed()) {
    for (const [index, bytes] of tiles.bytes.entries()) {
      await sink.write(await scratch.read(tiles.offsets[index]!, LEADER_BYTES + bytes + TRAILER_BYTES));
    }
  }
  return { bytes: layout.fileBytes, statistics };
}

function compressorOf({ deflate, zstd }: CogOptions): { compress: Compress; compression: number } {
  if (deflate && !zstd) return { compress: deflate, compression: COMPRESSION.deflate };
  if (zstd && !deflate) return { compress: zstd, compression: COMPRESSION.zstd };
  throw new Error('A COG is compressed with either deflate or zstd');
}

function levelsOf(source: RowSource, tileSize: number): LevelState[] {
  const sizes = [{ width: source.width, height: source.height }, ...overviewSizes(source.width, source.height, tileSize)];
  return sizes.map(({ width, height }, index) => ({
    width, height, tiles: { offsets: [], bytes: [] }, rowsInStrip: 0, rowsMade: 0,
    strip: new Float32Array(index === 0 ? 0 : width * Math.min(tileSize, height)),
    halver: index + 1 < sizes.length ? new RowHalver(width, height) : null,
  }));
}

async function compressAll(source: RowSource, pass: Pass): Promise<void> {
  for (let first = 0; first < source.height; first += pass.tileSize) {
    const rows = Math.min(pass.tileSize, source.height - first);
    const values = await source.readRows(first, rows);
    if (values.length !== rows * source.width) throw new Error(`${rows} rows of ${source.width} cells came as ${values.length} values`);
    await addStrip(pass, 0, values);
  }
  await pass.queue.finish();
}

/** A whole row of tiles of a level: its tiles go to the queue, its rows to the next level, which may then be full itself. */
async function addStrip(pass: Pass, index: number, values: Float32Array | Float64Array): Promise<void> {
  const { levels, format, tileSize, queue, statistics } = pass;
  const level = levels[index]!;
  const samples = toSamples(values, format, pass.scaling);
  for (let left = 0; left < level.width; left += tileSize) {
    const strip = { width: level.width, rows: values.length / level.width, samples };
    await queue.add(level.tiles, tileBytes(strip, { left, size: tileSize }, format));
  }
  if (index === 0) statistics.add(samples);
  const next = levels[index + 1];
  if (!next) return;
  // Half as many rows come out as went in, never more than the next level's row of tiles still has room for.
  const made = level.halver!.push(samples instanceof Float32Array ? samples : values, next.strip, next.rowsInStrip);
  next.rowsInStrip += made;
  next.rowsMade += made;
  if (next.rowsInStrip < tileSize && next.rowsMade < next.height) return;
  await addStrip(pass, index + 1, next.strip.subarray(0, next.rowsInStrip * next.width));
  next.rowsInStrip = 0;
}
