import { open, rename, rm, type FileHandle } from 'node:fs/promises';
import type { ByteScratch, ByteSink, ByteSource } from '../src/raster/byteStores.js';
import type { RowSource } from '../src/raster/types.js';
import { writeCog, type CogOptions, type WrittenCog } from '../src/raster/writeCog.js';
import { UNFINISHED } from './writeFiles.js';

/** Small pieces are joined up to this size: the system takes one large piece faster than many small ones. */
const PIECE_BYTES = 4 << 20;

/**
 * Writes a COG of any size to a file, which appears under its name only when it is whole. The compressed tiles wait in
 * a file beside it, so the folder needs room for the COG twice while it is being written.
 */
export async function writeCogFile(source: RowSource, path: string, options: CogOptions): Promise<WrittenCog> {
  const scratchPath = `${path}.tiles${UNFINISHED}`;
  const scratch = await open(scratchPath, 'w+');
  try {
    const file = await open(path + UNFINISHED, 'w');
    let written: WrittenCog;
    try {
      const sink = fileSink(file);
      written = await writeCog(source, sink, { ...options, scratch: fileScratch(scratch) });
      await sink.flush();
    } finally {
      await file.close();
    }
    await rename(path + UNFINISHED, path);
    return written;
  } catch (error) {
    await rm(path + UNFINISHED, { force: true });
    throw error;
  } finally {
    await scratch.close();
    await rm(scratchPath, { force: true });
  }
}

/** A file as a source of ranges; the caller closes the handle. */
export async function fileSource(file: FileHandle): Promise<ByteSource> {
  const { size } = await file.stat();
  return { size, read: (offset, length) => readAt(file, offset, Math.max(0, Math.min(length, size - offset))) };
}

function fileSink(file: FileHandle): ByteSink & { flush(): Promise<void> } {
  const joined = joinedWrites(file);
  return { write: joined.write, flush: joined.flush };
}

function fileScratch(file: FileHandle): ByteScratch {
  const joined = joinedWrites(file);
  let flushed = false;
  return {
    append: joined.write,
    async read(offset, length) {
      // All is appended before the first part is read back.
      if (!flushed) await joined.flush();
      flushed = true;
      return readAt(file, offset, length);
    },
  };
}

function joinedWrites(file: FileHandle): { write(bytes: Uint8Array): Promise<void>; flush(): Promise<void> } {
  let waiting: Uint8Array[] = [];
  let size = 0;
  const flush = async (): Promise<void> => {
    let parts = waiting;
    waiting = [];
    size = 0;
    while (parts.length > 0) parts = unwritten(parts, (await file.writev(parts)).bytesWritten);
  };
  return {
    flush,
    async write(bytes) {
      waiting.push(bytes);
      size += bytes.length;
      if (size >= PIECE_BYTES) await flush();
    },
  };
}

/** What is left of the parts when the system took fewer bytes than it was given. */
function unwritten(parts: readonly Uint8Array[], written: number): Uint8Array[] {
  const left: Uint8Array[] = [];
  let taken = written;
  for (const part of parts) {
    if (taken < part.length) left.push(part.subarray(taken));
    taken = Math.max(0, taken - part.length);
  }
  return left;
}

async function readAt(file: FileHandle, offset: number, length: number): Promise<Uint8Array> {
  const bytes = new Uint8Array(length);
  let at = 0;
  while (at < length) {
    const { bytesRead } = await file.read(bytes, at, length - at, offset + at);
    if (bytesRead === 0) return bytes.subarray(0, at);
    at += bytesRead;
  }
  return bytes;
}
