import { memoryScratch, memorySink } from './byteStores.js';
import type { Compress } from './tileQueue.js';
import type { Grid } from './types.js';
import { writeCog, type CogOptions } from './writeCog.js';

export { COG_DEFAULTS, type CogOptions } from './writeCog.js';
/** Bytes to a zlib stream (RFC 1950). */
export type Deflate = Compress;

/** A grid in memory as the bytes of a Cloud-Optimised GeoTIFF; see `writeCog`, which also writes grids larger than memory. */
export async function encodeCog(grid: Grid, options: CogOptions): Promise<Uint8Array> {
  const { width, values } = grid;
  if (values.length !== width * grid.height || values.length === 0) {
    throw new Error(`A grid of ${width} × ${grid.height} cells has ${values.length} values`);
  }
  const sink = memorySink();
  const readRows = (first: number, count: number): Grid['values'] => values.subarray(first * width, (first + count) * width);
  await writeCog({ ...grid, readRows }, sink, { ...options, scratch: memoryScratch() });
  return sink.bytes();
}
