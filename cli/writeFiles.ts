import { rename, rm, writeFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { SpooledFile } from '../src/survey/host.js';
import { makeFolder } from './makeFolder.js';

/** A file that is being written carries this ending until all of them are whole. */
export const UNFINISHED = '.unfinished';

/**
 * Writes files into a folder so that none is ever half there under its final name: all are written under another name
 * first, as spooled files are already, and renamed when the last one is whole. What fails before that leaves the folder
 * as it was.
 */
export async function writeFiles(folder: string, files: ReadonlyMap<string, Uint8Array | SpooledFile>): Promise<void> {
  const undo: Array<() => Promise<void>> = [];
  try {
    for (const [name, content] of files) {
      const path = join(folder, name);
      undo.push(await makeFolder(dirname(path)));
      if (!(content instanceof Uint8Array)) continue;
      undo.push(() => rm(path + UNFINISHED, { force: true }));
      await writeFile(path + UNFINISHED, content);
    }
    for (const [name, content] of files) {
      const path = join(folder, name);
      await (content instanceof Uint8Array ? rename(path + UNFINISHED, path) : content.moveTo(path));
    }
  } catch (error) {
    for (const step of undo.toReversed()) await step();
    throw error;
  }
}
