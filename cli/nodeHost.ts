import { createHash } from 'node:crypto';
import { createReadStream } from 'node:fs';
import { readdir, readFile, stat } from 'node:fs/promises';
import { isAbsolute, join, resolve } from 'node:path';
import { UserError } from '../src/errors.js';
import type { ByteSource } from '../src/raster/byteStores.js';
import type { FileDigest, Host } from '../src/survey/host.js';
import { deflate } from './deflate.js';
import { fileSource } from './fileSource.js';
import { openSpool, type FileSpool } from './fileSpool.js';
import { tileThreads } from './tileThreads.js';

/** Files, DEFLATE, SHA-256 and SQLite as Node has them. */
export function nodeHost(progress: (message: string) => void): Host {
  return {
    files: { read: readBytes, has: isFile, list: listFolder, source: sourceOf, digest: digestOf },
    deflate,
    sha256: (bytes) => createHash('sha256').update(bytes).digest('hex'),
    resolve: (path, folder) => (isAbsolute(path) ? path : resolve(folder, path)),
    sqlite: async () => (await import('@sqlite.org/sqlite-wasm')).default(),
    progress,
  };
}

/**
 * Does a command's work with that host, with threads for large grids, and with room in the folder `out` for files larger
 * than memory. Whatever happens, the threads end and what has not got its name is removed.
 */
export async function withNodeHost(out: string, progress: (message: string) => void, work: (host: Host) => Promise<void>): Promise<void> {
  const threads = tileThreads();
  const spools: FileSpool[] = [];
  const spool = async (path: string): Promise<FileSpool> => {
    const opened = await openSpool(join(out, path));
    spools.push(opened);
    return opened;
  };
  try {
    await work({ ...nodeHost(progress), solveTile: threads.solve, spool });
  } finally {
    await threads.close();
    // The last one first: it may have been the first one that made a folder.
    for (const opened of spools.toReversed()) await opened.discard();
  }
}

async function readBytes(path: string): Promise<Uint8Array> {
  return reading(path, async () => new Uint8Array(await readFile(path)));
}

async function sourceOf(path: string): Promise<ByteSource> {
  const { size, read } = await reading(path, () => fileSource(path));
  return { size, read: (offset, length) => reading(path, async () => read(offset, length)) };
}

async function digestOf(path: string): Promise<FileDigest> {
  const hash = createHash('sha256');
  let bytes = 0;
  await reading(path, async () => {
    for await (const piece of createReadStream(path) as AsyncIterable<Uint8Array>) {
      hash.update(piece);
      bytes += piece.length;
    }
  });
  return { bytes, sha256: hash.digest('hex') };
}

async function isFile(path: string): Promise<boolean> {
  try {
    return (await stat(path)).isFile();
  } catch (error) {
    if (isAbsent(error)) return false;
    throw error;
  }
}

async function listFolder(folder: string): Promise<string[]> {
  const entries = await reading(folder, () => readdir(folder, { withFileTypes: true }));
  return entries.filter((entry) => entry.isFile()).map((entry) => join(folder, entry.name)).toSorted();
}

async function reading<T>(path: string, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (error) {
    throw unreadable(path, error as NodeJS.ErrnoException);
  }
}

function unreadable(path: string, error: NodeJS.ErrnoException): UserError {
  if (isAbsent(error)) return new UserError({ code: 'file_missing', where: path, found: 'no such file', wanted: 'a file that can be read' });
  if (error.code === 'EISDIR') return new UserError({ code: 'file_unreadable', where: path, found: 'a folder', wanted: 'a file' });
  return new UserError({ code: 'file_unreadable', where: path, found: error.message, wanted: 'a file that can be read' });
}

function isAbsent(error: unknown): boolean {
  const { code } = error as NodeJS.ErrnoException;
  return code === 'ENOENT' || code === 'ENOTDIR';
}
