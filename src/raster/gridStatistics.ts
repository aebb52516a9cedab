export interface GridStatistics {
  readonly minimum: number;
  readonly maximum: number;
  readonly mean: number;
  /** Of the cells as a whole, not as a sample of something: divided by their number. */
  readonly standardDeviation: number;
  /** Share of cells with a value, per cent. */
  readonly validPercent: number;
}

/**
 * Statistics of cells that come part by part; NaN and `nodata` are no values. Each part is gone through twice, so that
 * large values with a small spread keep their digits; parts are then joined.
 * Source: Chan, Golub and LeVeque (1983), Algorithms for computing the sample variance, equations 2.1.
 */
export class RunningStatistics {
  readonly #nodata: number;
  #cells = 0;
  #count = 0;
  #mean = 0;
  #squares = 0;
  #minimum = Infinity;
  #maximum = -Infinity;

  constructor(nodata: number) {
    this.#nodata = nodata;
  }

  add(values: ArrayLike<number>): void {
    const nodata = this.#nodata;
    const cells = values.length;
    let count = 0;
    let sum = 0;
    let minimum = this.#minimum;
    let maximum = this.#maximum;
    for (let i = 0; i < cells; i += 1) {
      const value = values[i]!;
      // NaN differs from itself.
      if (value !== value || value === nodata) continue;
      count += 1;
      sum += value;
      if (value < minimum) minimum = value;
      if (value > maximum) maximum = value;
    }
    this.#cells += cells;
    if (count === 0) return;
    const mean = sum / count;
    let squares = 0;
    for (let i = 0; i < cells; i += 1) {
      const value = values[i]!;
      if (value === value && value !== nodata) squares += (value - mean) * (value - mean);
    }
    const total = this.#count + count;
    const apart = mean - this.#mean;
    this.#squares += squares + (apart * apart * this.#count * count) / total;
    this.#mean += (apart * count) / total;
    this.#count = total;
    this.#minimum = minimum;
    this.#maximum = maximum;
  }

  /** Of all parts so far; null where no cell has a value. */
  result(): GridStatistics | null {
    if (this.#count === 0) return null;
    return {
      minimum: this.#minimum, maximum: this.#maximum, mean: this.#mean,
      standardDeviation: Math.sqrt(this.#squares / this.#count), validPercent: (100 * this.#count) / this.#cells,
    };
  }
}

/** Statistics of all cells but those that are NaN or equal `nodata`; null where no cell has a value. */
export function gridStatistics(values: ArrayLike<number>, nodata: number = NaN): GridStatistics | null {
  const statistics = new RunningStatistics(nodata);
  statistics.add(values);
  return statistics.result();
}
