import type { Geometry } from 'geojson';
import { UserError } from '../errors.js';
import { baseName, type FileSource } from '../files.js';
import { crs } from '../geodesy/crs.js';
import type { Crs } from '../geodesy/types.js';
import { propertyValues } from './propertyValues.js';
import type { InputFeature, RawVector } from './types.js';

const WGS84 = 'EPSG:4326';

/**
 * Reads a FeatureCollection, a Feature or a bare geometry. Coordinates are WGS 84, longitude first (RFC 7946), unless the
 * `crs` member of the 2008 format names another system; it is honoured or refused, never passed over.
 */
export async function readGeoJson(path: string, files: FileSource): Promise<RawVector> {
  const source = baseName(path);
  const document = parse(await files.read(path), source);
  const features = featuresOf(document, source);
  return 'crs' in document ? { crs: crsMember(document.crs, source), features, notes: [] } : { crs: null, formatCrs: crs(WGS84), features, notes: [] };
}

interface Json { readonly [key: string]: unknown }

function isJson(value: unknown): value is Json {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function parse(bytes: Uint8Array, source: string): Json {
  let text: string;
  try {
    text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw new UserError({ code: 'file_unreadable', where: source, found: 'bytes that are not UTF-8', wanted: 'GeoJSON in UTF-8 (RFC 8259)' });
  }
  if (text.trim() === '') throw new UserError({ code: 'file_empty', where: source, found: 'no text', wanted: 'GeoJSON' });
  try {
    const document: unknown = JSON.parse(text);
    if (isJson(document)) return document;
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    throw new UserError({ code: 'file_unreadable', where: source, found: `text that is no JSON (${error.message})`, wanted: 'GeoJSON' });
  }
  throw notGeoJson(source, 'JSON that is no object');
}

function featuresOf(document: Json, source: string): InputFeature[] {
  if (document.type === 'FeatureCollection') {
    if (!Array.isArray(document.features)) throw notGeoJson(source, 'a FeatureCollection without features');
    return document.features.map((feature: unknown, index) => featureOf(feature, `${source}, feature ${index + 1}`));
  }
  if (document.type === 'Feature') return [featureOf(document, `${source}, feature 1`)];
  if ('coordinates' in document || 'geometries' in document) return [{ geometry: document as unknown as Geometry, properties: {} }];
  throw notGeoJson(source, `the type ${JSON.stringify(document.type) ?? 'nothing'}`);
}

function featureOf(feature: unknown, where: string): InputFeature {
  if (!isJson(feature) || feature.type !== 'Feature') throw notGeoJson(where, 'something that is no Feature');
  const { geometry = null, properties } = feature;
  if (geometry !== null && !isJson(geometry)) throw notGeoJson(where, `the geometry ${JSON.stringify(geometry)}`);
  return { geometry: geometry as Geometry | null, properties: isJson(properties) ? propertyValues(properties) : {} };
}

function crsMember(member: unknown, source: string): Crs | null {
  // The 2008 format: null says that no system can be assumed.
  if (member === null) return null;
  const where = `${source}, member crs`;
  const name = isJson(member) && member.type === 'name' && isJson(member.properties) ? member.properties.name : undefined;
  if (typeof name !== 'string') {
    throw new UserError({ code: 'crs_unknown', where, found: JSON.stringify(member), wanted: 'a named system, as in {"type": "name", "properties": {"name": "urn:ogc:def:crs:EPSG::2272"}}' });
  }
  return /(?:^|:)CRS84$/i.test(name) ? crs(WGS84) : crs(name, where);
}

function notGeoJson(where: string, found: string): UserError {
  return new UserError({ code: 'file_unreadable', where, found, wanted: 'a GeoJSON FeatureCollection, Feature or geometry (RFC 7946)' });
}
