import { createHash } from 'node:crypto';
import { open, rename, rm, type FileHandle } from 'node:fs/promises';
import { dirname } from 'node:path';
import type { ByteScratch } from '../src/raster/byteStores.js';
import type { Spool } from '../src/survey/host.js';
import { readAt } from './fileSource.js';
import { makeFolder } from './makeFolder.js';
import { UNFINISHED } from './writeFiles.js';

/** Small pieces are joined up to this size: the system takes one large piece faster than many small ones. */
const PIECE_BYTES = 4 << 20;

export interface FileSpool extends Spool {
  /** Closes what is open and removes what has not got its name, with folders that were made for it. */
  discard(): Promise<void>;
}

/**
 * A file that is written beside its final name, with a second one for the parts that wait: the folder needs room for the
 * file twice. Its hash is taken on the way.
 */
export async function openSpool(path: string): Promise<FileSpool> {
  const unfinished = path + UNFINISHED;
  const waiting = `${path}.tiles${UNFINISHED}`;
  const removeFolders = await makeFolder(dirname(path));
  const handles: FileHandle[] = [];
  const close = async (): Promise<void> => {
    await Promise.all(handles.splice(0).map((handle) => handle.close()));
    await rm(waiting, { force: true });
  };
  const discard = async (): Promise<void> => {
    await close();
    await rm(unfinished, { force: true });
    await removeFolders();
  };
  const opened = async (name: string, flags: string): Promise<FileHandle> => {
    const handle = await open(name, flags);
    handles.push(handle);
    return handle;
  };
  try {
    const { write, flush } = joinedWrites(await opened(unfinished, 'w'));
    const scratch = fileScratch(await opened(waiting, 'w+'));
    const hash = createHash('sha256');
    let size = 0;
    return {
      scratch, discard,
      sink: {
        write(bytes) {
          size += bytes.length;
          hash.update(bytes);
          return write(bytes);
        },
      },
      async end() {
        await flush();
        await close();
        return { bytes: size, sha256: hash.digest('hex'), moveTo: (to) => rename(unfinished, to) };
      },
    };
  } catch (error) {
    await discard();
    throw error;
  }
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
