import { colourAt, type Ramp } from './colourRamps.js';
import { rampPlace, type ColourRange } from './colourRange.js';
import type { Grid } from './types.js';

/** Colours that a ramp is cut into: finer than eight bits a channel can show. */
const COLOURS = 1024;

/** A grid as RGBA, four bytes a cell in the grid's own order; a cell without a value is transparent. */
export function paintGrid(grid: Grid, ramp: Ramp, range: ColourRange): Uint8Array {
  const table = Array.from({ length: COLOURS }, (_, i) => colourAt(ramp, i / (COLOURS - 1)));
  const rgba = new Uint8Array(grid.values.length * 4);
  for (let i = 0; i < grid.values.length; i += 1) {
    const place = rampPlace(range, grid.values[i]!);
    if (Number.isNaN(place)) continue;
    rgba.set(table[Math.round(Math.min(1, Math.max(0, place)) * (COLOURS - 1))]!, i * 4);
    rgba[i * 4 + 3] = 255;
  }
  return rgba;
}
