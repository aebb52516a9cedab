import { UserError } from '../errors.js';
import type { Slot } from '../operations/types.js';
import { readGeoTiff } from '../raster/readGeoTiff.js';
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
  const bytes = await host.files.read(path);
  if (bytes.length === 0) throw new UserError({ code: 'file_empty', where: path, found: 'an empty file', wanted: slot.title });
  switch (slot.form) {
    case 'grid': return readGrid(path, bytes, site);
    case 'readings': {
      const folder = path.slice(0, path.length - `${role}.csv`.length);
      const header = parse(await host.files.read(`${folder}${STAGE_FOLDER}/${role}.json`), path) as ReadingsHeader;
      return decodeReadings(bytes, path, { header, site });
    }
    case 'html': return new TextDecoder().decode(bytes);
    default: return parse(bytes, path);
  }
}

async function readGrid(path: string, bytes: Uint8Array, site: Site): Promise<unknown> {
  const { grid, epsg } = await readGeoTiff(bytes, path);
  if (epsg !== site.frame.epsg) {
    throw new UserError({ code: 'crs_missing', where: path, found: `EPSG:${epsg}`, wanted: `a grid in the survey's frame, ${site.frame.code}` });
  }
  return grid;
}

function parse(bytes: Uint8Array, path: string): unknown {
  try {
    return decodeValue(new TextDecoder().decode(bytes));
  } catch (error) {
    throw new UserError({ code: 'file_unreadable', where: path, found: (error as Error).message, wanted: 'the JSON that an earlier stage left' });
  }
}
