import { UserError } from '../errors.js';
import { SAMPLE_TYPES, type SampleType } from './decodeTile.js';
import { EXPANSION } from './decompress.js';
import { TAG } from './tiffTags.js';
import type { ReadDirectory } from './tiffDirectories.js';

/** One image of a TIFF, in tiles; strips are tiles as wide as the image. */
export interface TiffImage {
  readonly width: number;
  readonly height: number;
  readonly tileWidth: number;
  readonly tileHeight: number;
  readonly across: number;
  readonly down: number;
  /** Strips end with the image; tiles are filled up beyond it. */
  readonly strips: boolean;
  readonly sample: SampleType;
  /** Samples of a cell that lie side by side in a tile. */
  readonly interleaved: number;
  readonly compression: number;
  readonly predictor: number;
  readonly littleEndian: boolean;
  /** Of the first band's tiles, row by row. */
  readonly offsets: readonly number[];
  readonly byteCounts: readonly number[];
}

const STRIP_OFFSETS = 273;
const ROWS_PER_STRIP = 278;
const STRIP_BYTE_COUNTS = 279;
const SEPARATE_PLANES = 2;
/** More bands than any sensor has. */
const MOST_SAMPLES = 4096;
/** A tile that unpacks to more is no tile: nothing could be read from it in parts. */
const MOST_TILE_BYTES = 2 ** 30;

/** What a directory says of its image, as far as Ironplat reads such. Throws UserError `grid_file_invalid` elsewhere. */
export function tiffImage(directory: ReadDirectory, littleEndian: boolean, where: string): TiffImage {
  const refuse = (found: string, wanted = 'a GeoTIFF that is whole'): UserError => new UserError({ code: 'grid_file_invalid', where, found, wanted });
  const values = (id: number): readonly number[] => directory.tags.get(id)?.values ?? [];
  const one = (id: number, otherwise: number): number => values(id)[0] ?? otherwise;
  const width = one(TAG.imageWidth, 0);
  const height = one(TAG.imageLength, 0);
  const strips = !directory.tags.has(TAG.tileWidth);
  const tileWidth = strips ? width : one(TAG.tileWidth, 0);
  const tileHeight = strips ? Math.min(one(ROWS_PER_STRIP, height), height) : one(TAG.tileLength, 0);
  for (const side of [width, height, tileWidth, tileHeight]) {
    if (!(Number.isInteger(side) && side > 0)) throw refuse(`an image of ${width} × ${height} cells in tiles of ${tileWidth} × ${tileHeight}`);
  }
  const samples = one(TAG.samplesPerPixel, 1);
  if (!(samples >= 1 && samples <= MOST_SAMPLES)) throw refuse(`${samples} samples a cell`);
  const bits = one(TAG.bitsPerSample, 1);
  const format = one(TAG.sampleFormat, 1);
  const sample = SAMPLE_TYPES.find((type) => type.bits === bits && type.format === format);
  const alike = values(TAG.bitsPerSample).every((each) => each === bits) && values(TAG.sampleFormat).every((each) => each === format);
  if (!sample || !alike) throw refuse(`samples of ${values(TAG.bitsPerSample).slice(0, 4).join(', ')} bits in format ${format}`, 'whole numbers of 8, 16 or 32 bits or floats of 32 or 64, the same in all bands');
  const compression = one(TAG.compression, 1);
  const expansion = EXPANSION.get(compression);
  if (expansion === undefined) throw refuse(`compression ${compression}`, 'no compression, DEFLATE, LZW, PackBits or Zstandard');
  const predictor = one(TAG.predictor, 1);
  if (![1, 2, 3].includes(predictor) || (predictor === 3 && format !== 3)) throw refuse(`predictor ${predictor}`, 'predictor 1, 2, or 3 for floats');

  const planes = one(TAG.planarConfiguration, 1) === SEPARATE_PLANES ? samples : 1;
  const interleaved = samples / planes;
  const across = Math.ceil(width / tileWidth);
  const down = Math.ceil(height / tileHeight);
  const offsets = values(strips ? STRIP_OFFSETS : TAG.tileOffsets);
  const byteCounts = values(strips ? STRIP_BYTE_COUNTS : TAG.tileByteCounts);
  if (offsets.length !== across * down * planes || byteCounts.length !== offsets.length) {
    throw refuse(`${offsets.length} offsets and ${byteCounts.length} sizes for ${across * down * planes} tiles`);
  }
  const tileBytes = tileWidth * tileHeight * interleaved * (bits / 8);
  // What not even the largest stored tile can unpack to is said here, before memory is set aside for it.
  const largest = byteCounts.reduce((most, each) => Math.max(most, each), 0);
  if (tileBytes > MOST_TILE_BYTES || (largest > 0 && tileBytes > expansion * largest)) {
    throw refuse(`tiles of ${tileWidth} × ${tileHeight} cells in at most ${largest} bytes`);
  }
  return { width, height, tileWidth, tileHeight, across, down, strips, sample, interleaved, compression, predictor, littleEndian, offsets, byteCounts };
}
