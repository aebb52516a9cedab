import type { SampleArray, SampleFormat } from './sampleFormats.js';
import { emptySamples } from './sampleFormats.js';

/** An image in rows, from the upper left. */
export interface SampleImage {
  readonly width: number;
  readonly height: number;
  readonly samples: SampleArray;
}

/** Where a tile lies: its column and row among the tiles, and its side in cells. */
export interface TilePlace {
  readonly column: number;
  readonly row: number;
  readonly size: number;
}

/** The one NaN that is ever written, so that equal grids give equal bytes. */
const QUIET_NAN_BITS = 0x7fc00000;

/** A square tile cut out of the image; what lies beyond the image's edge is nodata. */
export function cutTile(image: SampleImage, place: TilePlace, format: SampleFormat): SampleArray {
  const { size } = place;
  const tile = emptySamples(format.kind, size * size);
  const left = place.column * size;
  const top = place.row * size;
  const columns = Math.min(size, image.width - left);
  const rows = Math.min(size, image.height - top);
  for (let row = 0; row < rows; row += 1) {
    const from = (top + row) * image.width + left;
    tile.set(image.samples.subarray(from, from + columns), row * size);
  }
  return tile;
}

/** The tile's bytes after the format's predictor, little-endian, ready for DEFLATE. */
export function predictTile(tile: SampleArray, size: number): Uint8Array {
  if (tile instanceof Float32Array) return predictFloats(tile, size);
  return tile instanceof Int16Array ? predictShorts(tile, size) : predictBytes(tile, size);
}

/**
 * Predictor 3: each row's floats are split into four planes of bytes, highest byte first, and each byte of the row is
 * replaced by its difference from the one before.
 * Source: Adobe Photoshop TIFF Technical Note 3 (2005), floating point predictor.
 */
function predictFloats(tile: Float32Array, size: number): Uint8Array {
  const bits = new Uint32Array(tile.buffer, tile.byteOffset, tile.length);
  const bytes = new Uint8Array(tile.length * 4);
  for (let row = 0; row * size < tile.length; row += 1) {
    const start = row * size * 4;
    for (let column = 0; column < size; column += 1) {
      const index = row * size + column;
      const word = Number.isNaN(tile[index]!) ? QUIET_NAN_BITS : bits[index]!;
      bytes[start + column] = word >>> 24;
      bytes[start + size + column] = (word >>> 16) & 255;
      bytes[start + 2 * size + column] = (word >>> 8) & 255;
      bytes[start + 3 * size + column] = word & 255;
    }
    for (let i = start + size * 4 - 1; i > start; i -= 1) bytes[i]! -= bytes[i - 1]!;
  }
  return bytes;
}

/** Predictor 2 on 16-bit samples: the difference from the sample to the left, modulo 65536. Source: TIFF 6.0, section 14. */
function predictShorts(tile: Int16Array, size: number): Uint8Array {
  const bytes = new Uint8Array(tile.length * 2);
  for (let i = 0; i < tile.length; i += 1) {
    const difference = i % size === 0 ? tile[i]! : tile[i]! - tile[i - 1]!;
    bytes[2 * i] = difference & 255;
    bytes[2 * i + 1] = (difference >> 8) & 255;
  }
  return bytes;
}

/** Predictor 2 on bytes, modulo 256. Source: TIFF 6.0, section 14. */
function predictBytes(tile: Uint8Array, size: number): Uint8Array {
  const bytes = tile.slice();
  for (let i = bytes.length - 1; i > 0; i -= 1) {
    if (i % size !== 0) bytes[i]! -= bytes[i - 1]!;
  }
  return bytes;
}
