import { unzlibSync } from 'fflate';
import { getDecoder } from 'geotiff';

/** A zlib stream (RFC 1950) to bytes, no more of them than `mostBytes`. */
export type Inflate = (bytes: Uint8Array, mostBytes: number) => Uint8Array | Promise<Uint8Array>;

const NONE = 1;
const LZW = 5;
const DEFLATE = 8;
const DEFLATE_OLD = 32946;
const PACK_BITS = 32773;
const ZSTD = 50000;

/**
 * Compression schemes that are read, by TIFF's number, with the most bytes that one stored byte can stand for: DEFLATE
 * 258 in two bits; LZW a string of 3,838 in 12 bits; PackBits 128 in two bytes; Zstandard a block of 128 KiB in four.
 */
export const EXPANSION: ReadonlyMap<number, number> = new Map([
  [NONE, 1], [LZW, 2559], [DEFLATE, 1032], [DEFLATE_OLD, 1032], [PACK_BITS, 64], [ZSTD, 32768],
]);

/** A tile's bytes as they were before compression: `length` of them. Throws where the bytes are no such stream or end too soon. */
export async function decompress(bytes: Uint8Array, compression: number, options: { length: number; inflate: Inflate }): Promise<Uint8Array> {
  const { length } = options;
  const whole = await unpack(bytes, compression, options);
  if (whole.length < length) throw new Error(`${whole.length} of ${length} bytes`);
  // A copy of its own, aligned for any sample type, and free to be changed.
  return whole.byteOffset % 8 === 0 && whole.buffer !== bytes.buffer ? whole.subarray(0, length) : whole.slice(0, length);
}

function unpack(bytes: Uint8Array, compression: number, { length, inflate }: { length: number; inflate: Inflate }): Uint8Array | Promise<Uint8Array> {
  switch (compression) {
    case NONE: return bytes;
    case LZW: return unpackLzw(bytes, length);
    case DEFLATE: case DEFLATE_OLD: return inflate(bytes, length);
    case PACK_BITS: return unpackBits(bytes, length);
    default: return unpackZstd(bytes);
  }
}

/** DEFLATE in plain JavaScript, for callers that have nothing faster to hand in. */
export function inflatePlainly(bytes: Uint8Array, mostBytes: number): Uint8Array {
  return unzlibSync(bytes, { out: new Uint8Array(mostBytes) });
}

async function unpackZstd(bytes: Uint8Array): Promise<Uint8Array> {
  const decoder = await getDecoder(ZSTD, { tileWidth: 1, tileHeight: 1, predictor: 1, bitsPerSample: 8, planarConfiguration: 1 });
  return new Uint8Array(await decoder.decode(bytes.slice().buffer));
}

/** Source: TIFF 6.0, section 9. */
function unpackBits(bytes: Uint8Array, length: number): Uint8Array {
  const out = new Uint8Array(length);
  let to = 0;
  for (let at = 0; at < bytes.length && to < length;) {
    const head = (bytes[at]! << 24) >> 24;
    at += 1;
    if (head >= 0) {
      const run = bytes.subarray(at, at + Math.min(head + 1, length - to));
      out.set(run, to);
      at += head + 1;
      to += run.length;
    } else if (head !== -128) {
      out.fill(bytes[at] ?? 0, to, to + 1 - head);
      at += 1;
      to = Math.min(length, to + 1 - head);
    }
  }
  return out.subarray(0, to);
}

const CLEAR = 256;
const END = 257;
const LONGEST_CODE_BITS = 12;

/** Source: TIFF 6.0, section 13: codes from the high bit, one bit longer one code before they would have to be. */
function unpackLzw(bytes: Uint8Array, length: number): Uint8Array {
  const out = new Uint8Array(length);
  // A string of the table is the place in the output where it was first written, and its length.
  const placeOf = new Int32Array(1 << LONGEST_CODE_BITS);
  const lengthOf = new Int32Array(1 << LONGEST_CODE_BITS);
  let [to, next, codeBits, held, heldBits, before] = [0, END + 1, 9, 0, 0, -1];
  for (let at = 0; to < length;) {
    while (heldBits < codeBits && at < bytes.length) {
      held = (held << 8) | bytes[at]!;
      heldBits += 8;
      at += 1;
    }
    if (heldBits < codeBits) break;
    heldBits -= codeBits;
    const code = (held >>> heldBits) & ((1 << codeBits) - 1);
    held &= (1 << heldBits) - 1;
    if (code === END) break;
    if (code === CLEAR) {
      [next, codeBits, before] = [END + 1, 9, -1];
      continue;
    }
    if (code > next || (code === next && before < 0)) throw new Error('an LZW code that is not in the table');
    const start = to;
    // The string before and one more byte, which is this string's first, become an entry; it may be this very string.
    const beforeLength = before < 0 ? 0 : to - before;
    if (before >= 0 && next < 1 << LONGEST_CODE_BITS) {
      placeOf[next] = before;
      lengthOf[next] = beforeLength + 1;
      next += 1;
    }
    if (code < CLEAR) {
      out[to] = code;
      to += 1;
    } else {
      const from = placeOf[code]!;
      const end = Math.min(length, to + lengthOf[code]!);
      for (let i = from; to < end; i += 1, to += 1) out[to] = out[i]!;
    }
    before = start;
    if (next + 1 >= 1 << codeBits && codeBits < LONGEST_CODE_BITS) codeBits += 1;
  }
  return out.subarray(0, to);
}
