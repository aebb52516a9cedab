import { mkdir, rename, rm, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';

/** A file that is being written carries this ending until all of them are whole. */
export const UNFINISHED = '.unfinished';

/**
 * Writes files into a folder so that none is ever half there under its final name: all are written under another name
 * first and renamed when the last one is whole. What fails leaves the folder as it was.
 */
export async function writeFiles(folder: string, files: ReadonlyMap<string, Uint8Array>): Promise<void> {
  const written: string[] = [];
  try {
    for (const [name, bytes] of files) {
      const path = join(folder, name);
      await mkdir(dirname(path), { recursive: true });
      written.push(path);
      await writeFile(path + UNFINISHED, bytes);
    }
  } catch (error) {
    await Promise.all(written.map((path) => rm(path + UNFINISHED, { force: true })));
    throw error;
  }
  for (const path of written) await rename(path + UNFINISHED, path);
}
