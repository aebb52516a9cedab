import type { Grid } from '../raster/types.js';
import { ringAreaM2 } from './area.js';
import type { Area } from './types.js';

/** The lattice of a grid without its values. */
export type Lattice = Omit<Grid, 'values'>;

/**
 * Share of each cell that lies in the area, exact, row by row from the north-west; 0 to 1.
 *
 * Each edge leaves in its row the height it climbs: in its own cell only the part east of it, in the next cell the rest;
 * a running sum from west to east then turns climbs into covered shares (signed-area accumulation, as for smooth fonts).
 */
export function coverage(area: Area, lattice: Lattice): Float64Array {
  const { width, height, west, north, cellM } = lattice;
  const stride = width + 1;
  const climb = new Float64Array(stride * height);
  for (const rings of area) {
    rings.forEach((ring, index) => {
      // The western edge of a counter-clockwise ring runs south, down the rows: its climb counts positive.
      const sign = Math.sign(ringAreaM2(ring)) * (index === 0 ? 1 : -1);
      for (let i = 0; i < ring.length; i++) {
        const a = ring[i]!;
        const b = ring[(i + 1) % ring.length]!;
        addEdge(climb, { width, height, sign }, [(a[0] - west) / cellM, (north - a[1]) / cellM, (b[0] - west) / cellM, (north - b[1]) / cellM]);
      }
    });
  }
  const shares = new Float64Array(width * height);
  for (let row = 0; row < height; row++) {
    let sum = 0;
    for (let col = 0; col < width; col++) {
      sum += climb[row * stride + col]!;
      shares[row * width + col] = Math.min(1, Math.max(0, sum));
    }
  }
  return shares;
}

interface Accumulator { readonly width: number; readonly height: number; readonly sign: number }

/** Cuts an edge (columns and rows as real numbers) at row lines. */
function addEdge(climb: Float64Array, grid: Accumulator, [ax, ay, bx, by]: readonly [number, number, number, number]): void {
  if (ay === by) return;
  const down = by > ay ? 1 : -1;
  const [x0, y0, x1, y1] = down === 1 ? [ax, ay, bx, by] : [bx, by, ax, ay];
  const slope = (x1 - x0) / (y1 - y0);
  const from = Math.max(y0, 0);
  const to = Math.min(y1, grid.height);
  for (let row = Math.floor(from); row < to; row++) {
    const top = Math.max(from, row);
    const bottom = Math.min(to, row + 1);
    addPiece(climb, grid, { row, dy: down * grid.sign * (bottom - top), xa: x0 + slope * (top - y0), xb: x0 + slope * (bottom - y0) });
  }
}

/** Spreads the climb of a piece within one row over the columns that it crosses. West of the grid all of it counts, east of it nothing. */
function addPiece(climb: Float64Array, { width }: Accumulator, { row, dy, xa, xb }: { row: number; dy: number; xa: number; xb: number }): void {
  const base = row * (width + 1);
  const low = Math.min(xa, xb);
  const high = Math.max(xa, xb);
  const span = high - low;
  if (low < 0) climb[base]! += span > 0 ? (dy * (Math.min(high, 0) - low)) / span : dy;
  if (span === 0) {
    if (low >= 0 && low < width) place(climb, base + Math.floor(low), dy, low - Math.floor(low));
    return;
  }
  for (let col = Math.max(0, Math.floor(low)); col < Math.min(width, high); col++) {
    const a = Math.max(low, col);
    const b = Math.min(high, col + 1);
    if (b > a) place(climb, base + col, (dy * (b - a)) / span, (a + b) / 2 - col);
  }
}

function place(climb: Float64Array, at: number, dy: number, fraction: number): void {
  climb[at]! += dy * (1 - fraction);
  climb[at + 1]! += dy * fraction;
}
