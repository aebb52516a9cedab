import { UserError } from '../errors.js';
import { MAX_CELLS } from '../grid/gridFrame.js';
import type { Slot } from '../operations/types.js';
import { memorySource } from '../raster/byteStores.js';
import { openGeoTiff } from '../raster/openGeoTiff.js';
import { readGeoTiff } from '../raster/readGeoTiff.js';
import type { Grid, RowSource } from '../raster/types.js';
import type { Site } from '../site/types.js';
import { STAGE_FOLDER } from './deliver.js';
import type { Host } from './host.js';
import { decodeReadings, type ReadingsHeader } from './readingsCsv.js';
import { decodeValue } from './valueJson.js';

/** The file of a role that the next stage reads, relative to the folder of a run. */
export function stagePath(role: string, slot: Slot): string {
  switch (slot.form) {
    case 'readings': return `${role}.csv`;
    case 'grid': return `${role}.tif`;
    case 'html': return `${role}.html`;
    case 'json': return `${role}.json`;
    case 'layer': return `${role}.geojson`;
    default: return `${STAGE_FOLDER}/${role}.json`;
  }
}

/** Reads back what an earlier stage left, so that each stage can run on files. */
export async function readStage(role: string, path: string, { slot, site, host }: { slot: Slot; site: Site; host: Host }): Promise<unknown> {
  if (slot.form === 'grid') return readGrid(path, { slot, site, host });
  const bytes = await host.files.read(path);
  if (bytes.length === 0) throw emptyFile(path, slot);
  switch (slot.form) {
    case 'readings': {
      const folder = path.slice(0, path.length - `${role}.csv`.length);
      const header = parse(await host.files.read(`${folder}${STAGE_FOLDER}/${role}.json`), path) as ReadingsHeader;
      return decodeReadings(bytes, path, { header, site });
    }
    case 'html': return new TextDecoder().decode(bytes);
    default: return parse(bytes, path);
  }
}

/** In memory up to MAX_CELLS; a larger one is only opened. */
async function readGrid(path: string, { slot, site, host: { files } }: { slot: Slot; site: Site; host: Host }): Promise<Grid | RowSource> {
  const source = files.source ? await files.source(path) : memorySource(await files.read(path));
  if (source.size === 0) throw emptyFile(path, slot);
  const { width, height, west, north, cellM, crs, readWindow } = await openGeoTiff(source, { where: path });
  if (crs.epsg !== site.frame.epsg) {
    throw new UserError({ code: 'crs_missing', where: path, found: `EPSG:${crs.epsg}`, wanted: `a grid in the survey's frame, ${site.frame.code}` });
  }
  if (width * height > MAX_CELLS) {
    const readRows = async (row: number, count: number): Promise<Grid['values']> => (await readWindow({ column: 0, row, width, height: count })).values;
    return { width, height, west, north, cellM, readRows };
  }
  // Read as a whole, so that it stands among the inputs of the provenance.
  return (await readGeoTiff(await files.read(path), path)).grid;
}

function emptyFile(path: string, slot: Slot): UserError {
  return new UserError({ code: 'file_empty', where: path, found: 'an empty file', wanted: slot.title });
}

function parse(bytes: Uint8Array, path: string): unknown {
  try {
    return decodeValue(new TextDecoder().decode(bytes));
  } catch (error) {
    throw new UserError({ code: 'file_unreadable', where: path, found: (error as Error).message, wanted: 'the JSON that an earlier stage left' });
  }
}
