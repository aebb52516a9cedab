import type { FileSource } from '../files.js';
import type { SolveTile } from '../grid/solveTile.js';
import type { ByteScratch, ByteSink, ByteSource } from '../raster/byteStores.js';

/** What the surroundings hand in: files, a compressor and a hash. A browser brings others than Node. */
export interface Host {
  readonly files: HostFiles;
  /** DEFLATE in zlib form (RFC 1950). */
  deflate(bytes: Uint8Array): Uint8Array | Promise<Uint8Array>;
  /** SHA-256 in hexadecimal. */
  sha256(bytes: Uint8Array): string;
  /** A path as it stands in the survey file, against the folder of that file. */
  resolve(path: string, folder: string): string;
  /** An SQLite for GeoPackage; absent where that format is not asked for. */
  sqlite?(): Promise<unknown>;
  /** Solves a tile of a large grid on a thread of its own; absent where there are no threads. */
  readonly solveTile?: SolveTile;
  /** Room for a file that may be larger than memory, by its path in the delivered folder; absent where there is only memory. */
  spool?(path: string): Promise<Spool>;
  progress(message: string): void;
}

export interface HostFiles extends FileSource {
  list(folder: string): Promise<string[]>;
  /** A file in parts, so that it can be larger than memory; absent where files are in memory anyway. */
  source?(path: string): Promise<ByteSource>;
  /** Size and hash of a file in one pass, so that it can be larger than memory; absent as `source` is. */
  digest?(path: string): Promise<FileDigest>;
}

export interface FileDigest {
  readonly bytes: number;
  /** SHA-256 in hexadecimal. */
  readonly sha256: string;
}

/** A file while it is being written. One that is not ended, or not moved to its name, is the host's to remove. */
export interface Spool {
  readonly sink: ByteSink;
  /** Room for what cannot be written yet. */
  readonly scratch: ByteScratch;
  /** Called after the last byte. */
  end(): Promise<SpooledFile>;
}

/** A whole file that does not stand under its name yet. */
export interface SpooledFile extends FileDigest {
  moveTo(path: string): Promise<void>;
}

/** What was read, in order of first reading: the inputs of the provenance. */
export interface InputTrace extends FileDigest {
  readonly path: string;
}

/** The same files, with a note of everything that is read through them. */
export function tracing(host: Host): { host: Host; inputs(): InputTrace[] } {
  const seen = new Map<string, InputTrace>();
  const own = host.files;
  const files: HostFiles = {
    has: (path) => own.has(path),
    list: (folder) => own.list(folder),
    source: own.source?.bind(own),
    digest: own.digest?.bind(own),
    async read(path) {
      const bytes = await own.read(path);
      if (!seen.has(path)) seen.set(path, { path, bytes: bytes.length, sha256: host.sha256(bytes) });
      return bytes;
    },
  };
  return { host: { ...host, files }, inputs: () => [...seen.values()].toSorted((a, b) => (a.path < b.path ? -1 : 1)) };
}
