import type { Grid, RowSource } from './types.js';

/** Whether a grid has its values, or makes them as its rows are read. */
export function inMemory(grid: Grid | RowSource): grid is Grid {
  return 'values' in grid;
}
