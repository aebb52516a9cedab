import { Random } from '../numerics/random.js';

/** Enough for the quantiles that a style rests on: of 99.95 %, two thousand cells lie above. */
const MOST_CELLS = 1 << 22;

/**
 * A sample of the cells of a grid that comes part by part: all of them up to `most`, else one drawn from each run of
 * equally many cells, so that no pattern of the grid falls in step with it. The same cells whatever the parts.
 */
export class CellSample {
  readonly #random = new Random(0);
  readonly #step: number;
  readonly #kept: Float64Array;
  #count = 0;
  #seen = 0;
  #next: number;

  constructor(cells: number, most: number = MOST_CELLS) {
    this.#step = Math.ceil(cells / most);
    this.#kept = new Float64Array(Math.ceil(cells / this.#step));
    this.#next = this.#random.integer(this.#step);
  }

  /** The cells that follow those that were added before. */
  add(values: ArrayLike<number>): void {
    while (this.#next < this.#seen + values.length) {
      this.#kept[this.#count] = values[this.#next - this.#seen]!;
      this.#count += 1;
      this.#next = this.#count * this.#step + this.#random.integer(this.#step);
    }
    this.#seen += values.length;
  }

  /** Of the cells so far; NaN is a cell without a value. */
  values(): Float64Array {
    return this.#kept.subarray(0, this.#count);
  }
}
