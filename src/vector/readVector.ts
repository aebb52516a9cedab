import type { Geometry } from 'geojson';
import { UserError } from '../errors.js';
import { baseName, extension, type FileSource } from '../files.js';
import type { Crs } from '../geodesy/types.js';
import { checkInputGeometry } from './checkInputGeometry.js';
import { boxOf, eachPosition, emptyBox, growBox, mapPositions, type Box } from './layerGeometry.js';
import { readFlatGeobuf } from './readFlatGeobuf.js';
import { readGeoJson } from './readGeoJson.js';
import { readShapefile } from './readShapefile.js';
import type { InputFeature, RawVector, VectorInput } from './types.js';

export interface ReadVectorOptions {
  /** CRS stated by the user for a file that names none; one that names another is refused. */
  readonly crs: Crs | null;
  /** Key of the survey file that states a CRS for this file, for messages. */
  readonly crsKey: string;
}
export const READ_VECTOR_DEFAULTS: ReadVectorOptions = Object.freeze({ crs: null, crsKey: 'crs' });

const READERS: Readonly<Record<string, (path: string, files: FileSource) => Promise<RawVector>>> = {
  geojson: readGeoJson, json: readGeoJson, shp: readShapefile, fgb: readFlatGeobuf,
};

/** Endings of the vector files that can be read. */
export const VECTOR_EXTENSIONS: readonly string[] = Object.keys(READERS);

/**
 * Reads GeoJSON (RFC 7946; an old `crs` member is honoured), Shapefile (with its .dbf, .prj and .cpg) or FlatGeobuf, by
 * the file's ending. A CRS is never guessed: a file without one, and without one stated, is a UserError `crs_missing`.
 * What the user states counts where the file is silent, also before the WGS 84 of a GeoJSON without a `crs` member
 * (RFC 7946, section 4, "prior arrangement"). Coordinates in feet become metres. Heights are left out, with a note.
 */
export async function readVector(path: string, files: FileSource, options: Partial<ReadVectorOptions> = {}): Promise<VectorInput> {
  const { crs: stated, crsKey } = { ...READ_VECTOR_DEFAULTS, ...options };
  const source = baseName(path);
  const reader = READERS[extension(path)];
  if (!reader) {
    throw new UserError({
      code: 'file_unreadable', where: source, found: extension(path) === '' ? 'a name without an ending' : `the ending .${extension(path)}`,
      wanted: `one of ${VECTOR_EXTENSIONS.map(ending => `.${ending}`).join(', ')}`,
    });
  }
  const raw = await reader(path, files);
  if (raw.features.length === 0) throw new UserError({ code: 'file_empty', where: source, found: 'no features', wanted: 'at least one' });
  for (const [index, { geometry }] of raw.features.entries()) if (geometry) checkInputGeometry(geometry, `${source}, feature ${index + 1}`);
  const crs = crsOf(raw, { stated, crsKey, source });
  const heights = { count: 0 };
  checkPlausible(raw.features, crs, source);
  const features = raw.features.map(({ geometry, properties }) => ({ properties, geometry: geometry && toMetres(geometry, crs, heights) }));
  const notes = heights.count > 0 ? [...raw.notes, `${source}: the heights of ${heights.count} positions are not used.`] : raw.notes;
  return { source, crs, features, rows: features.length, notes };
}

function crsOf(raw: RawVector, { stated, crsKey, source }: { stated: Crs | null; crsKey: string; source: string }): Crs {
  if (raw.crs && stated && raw.crs.epsg !== stated.epsg) {
    throw new UserError({
      code: 'key_invalid', where: `crs stated for ${source}`, found: `${stated.code} (${stated.name})`, wanted: `${raw.crs.code} (${raw.crs.name}), which the file itself names`,
      advice: 'leave it out, or correct the file',
    });
  }
  const crs = raw.crs ?? stated ?? raw.formatCrs ?? null;
  if (crs) return crs;
  const box = boxOf(raw.features.find(({ geometry }) => geometry !== null)?.geometry ?? null);
  const degrees = box[0] >= -180 && box[2] <= 180 && box[1] >= -90 && box[3] <= 90;
  throw new UserError({
    code: 'crs_missing', where: source, wanted: 'one, since positions mean nothing without it',
    found: `no coordinate reference system; its first feature lies at ${box[0]}, ${box[1]}${degrees ? ', which looks like degrees' : ''}`,
    advice: `${extension(source) === 'shp' ? 'put its .prj file beside it, or ' : ''}name it in the survey file, as in "${crsKey}": "EPSG:2272"`,
  });
}

function toMetres(geometry: Geometry, crs: Crs, heights: { count: number }): Geometry {
  return mapPositions(geometry, position => {
    if (position.length > 2) heights.count++;
    return [position[0]! * crs.metresPerUnit, position[1]! * crs.metresPerUnit];
  });
}

/** Degrees in a projected CRS, and metres or swapped axes in a geographic one, are told by their numbers alone. */
function checkPlausible(features: readonly InputFeature[], crs: Crs, source: string): void {
  const box = emptyBox();
  let first: { readonly place: Box; readonly where: string } | null = null;
  for (const [index, { geometry }] of features.entries()) {
    if (!geometry) continue;
    const place = boxOf(geometry);
    const where = `${source}, feature ${index + 1}`;
    if (crs.kind === 'geographic') checkDegrees(geometry, crs, where);
    first ??= { place, where };
    growBox(box, place[0], place[1]);
    growBox(box, place[2], place[3]);
  }
  if (first === null || crs.kind === 'geographic' || box[0] < -180 || box[1] < -90 || box[2] > 180 || box[3] > 90) return;
  throw new UserError({
    code: 'position_invalid', where: first.where, found: `${first.place[0]}, ${first.place[1]}, which looks like degrees`,
    wanted: `eastings and northings of ${crs.code} (${crs.name}), unit ${crs.unit}`, advice: 'correct the CRS that the file names',
  });
}

function checkDegrees(geometry: Geometry, crs: Crs, where: string): void {
  eachPosition(geometry, ([x, y]) => {
    if (Math.abs(x!) > 180 || Math.abs(y!) > 90) throw notDegrees([x!, y!], crs, where);
  });
}

function notDegrees([x, y]: readonly [number, number], crs: Crs, where: string): UserError {
  const swapped = Math.abs(x) <= 90 && Math.abs(y) <= 180;
  return new UserError({
    code: swapped ? 'coordinates_swapped' : 'position_invalid', where, found: `${x}, ${y}`, wanted: `longitude and latitude in degrees (${crs.name})`,
    advice: swapped ? 'longitude comes first; exchange the two' : 'name the CRS of these coordinates in the survey file, or reproject the file',
  });
}
