import type { Crs } from '../geodesy/types.js';
import { memorySource } from './byteStores.js';
import { openGeoTiff } from './openGeoTiff.js';
import type { Grid } from './types.js';

export interface GeoTiffContent {
  /** Metres in the CRS (degrees where it is geographic); nodata is NaN, scale and offset are applied. */
  readonly grid: Grid;
  readonly crs: Crs;
  readonly epsg: number;
  readonly description: string;
  /** Unit of the values as the file states it; empty where it states none. */
  readonly unit: string;
  /** Number of overviews in the file. */
  readonly overviews: number;
}

/**
 * The first band of a GeoTIFF at full resolution as a Grid. Throws UserError where the file is no GeoTIFF, is broken,
 * has no EPSG code, is rotated, or has cells that are not square. `source` names the file in messages.
 */
export async function readGeoTiff(bytes: Uint8Array, source = 'GeoTIFF'): Promise<GeoTiffContent> {
  const { width, height, west, north, cellM, crs, band, levels, readWindow } = await openGeoTiff(memorySource(bytes), { where: source });
  const { values } = await readWindow({ column: 0, row: 0, width, height });
  return { grid: { width, height, west, north, cellM, values }, crs, epsg: crs.epsg, description: band.description, unit: band.unit, overviews: levels.length - 1 };
}
