import type { ByteScratch } from './byteStores.js';
import { LEADER_BYTES, TRAILER_BYTES } from './tiffLayout.js';

/** Bytes to compressed bytes. Where it gives a promise, several tiles are under way at the same time. */
export type Compress = (bytes: Uint8Array) => Uint8Array | Promise<Uint8Array>;

/** Where a level's tiles wait in the scratch, in row-major order. */
export interface WaitingTiles {
  /** Of each tile with its leader and trailer. */
  readonly offsets: number[];
  /** Of each tile alone. */
  readonly bytes: number[];
}

/**
 * Compresses tiles, as many at a time as it is told, and puts them into the scratch in the order in which they came,
 * each between its size and its last four bytes, as they will stand in the file.
 */
export class TileQueue {
  readonly #compress: Compress;
  readonly #scratch: ByteScratch;
  readonly #most: number;
  readonly #underWay: Array<{ tiles: WaitingTiles; result: Promise<Uint8Array> }> = [];
  #end = 0;

  constructor(compress: Compress, scratch: ByteScratch, most: number) {
    this.#compress = compress;
    this.#scratch = scratch;
    this.#most = most;
  }

  /** Starts on a tile; waits while too many are under way. */
  async add(tiles: WaitingTiles, bytes: Uint8Array): Promise<void> {
    if (this.#underWay.length >= this.#most) await this.#store();
    const result = Promise.resolve(this.#compress(bytes));
    // The failure is thrown where the tile's turn comes; until then it is nobody's unhandled rejection.
    result.catch(() => {});
    this.#underWay.push({ tiles, result });
  }

  async finish(): Promise<void> {
    while (this.#underWay.length > 0) await this.#store();
  }

  async #store(): Promise<void> {
    const { tiles, result } = this.#underWay.shift()!;
    const tile = await result;
    const framed = new Uint8Array(LEADER_BYTES + tile.length + TRAILER_BYTES);
    new DataView(framed.buffer).setUint32(0, tile.length, true);
    framed.set(tile, LEADER_BYTES);
    framed.set(tile.subarray(tile.length - TRAILER_BYTES), LEADER_BYTES + tile.length);
    tiles.offsets.push(this.#end);
    tiles.bytes.push(tile.length);
    this.#end += framed.length;
    await this.#scratch.append(framed);
  }
}
