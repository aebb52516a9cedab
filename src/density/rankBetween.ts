import type { Patch } from './patches.js';

/** Rank at a column and row counted from the middle of the first cell, linear along both axes; 0 outside the patch. */
export function rankBetween({ width, height, rank }: Patch, column: number, row: number): number {
  const i = Math.floor(column);
  const j = Math.floor(row);
  const u = column - i;
  const v = row - j;
  if (i >= 0 && j >= 0 && i < width - 1 && j < height - 1) {
    const at = j * width + i;
    return (1 - v) * ((1 - u) * rank[at]! + u * rank[at + 1]!) + v * ((1 - u) * rank[at + width]! + u * rank[at + width + 1]!);
  }
  const value = (ii: number, jj: number): number => (ii < 0 || jj < 0 || ii >= width || jj >= height ? 0 : rank[jj * width + ii]!);
  return (1 - v) * ((1 - u) * value(i, j) + u * value(i + 1, j)) + v * ((1 - u) * value(i, j + 1) + u * value(i + 1, j + 1));
}
