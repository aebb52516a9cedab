import type { Position } from 'geojson';
import { cellValue } from './cellValue.js';
import { eachPosition, layerGeometry, pathsOf, polygonsOf } from './layerGeometry.js';
import type { Feature, Field, Layer } from './types.js';

/** The longest name that a dBASE file holds. */
const NAME_LENGTH = 10;
const NAME = /^[a-z][a-z0-9_]*$/;
/** Names that formats keep for themselves: the row number and the geometry column of GeoPackage. */
const RESERVED: ReadonlySet<string> = new Set(['fid', 'geom']);

/**
 * Checks a layer before it is written: names, values of their field's type, the layer's geometry type, finite
 * two-dimensional positions, closed rings. What it finds is a fault of the program that made the layer, hence no UserError.
 */
export function checkLayer(layer: Layer): void {
  if (layer.name === '') throw new Error('a layer without a name');
  const names = new Set<string>();
  for (const field of layer.fields) {
    checkField(field, layer.name);
    if (names.has(field.name)) throw new Error(`layer ${layer.name}: two fields are named ${field.name}`);
    names.add(field.name);
  }
  for (const [index, feature] of layer.features.entries()) {
    const where = `layer ${layer.name}, feature ${index + 1}`;
    for (const name of Object.keys(feature.values)) if (!names.has(name)) throw new Error(`${where}: ${name} is no field of the layer`);
    for (const field of layer.fields) checkValue(field, feature, where);
    checkGeometry(layer, feature, where);
  }
}

function checkField({ name, type, decimals }: Field, layer: string): void {
  if (name.length > NAME_LENGTH || !NAME.test(name) || RESERVED.has(name)) {
    throw new Error(`layer ${layer}: a field cannot be named ${name} (lower case, at most ${NAME_LENGTH} characters, none of ${[...RESERVED].join(', ')})`);
  }
  if (decimals !== undefined && (type !== 'real' || !Number.isInteger(decimals) || decimals < 0 || decimals > 15)) {
    throw new Error(`layer ${layer}: field ${name} of type ${type} with ${decimals} decimals`);
  }
}

function checkValue(field: Field, feature: Feature, where: string): void {
  const value = cellValue(field, feature);
  if (value === null) return;
  const fits = field.type === 'text' ? typeof value === 'string' : field.type === 'integer' ? Number.isSafeInteger(value) : Number.isFinite(value);
  if (!fits) throw new Error(`${where}: ${JSON.stringify(value) ?? String(value)} (${String(value)}) is no ${field.type} for ${field.name}`);
}

function checkGeometry(layer: Layer, feature: Feature, where: string): void {
  const geometry = layerGeometry(layer, feature);
  if (geometry === null) return;
  let count = 0;
  eachPosition(geometry, position => {
    count++;
    if (position.length !== 2 || !position.every(Number.isFinite)) throw new Error(`${where}: the position ${position.join(', ')}`);
  });
  if (count === 0) throw new Error(`${where}: a ${geometry.type} without positions (write null for no place)`);
  for (const rings of polygonsOf(geometry)) for (const ring of rings) checkRing(ring, where);
  for (const path of pathsOf(geometry)) if (path.length < 2) throw new Error(`${where}: a line of ${path.length} positions`);
}

function checkRing(ring: readonly Position[], where: string): void {
  const first = ring[0];
  const last = ring[ring.length - 1];
  if (ring.length < 4 || first![0] !== last![0] || first![1] !== last![1]) throw new Error(`${where}: a ring that is not closed, or of fewer than four positions`);
}
