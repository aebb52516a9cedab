import { UserError } from '../errors.js';
import type { ByteSource } from './byteStores.js';
import { decodeTile } from './decodeTile.js';
import { decompress, type Inflate } from './decompress.js';
import type { TiffImage } from './tiffImage.js';

/** Cells of an image: first column and row, and how many. */
export interface CellWindow {
  readonly column: number;
  readonly row: number;
  readonly width: number;
  readonly height: number;
}

/** Tiles that lie this close are fetched at once: a further request costs more than these bytes. */
const JOIN_BYTES = 4096;
/** No more than this is fetched at once, so that memory stays bounded. */
const MOST_FETCH_BYTES = 1 << 24;

interface TilePlace {
  readonly index: number;
  readonly offset: number;
  readonly bytes: number;
}

/**
 * The stored samples of the first band within a window of an image, handed to `take` tile by tile, cell by cell of the
 * window (`to`, row by row). Only the tiles that the window touches are fetched; those that lie side by side in the
 * file in one go. A tile that the file leaves out is not taken.
 */
export async function readTiles(
  image: TiffImage, window: CellWindow, how: { source: ByteSource; inflate: Inflate; where: string; take(value: number, to: number): void },
): Promise<void> {
  for (const group of joined(touched(image, window, how.where))) {
    const start = group[0]!.offset;
    const last = group.at(-1)!;
    const length = last.offset + last.bytes - start;
    if (last.offset + last.bytes > how.source.size) throw broken(how.where, `tile ${last.index} outside the file`);
    const bytes = await how.source.read(start, length);
    if (bytes.length < length) throw broken(how.where, `a file that ends at byte ${start + bytes.length}, before its stated end`);
    for (const tile of group) {
      const at = tile.offset - start;
      takeTile(image, { window, tile: tile.index, samples: await samplesOf(image, tile.index, bytes.subarray(at, at + tile.bytes), how), take: how.take });
    }
  }
}

function broken(where: string, found: string): UserError {
  return new UserError({ code: 'grid_file_invalid', where, found, wanted: 'a GeoTIFF that is whole', advice: 'fetch or export the file again' });
}

function touched(image: TiffImage, { column, row, width, height }: CellWindow, where: string): TilePlace[] {
  const places: TilePlace[] = [];
  for (let down = Math.floor(row / image.tileHeight); down * image.tileHeight < row + height; down += 1) {
    for (let across = Math.floor(column / image.tileWidth); across * image.tileWidth < column + width; across += 1) {
      const index = down * image.across + across;
      const [offset, bytes] = [image.offsets[index]!, image.byteCounts[index]!];
      if (offset === 0 && bytes === 0) continue;
      if (!(Number.isSafeInteger(offset) && Number.isSafeInteger(bytes) && offset > 0 && bytes > 0)) throw broken(where, `tile ${index} of ${bytes} bytes at byte ${offset}`);
      places.push({ index, offset, bytes });
    }
  }
  return places.toSorted((a, b) => a.offset - b.offset);
}

function joined(places: readonly TilePlace[]): TilePlace[][] {
  const groups: TilePlace[][] = [];
  for (const place of places) {
    const group = groups.at(-1);
    const last = group?.at(-1);
    const near = last && place.offset >= last.offset + last.bytes && place.offset - last.offset - last.bytes <= JOIN_BYTES;
    if (group && near && place.offset + place.bytes - group[0]!.offset <= MOST_FETCH_BYTES) group.push(place);
    else groups.push([place]);
  }
  return groups;
}

async function samplesOf(image: TiffImage, tile: number, bytes: Uint8Array, how: { inflate: Inflate; where: string }): Promise<ArrayLike<number>> {
  const rows = image.strips ? Math.min(image.tileHeight, image.height - Math.floor(tile / image.across) * image.tileHeight) : image.tileHeight;
  const length = rows * image.tileWidth * image.interleaved * (image.sample.bits / 8);
  try {
    const unpacked = await decompress(bytes, image.compression, { length, inflate: how.inflate });
    return decodeTile(unpacked, { ...image, rowCells: image.tileWidth });
  } catch (problem) {
    // Decoders throw whatever they like at bytes that are no stream of theirs.
    throw broken(how.where, `tile ${tile}, which does not unpack (${problem instanceof Error ? problem.message : String(problem)})`);
  }
}

function takeTile(image: TiffImage, { window, tile, samples, take }: { window: CellWindow; tile: number; samples: ArrayLike<number>; take(value: number, to: number): void }): void {
  const left = (tile % image.across) * image.tileWidth;
  const top = Math.floor(tile / image.across) * image.tileHeight;
  const firstColumn = Math.max(left, window.column);
  const endColumn = Math.min(left + image.tileWidth, window.column + window.width);
  const endRow = Math.min(top + image.tileHeight, window.row + window.height);
  for (let row = Math.max(top, window.row); row < endRow; row += 1) {
    let from = ((row - top) * image.tileWidth + firstColumn - left) * image.interleaved;
    let to = (row - window.row) * window.width + firstColumn - window.column;
    for (let column = firstColumn; column < endColumn; column += 1, from += image.interleaved, to += 1) take(samples[from]!, to);
  }
}
