/** A grid of values on its way down the pyramid. NaN is a cell without a value. */
export interface Level {
  readonly width: number;
  readonly height: number;
  readonly values: Float32Array | Float64Array;
  /** Share of each cell, 0 to 1, that values cover; null at full resolution, where it is 1 or, for NaN, 0. */
  readonly cover: Float32Array | null;
}

/** Overlap of two cells, as a share of the smaller, that is rounding and no overlap. */
const NO_OVERLAP = 1e-9;
/** A cell of a level spans at most two cells of the one above, so it touches at most three. */
const TOUCHED = 3;

/**
 * Sizes of the overviews of a grid, large to small: each half of the one before, rounded up, until one fits a tile.
 * None where the grid itself fits. A strip that is one cell thin can get no smaller on that side, so there it ends
 * (the standard wants both sides to shrink).
 */
export function overviewSizes(width: number, height: number, tileSize: number): Array<{ width: number; height: number }> {
  const sizes = [];
  let size = { width, height };
  while (Math.max(size.width, size.height) > tileSize && Math.min(size.width, size.height) > 1) {
    size = { width: Math.ceil(size.width / 2), height: Math.ceil(size.height / 2) };
    sizes.push(size);
  }
  return sizes;
}

/**
 * The next level: each cell is the mean of what it covers, weighted by area and by how far that is covered by values.
 * All levels span the same ground, so a level of an odd size has cells a little less than twice as wide: a plain mean
 * of two by two would move the picture by up to half a cell at the far edge. A cell is NaN only where nothing under it
 * has a value.
 * Source: OGC 21-026, 7.3.2, pixel scale of a reduced-resolution subfile.
 */
export function halve(level: Level): Level {
  const width = Math.ceil(level.width / 2);
  const height = Math.ceil(level.height / 2);
  const across = overlaps(level.width, width);
  const down = overlaps(level.height, height);
  const cellArea = (level.width / width) * (level.height / height);
  const values = new Float32Array(width * height);
  const cover = new Float32Array(width * height);
  for (let row = 0; row < height; row += 1) {
    for (let column = 0; column < width; column += 1) {
      let sum = 0;
      let area = 0;
      for (let j = 0; j < TOUCHED; j += 1) {
        const high = down.share[row * TOUCHED + j]!;
        if (high === 0) continue;
        const start = (down.first[row]! + j) * level.width + across.first[column]!;
        for (let i = 0; i < TOUCHED; i += 1) {
          const wide = across.share[column * TOUCHED + i]!;
          if (wide === 0) continue;
          const value = level.values[start + i]!;
          if (Number.isNaN(value)) continue;
          const part = wide * high * (level.cover ? level.cover[start + i]! : 1);
          sum += part * value;
          area += part;
        }
      }
      values[row * width + column] = area > 0 ? sum / area : NaN;
      cover[row * width + column] = area / cellArea;
    }
  }
  return { width, height, values, cover };
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
