import type { Crs } from '../geodesy/types.js';
import { gdalMetadata } from './gdalMetadata.js';
import { geoKeys } from './geoKeys.js';
import { gridStatistics } from './gridStatistics.js';
import { halve, overviewSizes, type Level } from './overviews.js';
import { SAMPLE_FORMATS, toSamples, type SampleFormat, type SampleKind } from './sampleFormats.js';
import { TAG, asciiTag, doubleTag, longTag, shortTag, type TiffTag } from './tiffTags.js';
import { LEADER_BYTES, TRAILER_BYTES, layoutTiff, type ImagePlan } from './tiffLayout.js';
import { cutTile, predictTile, type SampleImage } from './tileBytes.js';
import type { Grid } from './types.js';

/** Bytes to a zlib stream (RFC 1950). */
export type Deflate = (bytes: Uint8Array) => Uint8Array | Promise<Uint8Array>;

export interface CogOptions {
  /** The grid's CRS; the file is in the CRS's own unit. */
  readonly crs: Crs;
  readonly deflate: Deflate;
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
}

export const COG_DEFAULTS = Object.freeze({
  description: '', unit: '', sample: 'float32', scale: 1, offset: 0, tileSize: 512, bigTiff: 'auto',
} as const);

/** Adobe DEFLATE, a zlib stream. Source: Adobe Photoshop TIFF Technical Notes (2002). */
const COMPRESSION_DEFLATE = 8;
const PHOTOMETRIC_BLACK_IS_ZERO = 1;
const REDUCED_RESOLUTION = 1;

/**
 * A grid as Cloud-Optimised GeoTIFF: one band, tiled, DEFLATE, overviews by mean, statistics in the metadata, NaN (for
 * whole numbers a reserved number) as nodata. Equal grids and options give equal bytes as long as `deflate` does.
 * Source: OGC 21-026 (COG), OGC 19-008r4 (GeoTIFF 1.1).
 */
export async function encodeCog(grid: Grid, options: CogOptions): Promise<Uint8Array> {
  const { crs, deflate, description, unit, sample, scale, offset, tileSize, bigTiff } = { ...COG_DEFAULTS, ...options };
  if (grid.values.length !== grid.width * grid.height || grid.values.length === 0) {
    throw new Error(`A grid of ${grid.width} × ${grid.height} cells has ${grid.values.length} values`);
  }
  if (sample === 'float32' && (scale !== 1 || offset !== 0)) throw new Error('Scale and offset are for whole-number samples');
  const format = SAMPLE_FORMATS[sample];

  const images: Array<SampleImage & { tiles: Uint8Array[] }> = [];
  let level: Level = { ...grid, cover: null };
  for (let index = 0; index <= overviewSizes(grid.width, grid.height, tileSize).length; index += 1) {
    if (index > 0) level = halve(level);
    const image = { width: level.width, height: level.height, samples: toSamples(level.values, format, { scale, offset }) };
    images.push({ ...image, tiles: await compressTiles(image, { format, tileSize, deflate }) });
  }

  const statistics = gridStatistics(images[0]!.samples, format.nodata);
  const xml = gdalMetadata({ description, unit, scale, offset, statistics });
  const plans: ImagePlan[] = images.map((image, index) => ({
    tags: [
      ...imageTags(image, { format, tileSize, reduced: index > 0 }),
      ...(index === 0 ? [...placeTags(grid, crs), ...(description ? [asciiTag(TAG.imageDescription, description)] : [])] : []),
      ...(index === 0 && xml ? [asciiTag(TAG.gdalMetadata, xml)] : []),
    ].toSorted((a, b) => a.id - b.id),
    tileBytes: image.tiles.map((tile) => tile.length),
  }));

  const layout = layoutTiff(plans, bigTiff);
  const file = new Uint8Array(layout.fileBytes);
  const view = new DataView(file.buffer);
  file.set(layout.header);
  for (const [index, { tiles }] of images.entries()) {
    for (const [number, tile] of tiles.entries()) {
      const at = layout.offsets[index]![number]!;
      view.setUint32(at - LEADER_BYTES, tile.length, true);
      file.set(tile, at);
      file.set(tile.subarray(tile.length - TRAILER_BYTES), at + tile.length);
    }
  }
  return file;
}

async function compressTiles(image: SampleImage, how: { format: SampleFormat; tileSize: number; deflate: Deflate }): Promise<Uint8Array[]> {
  const tiles: Uint8Array[] = [];
  for (let row = 0; row * how.tileSize < image.height; row += 1) {
    for (let column = 0; column * how.tileSize < image.width; column += 1) {
      const tile = cutTile(image, { column, row, size: how.tileSize }, how.format);
      tiles.push(await how.deflate(predictTile(tile, how.tileSize)));
    }
  }
  return tiles;
}

function imageTags(image: SampleImage, how: { format: SampleFormat; tileSize: number; reduced: boolean }): TiffTag[] {
  return [
    longTag(TAG.newSubfileType, how.reduced ? REDUCED_RESOLUTION : 0),
    longTag(TAG.imageWidth, image.width),
    longTag(TAG.imageLength, image.height),
    shortTag(TAG.bitsPerSample, how.format.bits),
    shortTag(TAG.compression, COMPRESSION_DEFLATE),
    shortTag(TAG.photometric, PHOTOMETRIC_BLACK_IS_ZERO),
    shortTag(TAG.samplesPerPixel, 1),
    shortTag(TAG.planarConfiguration, 1),
    shortTag(TAG.predictor, how.format.predictor),
    shortTag(TAG.tileWidth, how.tileSize),
    shortTag(TAG.tileLength, how.tileSize),
    shortTag(TAG.sampleFormat, how.format.tiffFormat),
    asciiTag(TAG.gdalNodata, String(how.format.nodata).toLowerCase()),
  ];
}

/** The exit of the house: from metres to the CRS's own unit. */
function placeTags(grid: Grid, crs: Crs): TiffTag[] {
  const cell = grid.cellM / crs.metresPerUnit;
  const { directory, ascii } = geoKeys(crs);
  return [
    doubleTag(TAG.modelPixelScale, cell, cell, 0),
    doubleTag(TAG.modelTiepoint, 0, 0, 0, grid.west / crs.metresPerUnit, grid.north / crs.metresPerUnit, 0),
    shortTag(TAG.geoKeyDirectory, ...directory),
    asciiTag(TAG.geoAsciiParams, ascii),
  ];
}
