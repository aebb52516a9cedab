import type { SampleFormat, Samples } from './sampleFormats.js';

/** Rows of an image as wide as the image: the strip that a row of tiles is cut from. */
export interface SampleStrip {
  readonly width: number;
  readonly rows: number;
  readonly samples: Samples;
}

/** The one NaN that is ever written, so that equal grids give equal bytes. */
const QUIET_NAN_BITS = 0x7fc00000;

/**
 * The bytes of one square tile of a strip, after the format's predictor, little-endian, ready to be compressed. `left`
 * is the tile's first column, `size` its side; what lies beyond the strip's edges is nodata.
 */
export function tileBytes(strip: SampleStrip, { left, size }: { left: number; size: number }, format: SampleFormat): Uint8Array {
  const { samples } = strip;
  const columns = Math.min(size, strip.width - left);
  if (samples instanceof Float32Array) return floatBytes(strip.rows, size, { samples, width: strip.width, left, columns });
  if (samples instanceof Int16Array) return shortBytes(strip.rows, size, { samples, width: strip.width, left, columns, nodata: format.nodata });
  return byteBytes(strip.rows, size, { samples, width: strip.width, left, columns, nodata: format.nodata });
}

interface Cut<S> {
  readonly samples: S;
  readonly width: number;
  readonly left: number;
  readonly columns: number;
}

/**
 * Predictor 3: each row's floats are split into four planes of bytes, highest byte first, and each byte of the row is
 * replaced by its difference from the one before. Both in one pass: only the first byte of a plane looks to another.
 * Source: Adobe Photoshop TIFF Technical Note 3 (2005), floating point predictor.
 */
function floatBytes(rows: number, size: number, { samples, width, left, columns }: Cut<Float32Array>): Uint8Array {
  const bytes = new Uint8Array(size * size * 4);
  const row = new Float32Array(size).fill(NaN);
  const bits = new Uint32Array(row.buffer);
  const stride = size * 4;
  for (let r = 0; r < rows; r += 1) {
    const from = r * width + left;
    row.set(samples.subarray(from, from + columns));
    planes(row, bits, bytes.subarray(r * stride, (r + 1) * stride));
  }
  if (rows < size) {
    planes(row.fill(NaN), bits, bytes.subarray(rows * stride, (rows + 1) * stride));
    for (let r = rows + 1; r < size; r += 1) bytes.copyWithin(r * stride, rows * stride, (rows + 1) * stride);
  }
  return bytes;
}

function planes(row: Float32Array, bits: Uint32Array, out: Uint8Array): void {
  const size = row.length;
  const second = 2 * size;
  const third = 3 * size;
  let before = 0;
  for (let c = 0; c < size; c += 1) {
    const value = row[c]!;
    // NaN differs from itself.
    const word = value === value ? bits[c]! : QUIET_NAN_BITS;
    out[c] = (word >>> 24) - (before >>> 24);
    out[size + c] = (word >>> 16) - (before >>> 16);
    out[second + c] = (word >>> 8) - (before >>> 8);
    out[third + c] = word - before;
    before = word;
  }
  // `before` is the last word now: the planes after the first begin with the difference from the last byte of the plane before.
  out[size]! -= before >>> 24;
  out[second]! -= before >>> 16;
  out[third]! -= before >>> 8;
}

/** Predictor 2 on 16-bit samples: the difference from the sample to the left, modulo 65536. Source: TIFF 6.0, section 14. */
function shortBytes(rows: number, size: number, { samples, width, left, columns, nodata }: Cut<Int16Array> & { nodata: number }): Uint8Array {
  const bytes = new Uint8Array(size * size * 2);
  for (let r = 0, at = 0; r < size; r += 1) {
    let before = 0;
    for (let c = 0; c < size; c += 1, at += 2) {
      const sample = r < rows && c < columns ? samples[r * width + left + c]! : nodata;
      const difference = sample - before;
      bytes[at] = difference;
      bytes[at + 1] = difference >> 8;
      before = sample;
    }
  }
  return bytes;
}

/** Predictor 2 on bytes, modulo 256. Source: TIFF 6.0, section 14. */
function byteBytes(rows: number, size: number, { samples, width, left, columns, nodata }: Cut<Uint8Array> & { nodata: number }): Uint8Array {
  const bytes = new Uint8Array(size * size);
  for (let r = 0, at = 0; r < size; r += 1) {
    let before = 0;
    for (let c = 0; c < size; c += 1, at += 1) {
      const sample = r < rows && c < columns ? samples[r * width + left + c]! : nodata;
      bytes[at] = sample - before;
      before = sample;
    }
  }
  return bytes;
}
