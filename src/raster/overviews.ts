import { RowHalver } from './rowHalver.js';

/** Values of an image, rows from the north; NaN is a cell without a value. */
export interface Level {
  readonly width: number;
  readonly height: number;
  readonly values: Float32Array | Float64Array;
}

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

/** The next level of a whole image; see RowHalver. */
export function halve(level: Level): Level {
  const width = Math.ceil(level.width / 2);
  const height = Math.ceil(level.height / 2);
  const values = new Float32Array(width * height);
  new RowHalver(level.width, level.height).push(level.values, values, 0);
  return { width, height, values };
}
