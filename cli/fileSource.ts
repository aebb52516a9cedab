import { open, stat, type FileHandle } from 'node:fs/promises';
import type { ByteSource } from '../src/raster/byteStores.js';

/** A file as a source of ranges. It is opened for each of them, so that there is nothing to close. */
export async function fileSource(path: string): Promise<ByteSource> {
  const { size } = await stat(path);
  return {
    size,
    async read(offset, length) {
      const file = await open(path);
      try {
        return await readAt(file, offset, Math.max(0, Math.min(length, size - offset)));
      } finally {
        await file.close();
      }
    },
  };
}

export async function readAt(file: FileHandle, offset: number, length: number): Promise<Uint8Array> {
  const bytes = new Uint8Array(length);
  let at = 0;
  while (at < length) {
    const { bytesRead } = await file.read(bytes, at, length - at, offset + at);
    if (bytesRead === 0) return bytes.subarray(0, at);
    at += bytesRead;
  }
  return bytes;
}
