import type { Crs } from '../geodesy/types.js';
import { geoKeys } from './geoKeys.js';
import type { SampleFormat } from './sampleFormats.js';
import { TAG, asciiTag, doubleTag, longTag, shortTag, type TiffTag } from './tiffTags.js';
import type { GridPlace } from './types.js';

/**
 * Compression schemes of the tiles: DEFLATE as a zlib stream, Zstandard as a frame.
 * Source: Adobe Photoshop TIFF Technical Notes (2002) for 8; libtiff's registered private tag for 50000.
 */
export const COMPRESSION = Object.freeze({ deflate: 8, zstd: 50000 });
const PHOTOMETRIC_BLACK_IS_ZERO = 1;
const REDUCED_RESOLUTION = 1;

/** Tags that every image of the file carries. */
export function imageTags(
  size: { width: number; height: number }, how: { format: SampleFormat; tileSize: number; compression: number; reduced: boolean },
): TiffTag[] {
  return [
    longTag(TAG.newSubfileType, how.reduced ? REDUCED_RESOLUTION : 0),
    longTag(TAG.imageWidth, size.width),
    longTag(TAG.imageLength, size.height),
    shortTag(TAG.bitsPerSample, how.format.bits),
    shortTag(TAG.compression, how.compression),
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

/** Tags of the full image alone: its place. The exit of the house: from metres to the CRS's own unit. */
export function placeTags(grid: GridPlace, crs: Crs): TiffTag[] {
  const cell = grid.cellM / crs.metresPerUnit;
  const { directory, ascii } = geoKeys(crs);
  return [
    doubleTag(TAG.modelPixelScale, cell, cell, 0),
    doubleTag(TAG.modelTiepoint, 0, 0, 0, grid.west / crs.metresPerUnit, grid.north / crs.metresPerUnit, 0),
    shortTag(TAG.geoKeyDirectory, ...directory),
    asciiTag(TAG.geoAsciiParams, ascii),
  ];
}
