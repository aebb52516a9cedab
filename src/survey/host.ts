import type { FileSource } from '../files.js';

/** What the surroundings hand in: files, a compressor and a hash. A browser brings others than Node. */
export interface Host {
  readonly files: FileSource & { list(folder: string): Promise<string[]> };
  /** DEFLATE in zlib form (RFC 1950). */
  deflate(bytes: Uint8Array): Uint8Array | Promise<Uint8Array>;
  /** SHA-256 in hexadecimal. */
  sha256(bytes: Uint8Array): string;
  /** A path as it stands in the survey file, against the folder of that file. */
  resolve(path: string, folder: string): string;
  /** An SQLite for GeoPackage; absent where that format is not asked for. */
  sqlite?(): Promise<unknown>;
  progress(message: string): void;
}

/** What was read, in order of first reading: the inputs of the provenance. */
export interface InputTrace {
  readonly path: string;
  readonly bytes: number;
  readonly sha256: string;
}

/** The same files, with a note of everything that is read through them. */
export function tracing(host: Host): { host: Host; inputs(): InputTrace[] } {
  const seen = new Map<string, InputTrace>();
  const files = {
    has: (path: string) => host.files.has(path),
    list: (folder: string) => host.files.list(folder),
    async read(path: string) {
      const bytes = await host.files.read(path);
      if (!seen.has(path)) seen.set(path, { path, bytes: bytes.length, sha256: host.sha256(bytes) });
      return bytes;
    },
  };
  return { host: { ...host, files }, inputs: () => [...seen.values()].toSorted((a, b) => (a.path < b.path ? -1 : 1)) };
}
