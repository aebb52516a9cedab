import type { ByteSource } from './byteStores.js';

/** One tag as it stands in a file. */
export interface ReadTag {
  readonly type: number;
  readonly count: number;
  /** Numbers of the tag; bytes where it is text. */
  readonly values: readonly number[];
  /** First byte after the tag's values where they lie outside the directory; 0 where they are inside. */
  readonly end: number;
}

export interface ReadDirectory {
  readonly offset: number;
  readonly tags: ReadonlyMap<number, ReadTag>;
}

export interface ReadTiff {
  readonly big: boolean;
  readonly littleEndian: boolean;
  readonly directories: readonly ReadDirectory[];
  /** What is wrong with the file as a TIFF; the directories end before the first fault. */
  readonly faults: readonly string[];
}

type Reader = (view: DataView, at: number, little: boolean) => number;

/** Field types by code: bytes of a value, and how it is read (a rational as its quotient). Source: TIFF 6.0, section 2; BigTIFF. */
const READERS: ReadonlyMap<number, readonly [bytes: number, read: Reader]> = new Map<number, readonly [number, Reader]>([
  [1, [1, (view, at) => view.getUint8(at)]],
  [2, [1, (view, at) => view.getUint8(at)]],
  [3, [2, (view, at, little) => view.getUint16(at, little)]],
  [4, [4, (view, at, little) => view.getUint32(at, little)]],
  [5, [8, (view, at, little) => view.getUint32(at, little) / view.getUint32(at + 4, little)]],
  [6, [1, (view, at) => view.getInt8(at)]],
  [7, [1, (view, at) => view.getUint8(at)]],
  [8, [2, (view, at, little) => view.getInt16(at, little)]],
  [9, [4, (view, at, little) => view.getInt32(at, little)]],
  [10, [8, (view, at, little) => view.getInt32(at, little) / view.getInt32(at + 4, little)]],
  [11, [4, (view, at, little) => view.getFloat32(at, little)]],
  [12, [8, (view, at, little) => view.getFloat64(at, little)]],
  [13, [4, (view, at, little) => view.getUint32(at, little)]],
  [16, [8, (view, at, little) => Number(view.getBigUint64(at, little))]],
  [17, [8, (view, at, little) => Number(view.getBigInt64(at, little))]],
  [18, [8, (view, at, little) => Number(view.getBigUint64(at, little))]],
]);

/** A directory for every image of a pyramid and every band: far more than any file has, and few enough to go through. */
const MOST_DIRECTORIES = 1024;
/** Parts of a source are fetched in at least this size: most headers are whole after the first. */
const FETCH_BYTES = 1 << 15;
/** A header of this size indexes ten million tiles; a file that asks for more is broken. */
const MOST_HEADER_BYTES = 1 << 28;

const LARGER_THAN_FILE = 'its directories and their values together are larger than the file';

/** Bytes of a file, of which some may not be here yet: `at` throws MissingBytes then. */
interface Held {
  readonly size: number;
  at(offset: number, length: number): DataView;
}

class MissingBytes extends Error {
  constructor(readonly offset: number, readonly length: number) {
    super(`${length} bytes at byte ${offset} are not here yet`);
  }
}

/** Reads all directories of a TIFF or BigTIFF, of either byte order. Never throws on bad bytes: it says what is wrong. */
export function readTiffDirectories(bytes: Uint8Array): ReadTiff {
  return parse({ size: bytes.length, at: (offset, length) => new DataView(bytes.buffer, bytes.byteOffset + offset, length) });
}

/** The same from a source in parts: as much of it is fetched as the directories need. Throws only what the source throws. */
export async function fetchTiffDirectories(source: ByteSource): Promise<ReadTiff> {
  const parts: Array<{ readonly offset: number; readonly bytes: Uint8Array }> = [];
  let fetched = 0;
  const held: Held = {
    size: source.size,
    at(offset, length) {
      const part = parts.find((held_) => held_.offset <= offset && offset + length <= held_.offset + held_.bytes.length);
      if (!part) throw new MissingBytes(offset, length);
      return new DataView(part.bytes.buffer, part.bytes.byteOffset + offset - part.offset, length);
    },
  };
  for (;;) {
    try {
      return parse(held);
    } catch (missing) {
      if (!(missing instanceof MissingBytes)) throw missing;
      const length = Math.min(Math.max(missing.length, FETCH_BYTES), source.size - missing.offset);
      fetched += length;
      if (fetched > MOST_HEADER_BYTES) return nothing(`its directories reach over more than ${MOST_HEADER_BYTES} bytes`);
      const bytes = await source.read(missing.offset, length);
      if (bytes.length < missing.length) return nothing(`the file ends at byte ${missing.offset + bytes.length}, before its stated end`);
      parts.push({ offset: missing.offset, bytes });
    }
  }
}

/** The tags of one directory; what is wrong with them goes to `faults`. Values take no more bytes than there is `room`. */
function readTags(
  held: Held, { view, entries, offset, big, littleEndian, room, faults }: { view: DataView; entries: number; offset: number; big: boolean; littleEndian: boolean; room: number; faults: string[] },
): { tags: Map<number, ReadTag>; used: number } {
  const [entryBytes, wordBytes] = big ? [20, 8] as const : [12, 4] as const;
  const word = (at: number): number => (big ? Number(view.getBigUint64(at, littleEndian)) : view.getUint32(at, littleEndian));
  const tags = new Map<number, ReadTag>();
  let before = -1;
  let used = 0;
  for (let at = 0; at < entries * entryBytes; at += entryBytes) {
    const id = view.getUint16(at, littleEndian);
    if (id <= before) faults.push(`tag ${id} of the directory at byte ${offset} is not in ascending order`);
    before = id;
    const type = view.getUint16(at + 2, littleEndian);
    const count = word(at + 4);
    const reader = READERS.get(type);
    if (!reader) continue;
    const [valueBytes, read] = reader;
    const length = count * valueBytes;
    const inside = length <= wordBytes;
    const valuesAt = inside ? at + 4 + wordBytes : word(at + 4 + wordBytes);
    if (!inside && valuesAt + length > held.size) {
      faults.push(`the values of tag ${id} of the directory at byte ${offset} lie outside the file`);
      continue;
    }
    used += inside ? 0 : length;
    if (used > room) {
      faults.push(LARGER_THAN_FILE);
      break;
    }
    const values = inside ? view : held.at(valuesAt, length);
    const first = inside ? valuesAt : 0;
    tags.set(id, { type, count, values: Array.from({ length: count }, (_, i) => read(values, first + i * valueBytes, littleEndian)), end: inside ? 0 : valuesAt + length });
  }
  return { tags, used };
}

function nothing(fault: string): ReadTiff {
  return { big: false, littleEndian: true, directories: [], faults: [fault] };
}

function parse(held: Held): ReadTiff {
  if (held.size < 8) return nothing('the file does not begin as a TIFF');
  const start = held.at(0, 8);
  const mark = start.getUint16(0);
  const littleEndian = mark === 0x4949;
  const version = start.getUint16(2, littleEndian);
  const big = version === 43;
  if ((mark !== 0x4949 && mark !== 0x4d4d) || (version !== 42 && version !== 43)) return nothing('the file does not begin as a TIFF');
  if (big && held.size < 16) return nothing('the file ends before its first directory');
  const form = big ? { count: 8, entry: 20, word: 8 } : { count: 2, entry: 12, word: 4 };
  const word = (view: DataView, at: number): number => (big ? Number(view.getBigUint64(at, littleEndian)) : view.getUint32(at, littleEndian));
  const faults: string[] = [];
  const directories: ReadDirectory[] = [];
  const seen = new Set<number>();
  // Directories and values that lie over each other could make a small file endless; honest ones fit into it once.
  let room = held.size;
  let offset = word(held.at(big ? 8 : 4, form.word), 0);
  while (offset !== 0) {
    const fault = seen.has(offset) ? `the chain of directories comes back to byte ${offset}`
      : offset % 2 !== 0 ? `the directory at byte ${offset} does not begin on an even byte`
        : offset + form.count > held.size ? `a directory at byte ${offset} lies outside the file`
          : seen.size >= MOST_DIRECTORIES ? `there are more than ${MOST_DIRECTORIES} directories` : null;
    if (fault !== null) {
      faults.push(fault);
      break;
    }
    seen.add(offset);
    const head = held.at(offset, form.count);
    const entries = big ? word(head, 0) : head.getUint16(0, littleEndian);
    const next = offset + form.count + entries * form.entry;
    room -= entries * form.entry;
    if (next + form.word > held.size || room < 0) {
      faults.push(room < 0 ? LARGER_THAN_FILE : `the directory at byte ${offset} reaches outside the file`);
      break;
    }
    const view = held.at(offset + form.count, entries * form.entry + form.word);
    const { tags, used } = readTags(held, { view, entries, offset, big, littleEndian, room, faults });
    room -= used;
    directories.push({ offset, tags });
    if (faults.length > 0) break;
    offset = word(view, entries * form.entry);
  }
  if (directories.length === 0 && faults.length === 0) faults.push('the file has no directory');
  return { big, littleEndian, directories, faults };
}
