import { createHash } from 'node:crypto';
import { readdir, readFile, stat } from 'node:fs/promises';
import { isAbsolute, join, resolve } from 'node:path';
import { UserError } from '../src/errors.js';
import type { Host } from '../src/survey/host.js';
import { deflate } from './deflate.js';

/** Files, DEFLATE, SHA-256 and SQLite as Node has them. */
export function nodeHost(progress: (message: string) => void): Host {
  return {
    files: { read: readBytes, has: isFile, list: listFolder },
    deflate,
    sha256: (bytes) => createHash('sha256').update(bytes).digest('hex'),
    resolve: (path, folder) => (isAbsolute(path) ? path : resolve(folder, path)),
    sqlite: async () => (await import('@sqlite.org/sqlite-wasm')).default(),
    progress,
  };
}

async function readBytes(path: string): Promise<Uint8Array> {
  try {
    return new Uint8Array(await readFile(path));
  } catch (error) {
    throw unreadable(path, error as NodeJS.ErrnoException);
  }
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
  try {
    const entries = await readdir(folder, { withFileTypes: true });
    return entries.filter((entry) => entry.isFile()).map((entry) => join(folder, entry.name)).toSorted();
  } catch (error) {
    throw unreadable(folder, error as NodeJS.ErrnoException);
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
