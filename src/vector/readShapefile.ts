import { read } from 'shapefile';
import { UserError } from '../errors.js';
import { baseName, type FileSource } from '../files.js';
import { crsFromWkt } from '../geodesy/crsFromWkt.js';
import { propertyValues } from './propertyValues.js';
import type { RawVector } from './types.js';

/** What .cpg files hold, letters and digits only, and the name that the decoder knows it by. */
const ENCODINGS: Readonly<Record<string, string>> = {
  utf8: 'utf-8', '65001': 'utf-8', '1252': 'windows-1252', cp1252: 'windows-1252', ansi1252: 'windows-1252', windows1252: 'windows-1252',
  '88591': 'iso-8859-1', iso88591: 'iso-8859-1', latin1: 'iso-8859-1', '1250': 'windows-1250', cp1250: 'windows-1250', '1251': 'windows-1251', cp1251: 'windows-1251',
};
const SHAPE_FILE_CODE = 9994;
const HEADER_BYTES = 100;
/** The encoding that dBASE files are in where nobody says (the ANSI code page of the West). */
const UNSAID = 'windows-1252';

/**
 * Reads a Shapefile: shapes from the .shp, attributes from the .dbf (none without it), the CRS from the .prj and the
 * encoding of texts from the .cpg. The parts are looked for beside the .shp, their endings in its case or the other.
 * Source: ESRI Shapefile Technical Description, 1998.
 */
export async function readShapefile(path: string, files: FileSource): Promise<RawVector> {
  const source = baseName(path);
  const shp = await files.read(path);
  checkHeader(shp, source);
  const [dbf, prj, cpg] = await Promise.all(['dbf', 'prj', 'cpg'].map(ending => readBeside(path, ending, files)));
  const encoding = cpg ? encodingOf(cpg, source) : UNSAID;
  const notes: string[] = [];
  let collection: Awaited<ReturnType<typeof read>>;
  try {
    collection = await read(shp, dbf ?? undefined, { encoding });
  } catch (error) {
    // The package meets a cut-off file as a missing buffer or an offset beyond one.
    if (!(error instanceof Error)) throw error;
    throw new UserError({ code: 'file_unreadable', where: source, found: `a damaged file (${error.message})`, wanted: 'a whole Shapefile' });
  }
  const features = collection.features.map(({ geometry, properties }) => ({ geometry: geometry ?? null, properties: propertyValues(properties ?? {}) }));
  if (!dbf) notes.push(`${source} has no .dbf beside it: its features have no attributes.`);
  if (dbf && !cpg && features.some(({ properties }) => Object.values(properties).some(isForeign))) {
    notes.push(`${source} has no .cpg beside it: its texts were read as Windows-1252. Check names with accents.`);
  }
  return { crs: prj ? crsFromWkt(new TextDecoder().decode(prj).trim(), `${source.slice(0, -4)}.prj`) : null, features, notes };
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

function encodingOf(cpg: Uint8Array, source: string): string {
  const label = new TextDecoder().decode(cpg).trim();
  const encoding = ENCODINGS[label.toLowerCase().replace(/[^a-z0-9]/g, '')];
  if (encoding) return encoding;
  throw new UserError({
    code: 'file_unreadable', where: `${source.slice(0, -4)}.cpg`, found: `the encoding ${JSON.stringify(label)}`, wanted: 'UTF-8, 1252, 1250, 1251 or ISO-8859-1',
    advice: 'save the Shapefile with UTF-8',
  });
}

function isForeign(value: unknown): boolean {
  return typeof value === 'string' && !/^\p{ASCII}*$/u.test(value);
}
