export interface GridStatistics {
  readonly minimum: number;
  readonly maximum: number;
  readonly mean: number;
  /** Of the cells as a whole, not as a sample of something: divided by their number. */
  readonly standardDeviation: number;
  /** Share of cells with a value, per cent. */
  readonly validPercent: number;
}

/** Statistics of all cells but those that are NaN or equal `nodata`; null where no cell has a value. */
export function gridStatistics(values: ArrayLike<number>, nodata: number = NaN): GridStatistics | null {
  let count = 0;
  let sum = 0;
  let minimum = Infinity;
  let maximum = -Infinity;
  for (let i = 0; i < values.length; i += 1) {
    const value = values[i]!;
    if (Number.isNaN(value) || value === nodata) continue;
    count += 1;
    sum += value;
    if (value < minimum) minimum = value;
    if (value > maximum) maximum = value;
  }
  if (count === 0) return null;
  const mean = sum / count;
  let squares = 0;
  for (let i = 0; i < values.length; i += 1) {
    const value = values[i]!;
    if (!Number.isNaN(value) && value !== nodata) squares += (value - mean) ** 2;
  }
  return { minimum, maximum, mean, standardDeviation: Math.sqrt(squares / count), validPercent: (100 * count) / values.length };
}
