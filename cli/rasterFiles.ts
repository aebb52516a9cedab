import type { RowSource } from '../src/raster/types.js';
import { writeCog, type CogOptions, type WrittenCog } from '../src/raster/writeCog.js';
import { openSpool } from './fileSpool.js';

/**
 * Writes a COG of any size to a file, which appears under its name only when it is whole. The compressed tiles wait in
 * a file beside it, so the folder needs room for the COG twice while it is being written.
 */
export async function writeCogFile(source: RowSource, path: string, options: CogOptions): Promise<WrittenCog> {
  const spool = await openSpool(path);
  try {
    const written = await writeCog(source, spool.sink, { ...options, scratch: spool.scratch });
    await (await spool.end()).moveTo(path);
    return written;
  } finally {
    await spool.discard();
  }
}
