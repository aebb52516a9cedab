import { zlibSync } from 'fflate';
import type { Ramp } from '../raster/colourRamps.js';
import type { ColourRange } from '../raster/colourRange.js';
import { encodePng } from '../raster/encodePng.js';
import { halve, type Level } from '../raster/overviews.js';
import { paintGrid } from '../raster/paintGrid.js';
import type { Grid } from '../raster/types.js';

/** A grid as a picture inside the document: nothing is fetched. */
export interface GridPicture {
  readonly dataUrl: string;
  /** Ground that the picture covers, metres. */
  readonly west: number;
  readonly north: number;
  readonly widthM: number;
  readonly heightM: number;
  /** Cells of the picture, which may be means of the grid's. */
  readonly columns: number;
  readonly rows: number;
}

/** DEFLATE as tight as it gets: a picture is made once and sent often. */
const LEVEL = 9;

export function gridPicture(grid: Grid, look: { ramp: Ramp; range: ColourRange; mostCells: number }): GridPicture {
  let level: Level = grid;
  while (Math.max(level.width, level.height) > look.mostCells && Math.min(level.width, level.height) > 1) level = halve(level);
  const rgba = paintGrid({ ...grid, width: level.width, height: level.height, values: level.values }, look.ramp, look.range);
  const png = encodePng(rgba, level, (bytes) => zlibSync(bytes, { level: LEVEL }));
  return {
    dataUrl: `data:image/png;base64,${base64(png)}`, west: grid.west, north: grid.north,
    widthM: grid.width * grid.cellM, heightM: grid.height * grid.cellM, columns: level.width, rows: level.height,
  };
}

/** A piece that a function call takes as its arguments on every machine; a multiple of 3, so that pieces join without padding. */
const PIECE = 24_576;

function base64(bytes: Uint8Array): string {
  let text = '';
  for (let i = 0; i < bytes.length; i += PIECE) text += btoa(String.fromCharCode(...bytes.subarray(i, i + PIECE)));
  return text;
}
