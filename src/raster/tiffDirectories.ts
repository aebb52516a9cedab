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

/** Reads all directories of a TIFF or BigTIFF, of either byte order. Never throws on bad bytes: it says what is wrong. */
export function readTiffDirectories(bytes: Uint8Array): ReadTiff {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const faults: string[] = [];
  const directories: ReadDirectory[] = [];
  const mark = bytes.length >= 8 ? view.getUint16(0) : 0;
  const littleEndian = mark === 0x4949;
  const version = bytes.length >= 8 ? view.getUint16(2, littleEndian) : 0;
  const big = version === 43;
  if ((mark !== 0x4949 && mark !== 0x4d4d) || (version !== 42 && version !== 43)) {
    return { big: false, littleEndian: true, directories, faults: ['the file does not begin as a TIFF'] };
  }
  const number = (at: number): number => (big ? Number(view.getBigUint64(at, littleEndian)) : view.getUint32(at, littleEndian));
  const [countBytes, entryBytes, wordBytes] = big ? [8, 20, 8] as const : [2, 12, 4] as const;
  const seen = new Set<number>();
  let offset = number(big ? 8 : 4);
  while (offset !== 0 && faults.length === 0) {
    if (seen.has(offset)) faults.push(`the chain of directories comes back to byte ${offset}`);
    else if (offset % 2 !== 0) faults.push(`the directory at byte ${offset} does not begin on an even byte`);
    else if (offset + countBytes > bytes.length) faults.push(`a directory at byte ${offset} lies outside the file`);
    if (faults.length > 0) break;
    seen.add(offset);
    const entries = big ? number(offset) : view.getUint16(offset, littleEndian);
    const next = offset + countBytes + entries * entryBytes;
    if (next + wordBytes > bytes.length) {
      faults.push(`the directory at byte ${offset} reaches outside the file`);
      break;
    }
    const tags = new Map<number, ReadTag>();
    let before = -1;
    for (let entry = 0; entry < entries; entry += 1) {
      const at = offset + countBytes + entry * entryBytes;
      const id = view.getUint16(at, littleEndian);
      if (id <= before) faults.push(`tag ${id} of the directory at byte ${offset} is not in ascending order`);
      before = id;
      const type = view.getUint16(at + 2, littleEndian);
      const count = number(at + 4);
      const reader = READERS.get(type);
      if (!reader) continue;
      const [valueBytes, read] = reader;
      const inside = count * valueBytes <= wordBytes;
      const start = inside ? at + 4 + wordBytes : number(at + 4 + wordBytes);
      const end = start + count * valueBytes;
      if (end > bytes.length) {
        faults.push(`the values of tag ${id} of the directory at byte ${offset} lie outside the file`);
        continue;
      }
      tags.set(id, { type, count, values: Array.from({ length: count }, (_, i) => read(view, start + i * valueBytes, littleEndian)), end: inside ? 0 : end });
    }
    directories.push({ offset, tags });
    offset = number(next);
  }
  if (directories.length === 0 && faults.length === 0) faults.push('the file has no directory');
  return { big, littleEndian, directories, faults };
}
