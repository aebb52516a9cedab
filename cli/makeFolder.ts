import { mkdir, rmdir } from 'node:fs/promises';
import { dirname } from 'node:path';

/** Makes a folder and those above it. The function that comes back removes those that were made and have stayed empty. */
export async function makeFolder(path: string): Promise<() => Promise<void>> {
  const first = await mkdir(path, { recursive: true });
  return async () => {
    if (first === undefined) return;
    for (let folder = path; folder.length >= first.length; folder = dirname(folder)) {
      if (!await removedEmpty(folder)) return;
    }
  };
}

async function removedEmpty(folder: string): Promise<boolean> {
  try {
    await rmdir(folder);
    return true;
  } catch (error) {
    const { code } = error as NodeJS.ErrnoException;
    if (code === 'ENOENT') return true;
    if (code === 'ENOTEMPTY' || code === 'EEXIST') return false;
    throw error;
  }
}
