/** What the ghost area's promises are about. */
export interface GhostImage {
  readonly name: string;
  readonly directoryAt: number;
  readonly offsets: readonly number[];
  readonly byteCounts: readonly number[];
}

const FIRST_LINE = /^GDAL_STRUCTURAL_METADATA_SIZE=(\d{6}) bytes\n/;
/** Length of the first line. */
const FIRST_LINE_BYTES = 43;
/** Bytes of the leader, of the trailer, and of what the trailer repeats. */
const MARK_BYTES = 4;

/**
 * Whether a file keeps what its ghost area promises: the first directory right after it, tiles row by row, each tile's
 * size before it and its last four bytes again after it. A file without a ghost area promises nothing. Of each kind of
 * fault the first in each image is told.
 * Source: GDAL documentation, COG driver, header ghost area.
 */
export function checkGhostArea(bytes: Uint8Array, big: boolean, images: readonly GhostImage[]): string[] {
  const start = big ? 16 : 8;
  const line = FIRST_LINE.exec(latin(bytes, start, start + FIRST_LINE_BYTES));
  if (!line) return [];
  const found: string[] = [];
  const say = (what: string): void => void found.push(`ghost area: ${what}`);
  const end = start + FIRST_LINE_BYTES + Number(line[1]);
  const promises = latin(bytes, start + FIRST_LINE_BYTES, end);
  if (images[0]!.directoryAt !== end + (end % 2)) say(`the first directory is at byte ${images[0]!.directoryAt}, not right after the ghost area`);
  if (!promises.endsWith('\n') && !promises.endsWith('\n ')) say('its stated size does not end with a line');
  if (promises.includes('KNOWN_INCOMPATIBLE_EDITION=YES')) say('the file says that it was edited and is no longer optimised');
  const rowMajor = promises.includes('BLOCK_ORDER=ROW_MAJOR');
  const leader = promises.includes('BLOCK_LEADER=SIZE_AS_UINT4');
  const trailer = promises.includes('BLOCK_TRAILER=LAST_4_BYTES_REPEATED');
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  for (const { name, offsets, byteCounts } of images) {
    const first = (wrong: (at: number, size: number, tile: number) => boolean): number => offsets.findIndex((at, tile) => {
      const size = byteCounts[tile] ?? 0;
      return at > 0 && at + size <= bytes.length && wrong(at, size, tile);
    });
    let before = 0;
    const disordered = first((at) => {
      const back = at < before;
      before = at;
      return back;
    });
    if (rowMajor && disordered >= 0) say(`tile ${disordered} of ${name} lies before the tile before it`);
    const unled = first((at, size) => at < MARK_BYTES || view.getUint32(at - MARK_BYTES, true) !== size);
    if (leader && unled >= 0) say(`the size before tile ${unled} of ${name} is not its size`);
    const untrailed = first((at, size) => size >= MARK_BYTES
      && (at + size + MARK_BYTES > bytes.length || view.getUint32(at + size - MARK_BYTES) !== view.getUint32(at + size)));
    if (trailer && untrailed >= 0) say(`the bytes after tile ${untrailed} of ${name} do not repeat its last four`);
  }
  return found;
}

function latin(bytes: Uint8Array, start: number, end: number): string {
  return String.fromCharCode(...bytes.subarray(start, Math.min(end, start + 10_000)));
}
