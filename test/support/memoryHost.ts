import { createHash } from 'node:crypto';
import { deflateSync } from 'node:zlib';
import { UserError } from '../../src/errors.js';
import type { Host } from '../../src/survey/host.js';

/** A host whose files stand in memory, under the names that the survey file gives them. */
export function memoryHost(files: Readonly<Record<string, Uint8Array | string>>, read: (path: string) => void = () => undefined): Host {
  return {
    files: {
      async read(path) {
        read(path);
        const content = files[path];
        if (content === undefined) throw new UserError({ code: 'file_missing', where: path, found: 'no such file', wanted: 'a file that can be read' });
        return typeof content === 'string' ? new TextEncoder().encode(content) : content;
      },
      async has(path) {
        return path in files;
      },
      async list() {
        return [];
      },
    },
    deflate: (bytes) => deflateSync(bytes),
    sha256: (bytes) => createHash('sha256').update(bytes).digest('hex'),
    resolve: (path) => path,
    progress: () => undefined,
  };
}
