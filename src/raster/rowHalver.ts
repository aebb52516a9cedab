/** Overlap of two cells, as a share of the smaller, that is rounding and no overlap. */
const NO_OVERLAP = 1e-9;
/** A cell of a level spans at most two cells of the one above, so it touches at most three. */
const TOUCHED = 3;

/**
 * Makes the next level of an overview pyramid from rows as they come: each cell is the mean of the cells that it covers,
 * weighted by the area covered; cells without a value do not count, and a cell is NaN where none under it has a value.
 * All levels span the same ground, so a level of an odd size has cells a little less than twice as wide: a plain mean
 * of two by two would move the picture by up to half a cell at the far edge.
 * Source: OGC 21-026, 7.3.2, pixel scale of a reduced-resolution subfile. GDAL's resampling `average` gives the same.
 */
export class RowHalver {
  readonly width: number;
  readonly height: number;
  readonly #fromWidth: number;
  readonly #fromHeight: number;
  readonly #first: Int32Array;
  readonly #share: Float64Array;
  readonly #sums: Float64Array;
  readonly #weights: Float64Array;
  /** Rows taken so far, and rows made. */
  #taken = 0;
  #made = 0;

  constructor(fromWidth: number, fromHeight: number) {
    this.width = Math.ceil(fromWidth / 2);
    this.height = Math.ceil(fromHeight / 2);
    this.#fromWidth = fromWidth;
    this.#fromHeight = fromHeight;
    const { first, share } = overlaps(fromWidth, this.width);
    this.#first = first;
    this.#share = share;
    this.#sums = new Float64Array(this.width);
    this.#weights = new Float64Array(this.width);
  }

  /** Takes whole rows, and writes those that are finished to `out` from row `at` of it on; returns how many there are. */
  push(rows: Float32Array | Float64Array, out: Float32Array, at: number): number {
    const before = this.#made;
    for (let start = 0; start < rows.length; start += this.#fromWidth) {
      const top = this.#taken;
      this.#taken += 1;
      const end = ((this.#made + 1) * this.#fromHeight) / this.height;
      this.#add(rows, start, Math.min(end, this.#taken) - Math.max(top, (this.#made * this.#fromHeight) / this.height));
      if (this.#taken < end - NO_OVERLAP) continue;
      this.#finish(out, (at + this.#made - before) * this.width);
      if (this.#taken - end > NO_OVERLAP) this.#add(rows, start, this.#taken - end);
    }
    return this.#made - before;
  }

  #add(rows: Float32Array | Float64Array, start: number, high: number): void {
    const sums = this.#sums;
    const weights = this.#weights;
    const { width } = this;
    if (this.#fromWidth === 2 * width) {
      for (let column = 0, at = start; column < width; column += 1, at += 2) {
        const left = rows[at]!;
        const right = rows[at + 1]!;
        // NaN differs from itself.
        if (left === left) {
          sums[column]! += high * left;
          weights[column]! += high;
        }
        if (right === right) {
          sums[column]! += high * right;
          weights[column]! += high;
        }
      }
      return;
    }
    const first = this.#first;
    const share = this.#share;
    for (let column = 0; column < width; column += 1) {
      const at = start + first[column]!;
      for (let i = 0; i < TOUCHED; i += 1) {
        const part = high * share[column * TOUCHED + i]!;
        if (part === 0) continue;
        const value = rows[at + i]!;
        if (value !== value) continue;
        sums[column]! += part * value;
        weights[column]! += part;
      }
    }
  }

  #finish(out: Float32Array, from: number): void {
    const sums = this.#sums;
    const weights = this.#weights;
    // 0/0 where nothing had a value: NaN, as it should be.
    for (let column = 0; column < sums.length; column += 1) out[from + column] = sums[column]! / weights[column]!;
    sums.fill(0);
    weights.fill(0);
    this.#made += 1;
  }
}

/** For each of `to` cells along an axis of `from`: the first cell that it touches, and the length of overlap with it and the next two. */
function overlaps(from: number, to: number): { first: Int32Array; share: Float64Array } {
  const first = new Int32Array(to);
  const share = new Float64Array(to * TOUCHED);
  for (let cell = 0; cell < to; cell += 1) {
    const start = (cell * from) / to;
    const end = ((cell + 1) * from) / to;
    first[cell] = Math.floor(start + NO_OVERLAP);
    for (let i = 0; i < TOUCHED; i += 1) {
      const left = first[cell]! + i;
      const length = Math.min(end, left + 1) - Math.max(start, left);
      if (length > NO_OVERLAP && left < from) share[cell * TOUCHED + i] = length;
    }
  }
  return { first, share };
}
