import type { Geometry } from 'geojson';
import { read } from 'shapefile';
import { UserError } from '../errors.js';
import { baseName, type FileSource } from '../files.js';
import { crsFromWkt } from '../geodesy/crsFromWkt.js';
import { readDbf } from './readDbf.js';
import type { RawVector } from './types.js';

const SHAPE_FILE_CODE = 9994;
const HEADER_BYTES = 100;

/**
 * Reads a Shapefile: shapes from the .shp, attributes from the .dbf (none without it; rows marked as deleted are left
 * out with their shapes), the CRS from the .prj and the encoding of texts from the .cpg. The parts are looked for beside the .shp, their endings in its case or the other.
 * Source: ESRI Shapefile Technical Description, 1998.
 */
export async function readShapefile(path: string, files: FileSource): Promise<RawVector> {
  const source = baseName(path);
  const shp = await files.read(path);
  checkHeader(shp, source);
  const [dbf, prj, cpg] = await Promise.all(['dbf', 'prj', 'cpg'].map(ending => readBeside(path, ending, files)));
  const shapes = await shapesOf(shp, source);
  const crs = prj ? crsFromWkt(new TextDecoder().decode(prj).trim(), `${source.slice(0, -4)}.prj`) : null;
  if (!dbf) return { crs, features: shapes.map(geometry => ({ geometry, properties: {} })), notes: [`${source} has no .dbf beside it: its features have no attributes.`] };
  const table = readDbf(dbf, cpg ? new TextDecoder().decode(cpg).trim() : null, `${source.slice(0, -4)}.dbf`);
  if (table.rows.length !== shapes.length) {
    throw new UserError({
      code: 'file_unreadable', where: source, found: `${shapes.length} shapes and ${table.rows.length} rows in the .dbf`, wanted: 'one row for each shape', advice: 'copy both files again',
    });
  }
  const features = shapes.map((geometry, i) => ({ geometry, properties: table.rows[i] ?? {} })).filter((_, i) => table.rows[i] !== null);
  return { crs, features, notes: table.notes };
}

async function shapesOf(shp: Uint8Array, source: string): Promise<(Geometry | null)[]> {
  try {
    return (await read(shp)).features.map(({ geometry }) => geometry ?? null);
  } catch (error) {
    // The package meets a cut-off file as a missing buffer or an offset beyond one.
    if (!(error instanceof Error)) throw error;
    throw new UserError({ code: 'file_unreadable', where: source, found: `a damaged file (${error.message})`, wanted: 'a whole Shapefile' });
  }
}

function checkHeader(shp: Uint8Array, source: string): void {
  if (shp.length === 0) throw new UserError({ code: 'file_empty', where: source, found: 'no bytes', wanted: 'a Shapefile' });
  const view = new DataView(shp.buffer, shp.byteOffset, shp.byteLength);
  if (shp.length < HEADER_BYTES || view.getInt32(0) !== SHAPE_FILE_CODE) {
    throw new UserError({ code: 'file_unreadable', where: source, found: 'other first bytes than a Shapefile has', wanted: 'the .shp of a Shapefile' });
  }
  const stated = view.getInt32(24) * 2;
  if (stated > shp.length) {
    throw new UserError({ code: 'file_unreadable', where: source, found: `${shp.length} bytes`, wanted: `${stated}, as its header says`, advice: 'copy the file again' });
  }
}

async function readBeside(path: string, ending: string, files: FileSource): Promise<Uint8Array | null> {
  const stem = path.slice(0, -3);
  for (const other of [`${stem}${ending}`, `${stem}${ending.toUpperCase()}`]) if (await files.has(other)) return files.read(other);
  return null;
}
