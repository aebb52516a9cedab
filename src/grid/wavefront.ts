/** The 13-point operator reads two rows up and down, so a sweep may follow three rows behind the one before. */
const LAG = 3;

/**
 * Runs passes over the rows of a grid one close behind the other: row by row with the same result as one pass after the
 * other, but each row is still in the processor's cache when the next pass comes to it.
 */
export function wavefront(height: number, passes: number, row: (pass: number, j: number) => void): void {
  for (let front = 0; front < height + LAG * (passes - 1); front++) {
    for (let pass = 0; pass < passes; pass++) {
      const j = front - LAG * pass;
      if (j >= 0 && j < height) row(pass, j);
    }
  }
}
