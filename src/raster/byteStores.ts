/** Bytes that can be read in parts, such as a file or what a server keeps under an address. */
export interface ByteSource {
  /** Length of the whole, bytes. */
  readonly size: number;
  /** The bytes from `offset` on; fewer than `length` only where the source ends before. */
  read(offset: number, length: number): Uint8Array | Promise<Uint8Array>;
}

/** Takes the bytes of a file from its first to its last. */
export interface ByteSink {
  /** Called once before the first byte, with the length of the whole. */
  begin?(totalBytes: number): void | Promise<void>;
  /** The bytes may be used again by the caller once this has settled. */
  write(bytes: Uint8Array): void | Promise<void>;
}

/** Keeps parts until they can be put where they belong. What it keeps is as large as the compressed file. */
export interface ByteScratch {
  /** Puts bytes behind those that were put before. They are handed over: the caller does not change them afterwards. */
  append(bytes: Uint8Array): void | Promise<void>;
  /** A part as it was appended: `offset` is the sum of the lengths before it. */
  read(offset: number, length: number): Uint8Array | Promise<Uint8Array>;
}

export function memorySource(bytes: Uint8Array): ByteSource {
  return { size: bytes.length, read: (offset, length) => bytes.subarray(offset, Math.min(bytes.length, offset + length)) };
}

/** A scratch in memory. It gives parts back whole and without a copy. */
export function memoryScratch(): ByteScratch {
  const parts = new Map<number, Uint8Array>();
  let end = 0;
  return {
    append(bytes) {
      parts.set(end, bytes);
      end += bytes.length;
    },
    read(offset, length) {
      const part = parts.get(offset);
      if (part?.length !== length) throw new Error(`No part of ${length} bytes was appended at byte ${offset}`);
      return part;
    },
  };
}

/** A sink in memory; `bytes()` is the file once the last byte is written. */
export function memorySink(): ByteSink & { bytes(): Uint8Array } {
  let file = new Uint8Array(0);
  let at = 0;
  return {
    begin: (totalBytes) => void (file = new Uint8Array(totalBytes)),
    write(bytes) {
      file.set(bytes, at);
      at += bytes.length;
    },
    bytes() {
      if (at !== file.length) throw new Error(`${at} of ${file.length} bytes were written`);
      return file;
    },
  };
}
