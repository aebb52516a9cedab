import type { Crs } from '../geodesy/types.js';
import { wktOf } from '../geodesy/wktOf.js';
import { cellValue } from './cellValue.js';
import { checkLayer } from './checkLayer.js';
import { geoPackageBlob } from './geoPackageBlob.js';
import { CORE_TABLES, rtreeTriggers } from './geoPackageSql.js';
import { boxOf, emptyBox, growBox, layerGeometry, mapPositions } from './layerGeometry.js';
import type { FieldType, Layer } from './types.js';

/** The part of an SQLite with R-tree that is used here, as `@sqlite.org/sqlite-wasm` has it; the caller hands it in. */
export interface Sqlite {
  readonly oo1: { readonly DB: new (name: string) => SqliteDatabase };
  readonly capi: { sqlite3_js_db_export(database: SqliteDatabase): Uint8Array };
}
export interface SqliteDatabase {
  exec(sql: string): unknown;
  prepare(sql: string): SqliteStatement;
  close(): void;
}
export interface SqliteStatement {
  bind(values: readonly (string | number | Uint8Array | null)[]): unknown;
  stepReset(): unknown;
  finalize(): unknown;
}

export interface GeoPackageOptions {
  /** Date of the last change of every layer, ISO 8601 in UTC with milliseconds. Fixed, since bytes must not hang on a clock. */
  readonly lastChange: string;
}
export const GEOPACKAGE_DEFAULTS: GeoPackageOptions = Object.freeze({ lastChange: '2000-01-01T00:00:00.000Z' });

const COLUMN_TYPES: Readonly<Record<FieldType, string>> = { text: 'TEXT', real: 'DOUBLE', integer: 'INTEGER' };
const GEOMETRY = 'geom';

/**
 * Layers as one GeoPackage 1.3: coordinates in each CRS's own units, `fid` from 1 in the layer's order, an R-tree with
 * its triggers for each layer, field titles in the schema extension. A feature without a place has a null geometry.
 * Source: OGC 12-128r17.
 */
export function encodeGeoPackage(layers: readonly Layer[], sqlite: Sqlite, options: Partial<GeoPackageOptions> = {}): Uint8Array {
  const { lastChange } = { ...GEOPACKAGE_DEFAULTS, ...options };
  for (const layer of layers) checkLayer(layer);
  const database = new sqlite.oo1.DB(':memory:');
  try {
    database.exec('BEGIN');
    database.exec(CORE_TABLES);
    writeSystems(database, layers.map(layer => layer.crs));
    for (const layer of layers) writeLayer(database, layer, lastChange);
    database.exec('COMMIT');
    return sqlite.capi.sqlite3_js_db_export(database);
  } finally {
    database.close();
  }
}

/** Runs one statement for each row of values. */
function insert(database: SqliteDatabase, sql: string, rows: Iterable<readonly (string | number | Uint8Array | null)[]>): void {
  const statement = database.prepare(sql);
  try {
    for (const row of rows) {
      statement.bind(row);
      statement.stepReset();
    }
  } finally {
    statement.finalize();
  }
}

function writeSystems(database: SqliteDatabase, systems: readonly Crs[]): void {
  const byCode = new Map(systems.map(crs => [crs.epsg, crs]));
  insert(database, 'INSERT INTO gpkg_spatial_ref_sys VALUES (?, ?, ?, ?, ?, ?)', [
    ['Undefined Cartesian SRS', -1, 'NONE', -1, 'undefined', 'undefined Cartesian coordinate reference system'],
    ['Undefined geographic SRS', 0, 'NONE', 0, 'undefined', 'undefined geographic coordinate reference system'],
    // The standard asks for WGS 84 in every file, whether a layer uses it or not.
    ...(byCode.has(4326) ? [] : [['WGS 84', 4326, 'EPSG', 4326, WGS84_WKT, 'longitude and latitude in degrees']]),
    ...[...byCode.values()].map(crs => [crs.name, crs.epsg, 'EPSG', crs.epsg, wktOf(crs), crs.name]),
  ]);
}

const WGS84_WKT = 'GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433],AUTHORITY["EPSG","4326"]]';

function writeLayer(database: SqliteDatabase, layer: Layer, lastChange: string): void {
  const unit = layer.crs.metresPerUnit;
  const shapes = layer.features.map(feature => {
    const geometry = layerGeometry(layer, feature);
    return geometry && mapPositions(geometry, ([x, y]) => [x! / unit, y! / unit]);
  });
  const boxes = shapes.map(boxOf);
  const extent = emptyBox();
  for (const box of boxes) {
    if (box[0] > box[2]) continue;
    growBox(extent, box[0], box[1]);
    growBox(extent, box[2], box[3]);
  }
  const bounds = extent[0] > extent[2] ? [null, null, null, null] : extent;
  const table = quoted(layer.name);
  const { name, title, crs, fields } = layer;
  database.exec(`CREATE TABLE ${table} (fid INTEGER PRIMARY KEY AUTOINCREMENT NOT NULL, ${GEOMETRY} ${layer.geometryType.toUpperCase()}${fields.map(field => `, ${quoted(field.name)} ${COLUMN_TYPES[field.type]}`).join('')})`);
  insert(database, 'INSERT INTO gpkg_contents VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)', [[name, 'features', name, title, lastChange, ...bounds, crs.epsg]]);
  insert(database, 'INSERT INTO gpkg_geometry_columns VALUES (?, ?, ?, ?, 0, 0)', [[name, GEOMETRY, layer.geometryType.toUpperCase(), crs.epsg]]);
  insert(database, 'INSERT INTO gpkg_data_columns (table_name, column_name, title) VALUES (?, ?, ?)', fields.map(field => [name, field.name, field.title]));
  insert(database, `INSERT INTO gpkg_extensions VALUES (?, ?, 'gpkg_rtree_index', 'http://www.geopackage.org/spec130/#extension_rtree', 'write-only')`, [[name, GEOMETRY]]);
  insert(database, `INSERT INTO ${table} VALUES (?, ?${', ?'.repeat(fields.length)})`, layer.features.map((feature, i) => {
    const shape = shapes[i]!;
    return [i + 1, shape && geoPackageBlob(shape, crs.epsg), ...fields.map(field => cellValue(field, feature))];
  }));
  const rtree = quoted(`rtree_${name}_${GEOMETRY}`);
  database.exec(`CREATE VIRTUAL TABLE ${rtree} USING rtree(id, minx, maxx, miny, maxy)`);
  insert(database, `INSERT INTO ${rtree} VALUES (?, ?, ?, ?, ?)`, boxes.flatMap(([west, south, east, north], i) => (west > east ? [] : [[i + 1, west, east, south, north]])));
  // After the rows: the triggers call functions that only a GeoPackage reader has.
  database.exec(rtreeTriggers(name, GEOMETRY));
}

function quoted(name: string): string {
  return `"${name.replaceAll('"', '""')}"`;
}
