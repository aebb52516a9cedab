import { TAG, TIFF_TYPES, type TiffTag, type TiffType } from './tiffTags.js';

/** One image of the file: its tags but the tile offsets and counts, and its tiles' sizes in row-major order. */
export interface ImagePlan {
  readonly tags: readonly TiffTag[];
  readonly tileBytes: readonly number[];
}

export interface FileLayout {
  /** Everything before the first tile's leader. */
  readonly header: Uint8Array;
  /** Where the tiles start, by image and tile. */
  readonly offsets: readonly (readonly number[])[];
  readonly fileBytes: number;
}

const GHOST_LINES = 'LAYOUT=IFDS_BEFORE_DATA\nBLOCK_ORDER=ROW_MAJOR\nBLOCK_LEADER=SIZE_AS_UINT4\n'
  + 'BLOCK_TRAILER=LAST_4_BYTES_REPEATED\nKNOWN_INCOMPATIBLE_EDITION=NO\n ';
/** A line with the size of what follows. Readers that know it fetch tiles without a look at the tile index. Source: GDAL documentation, COG driver. */
export const GHOST_AREA = `GDAL_STRUCTURAL_METADATA_SIZE=${String(GHOST_LINES.length).padStart(6, '0')} bytes\n${GHOST_LINES}`;

/** Each tile stands between its size, four bytes, and its last four bytes repeated. */
export const LEADER_BYTES = 4;
export const TRAILER_BYTES = 4;

/** Classic TIFF counts bytes in 32 bits. */
export const CLASSIC_LIMIT_BYTES = 2 ** 32 - 1;

/** Tile offsets and tile byte counts: the two tags that the layout adds to each image. */
const INDEX_TAGS = 2;

/** Sizes of the parts of a directory. Source: TIFF 6.0, section 2; BigTIFF design (Adobe/AWare Systems). */
const CLASSIC = { header: 8, count: 2, entry: 12, inline: 4, next: 4, offset: 'LONG' } as const;
const BIG = { header: 16, count: 8, entry: 20, inline: 8, next: 8, offset: 'LONG8' } as const;

type Form = typeof CLASSIC | typeof BIG;

interface Places {
  readonly headerBytes: number;
  readonly directories: ReadonlyArray<{ readonly start: number; readonly values: ReadonlyMap<number, number> }>;
  readonly offsets: readonly (readonly number[])[];
  readonly fileBytes: number;
}

/**
 * Lays out a TIFF whose directories all come before its data: header, ghost area, directories with their values (full
 * image first, then overviews large to small), tile offsets and counts of them all, then tiles of the smallest overview
 * to the full image's. `auto` is a classic TIFF unless that would pass 4 GB.
 * Source: OGC 21-026, recommendation ifd-order.
 */
export function layoutTiff(images: readonly ImagePlan[], bigTiff: 'auto' | 'always'): FileLayout {
  const big = bigTiff === 'always' || place(images, CLASSIC).fileBytes > CLASSIC_LIMIT_BYTES;
  const form = big ? BIG : CLASSIC;
  const places = place(images, form);
  return { header: writeHeader(images, form, places), offsets: places.offsets, fileBytes: places.fileBytes };
}

function place(images: readonly ImagePlan[], form: Form): Places {
  let at = even(form.header + GHOST_AREA.length);
  const directories = images.map(({ tags }) => {
    const start = at;
    at += form.count + (tags.length + INDEX_TAGS) * form.entry + form.next;
    const values = new Map<number, number>();
    for (const tag of tags) {
      const bytes = tag.values.length * TIFF_TYPES[tag.type].bytes;
      if (bytes <= form.inline) continue;
      values.set(tag.id, at);
      at = even(at + bytes);
    }
    return { start, values };
  });
  for (const [index, { tileBytes }] of images.entries()) {
    const { values } = directories[index]!;
    for (const [id, bytes] of [[TAG.tileOffsets, TIFF_TYPES[form.offset].bytes], [TAG.tileByteCounts, TIFF_TYPES.LONG.bytes]] as const) {
      if (tileBytes.length * bytes <= form.inline) continue;
      values.set(id, at);
      at += tileBytes.length * bytes;
    }
  }
  const headerBytes = at;
  const offsets: number[][] = images.map(() => []);
  for (let index = images.length - 1; index >= 0; index -= 1) {
    for (const bytes of images[index]!.tileBytes) {
      offsets[index]!.push(at + LEADER_BYTES);
      at += LEADER_BYTES + bytes + TRAILER_BYTES;
    }
  }
  return { headerBytes, directories, offsets, fileBytes: at };
}

function writeHeader(images: readonly ImagePlan[], form: Form, { headerBytes, directories, offsets }: Places): Uint8Array {
  const header = new Uint8Array(headerBytes);
  const view = new DataView(header.buffer);
  const big = form === BIG;
  const count = (at: number, value: number): void => (big ? view.setBigUint64(at, BigInt(value), true) : view.setUint32(at, value, true));
  header.set([0x49, 0x49, big ? 43 : 42, 0]);
  if (big) view.setUint16(4, 8, true);
  count(big ? 8 : 4, directories[0]!.start);
  header.set(new TextEncoder().encode(GHOST_AREA), form.header);

  for (const [index, { start, values }] of directories.entries()) {
    const tags = ([
      ...images[index]!.tags,
      { id: TAG.tileOffsets, type: form.offset, values: offsets[index]! },
      { id: TAG.tileByteCounts, type: 'LONG', values: images[index]!.tileBytes },
    ] satisfies TiffTag[]).toSorted((a, b) => a.id - b.id);
    if (big) view.setBigUint64(start, BigInt(tags.length), true);
    else view.setUint16(start, tags.length, true);
    let at = start + form.count;
    for (const tag of tags) {
      view.setUint16(at, tag.id, true);
      view.setUint16(at + 2, TIFF_TYPES[tag.type].code, true);
      count(at + 4, tag.values.length);
      const elsewhere = values.get(tag.id);
      const valueAt = at + (big ? 12 : 8);
      if (elsewhere === undefined) writeValues(view, valueAt, tag);
      else {
        count(valueAt, elsewhere);
        writeValues(view, elsewhere, tag);
      }
      at += form.entry;
    }
    count(at, directories[index + 1]?.start ?? 0);
  }
  return header;
}

function writeValues(view: DataView, start: number, tag: TiffTag): void {
  const write: Record<TiffType, (at: number, value: number) => void> = {
    ASCII: (at, value) => view.setUint8(at, value),
    SHORT: (at, value) => view.setUint16(at, value, true),
    LONG: (at, value) => view.setUint32(at, value, true),
    DOUBLE: (at, value) => view.setFloat64(at, value, true),
    LONG8: (at, value) => view.setBigUint64(at, BigInt(value), true),
  };
  const { bytes } = TIFF_TYPES[tag.type];
  for (const [index, value] of tag.values.entries()) write[tag.type](start + index * bytes, value);
}

function even(at: number): number {
  return at + (at % 2);
}
