import { ByteBuffer } from 'flatbuffers';
import { Feature as FeatureTable } from 'flatgeobuf/lib/mjs/flat-geobuf/feature.js';
import { GeometryType } from 'flatgeobuf/lib/mjs/flat-geobuf/geometry-type.js';
import { parseProperties } from 'flatgeobuf/lib/mjs/generic/feature.js';
import { fromGeometry } from 'flatgeobuf/lib/mjs/geojson/geometry.js';
import { fromByteBuffer, type HeaderMeta } from 'flatgeobuf/lib/mjs/header-meta.js';
import type { Geometry } from 'geojson';
import { UserError } from '../errors.js';
import { baseName, type FileSource } from '../files.js';
import { crs } from '../geodesy/crs.js';
import { crsFromWkt } from '../geodesy/crsFromWkt.js';
import type { Crs } from '../geodesy/types.js';
import { MAGIC } from './encodeFlatGeobuf.js';
import { levelStarts, NODE_BYTES } from './packedRTree.js';
import { propertyValues } from './propertyValues.js';
import type { InputFeature, RawVector } from './types.js';

/**
 * Reads every feature of a FlatGeobuf (version 3), in file order, past its index. Written over the package's tables,
 * since its own reader writes to the console and fails on a feature without a geometry.
 */
export async function readFlatGeobuf(path: string, files: FileSource): Promise<RawVector> {
  const source = baseName(path);
  const bytes = await files.read(path);
  if (bytes.length === 0) throw new UserError({ code: 'file_empty', where: source, found: 'no bytes', wanted: 'a FlatGeobuf file' });
  // The last byte is the patch version and may differ.
  if (!MAGIC.subarray(0, 7).every((byte, i) => bytes[i] === byte)) {
    throw new UserError({ code: 'file_unreadable', where: source, found: 'other first bytes than "fgb", 3, "fgb"', wanted: 'a FlatGeobuf file of version 3' });
  }
  const { header, features } = parse(bytes, source);
  return { crs: crsOf(header, source), features, notes: [] };
}

function parse(bytes: Uint8Array, source: string): { header: HeaderMeta; features: InputFeature[] } {
  const buffer = new ByteBuffer(bytes);
  try {
    let at = MAGIC.length + 4 + buffer.readUint32(MAGIC.length);
    if (!(at <= bytes.length)) throw new RangeError('its header is cut off');
    buffer.setPosition(MAGIC.length);
    const header = fromByteBuffer(buffer);
    // Node size and count rule out an index; a node size other than ours is allowed and changes its length.
    if (header.indexNodeSize > 0 && header.featuresCount > 0) at += levelStarts(header.featuresCount, header.indexNodeSize).at(-1)!.end * NODE_BYTES;
    if (at > bytes.length) throw new RangeError('its index is cut off');
    const features: InputFeature[] = [];
    while (at < bytes.length) {
      const length = buffer.readUint32(at) + 4;
      if (at + length > bytes.length) throw new RangeError('the last feature is cut off');
      // A copy of its own starts on a whole double; in the file a feature may lie anywhere, and its coordinates with it.
      features.push(featureOf(FeatureTable.getSizePrefixedRootAsFeature(new ByteBuffer(bytes.slice(at, at + length))), header));
      at += length;
    }
    if (header.featuresCount > 0 && features.length !== header.featuresCount) throw new RangeError(`${features.length} features, not ${header.featuresCount} as its header says`);
    return { header, features };
  } catch (error) {
    // Offsets that lead nowhere show as any of these; the file is at fault, whichever it is.
    if (!(error instanceof Error) || error instanceof UserError) throw error;
    throw new UserError({ code: 'file_unreadable', where: source, found: `a damaged file (${error.message})`, wanted: 'a whole FlatGeobuf file' });
  }
}

function featureOf(table: FeatureTable, header: HeaderMeta): InputFeature {
  if (table.columnsLength() > 0) throw new RangeError('columns that change from feature to feature');
  const stored = table.geometry();
  // An empty geometry has neither positions nor parts: no place, as for one that is not there.
  const shape = stored && stored.xyLength() + stored.partsLength() > 0 ? stored : null;
  const type = shape && (header.geometryType === GeometryType.Unknown ? shape.type() : header.geometryType);
  if (type !== null && type > GeometryType.GeometryCollection) throw new RangeError(`a geometry of type ${GeometryType[type]}`);
  return {
    geometry: shape && (fromGeometry(shape, header.geometryType) as Geometry),
    properties: propertyValues({ ...nulls(header), ...parseProperties(table, header.columns) }),
  };
}

/** A column without a value is left out of a feature, but it is a column of the file none the less. */
function nulls(header: HeaderMeta): Record<string, null> {
  return Object.fromEntries((header.columns ?? []).map(column => [column.name, null]));
}

function crsOf({ crs: table }: HeaderMeta, source: string): Crs | null {
  if (!table) return null;
  const where = `${source}, crs in its header`;
  if (table.code > 0 && (table.org === null || table.org.toUpperCase() === 'EPSG')) return crs(table.code, where);
  return table.wkt ? crsFromWkt(table.wkt, where) : null;
}
