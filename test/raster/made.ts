import { deflateSync } from 'node:zlib';
import type { Grid } from '../../src/raster/types.js';

/** DEFLATE as the command line hands it in. */
export const deflate = (bytes: Uint8Array): Uint8Array => new Uint8Array(deflateSync(bytes, { level: 6 }));

export interface MadeGrid {
  readonly width: number;
  readonly height: number;
  /** No gaps, a few cells missing here and there with a whole corner, or no cell with a value. */
  readonly gaps?: 'none' | 'some' | 'all';
  readonly west?: number;
  readonly north?: number;
  readonly cellM?: number;
}

/** A smooth field with a sharp peak, from a formula, so that a cell can be named from its column and row. */
export function madeGrid({ width, height, gaps = 'none', west = 500_000, north = 4_400_000, cellM = 1 }: MadeGrid): Grid {
  const values = new Float32Array(width * height);
  for (let row = 0; row < height; row += 1) {
    for (let column = 0; column < width; column += 1) {
      values[row * width + column] = missing(column, row, gaps) ? NaN : madeValue(column, row);
    }
  }
  return { width, height, west, north, cellM, values };
}

export function madeValue(column: number, row: number): number {
  return 40 * Math.sin(column / 17) * Math.cos(row / 23) - 12.25 + 2000 / (1 + (column - 3) ** 2 + (row - 2) ** 2);
}

function missing(column: number, row: number, gaps: 'none' | 'some' | 'all'): boolean {
  if (gaps === 'all') return true;
  return gaps === 'some' && ((column * 7 + row * 13) % 11 === 0 || column + row > 900 || (column < 8 && row > 4 && row < 90));
}

/** Index of the first element that differs, NaN equal to NaN; -1 where none does. Far faster on a grid than a deep comparison. */
export function firstDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  if (a.length !== b.length) return Math.min(a.length, b.length);
  for (let i = 0; i < a.length; i += 1) if (a[i] !== b[i] && !(Number.isNaN(a[i]) && Number.isNaN(b[i]))) return i;
  return -1;
}

/** A Zstandard frame whose blocks are kept as they are. Source: RFC 8878, 3.1.1. */
export function zstdFrame(bytes: Uint8Array): Uint8Array {
  const MOST = 1 << 17;
  const blocks = Math.max(1, Math.ceil(bytes.length / MOST));
  const frame = new Uint8Array(4 + 1 + 4 + blocks * 3 + bytes.length);
  const view = new DataView(frame.buffer);
  view.setUint32(0, 0xfd2fb528, true);
  // Single segment, content size in four bytes, no checksum.
  view.setUint8(4, 0b1010_0000);
  view.setUint32(5, bytes.length, true);
  let at = 9;
  for (let block = 0; block < blocks; block += 1) {
    const part = bytes.subarray(block * MOST, (block + 1) * MOST);
    const head = (part.length << 3) | (block === blocks - 1 ? 1 : 0);
    frame.set([head & 255, (head >> 8) & 255, head >> 16], at);
    frame.set(part, at + 3);
    at += 3 + part.length;
  }
  return frame;
}
