/** 'GPKG' in ASCII, and version 1.3.0. */
const APPLICATION_ID = 0x47504b47;
const USER_VERSION = 10300;
const SCHEMA_DEFINITION = 'http://www.geopackage.org/spec130/#extension_schema';

/** The tables that every GeoPackage has, with those of the schema extension. Source: OGC 12-128r17, annex C and F.9. */
export const CORE_TABLES = `
PRAGMA application_id = ${APPLICATION_ID};
PRAGMA user_version = ${USER_VERSION};
CREATE TABLE gpkg_spatial_ref_sys (
  srs_name TEXT NOT NULL, srs_id INTEGER NOT NULL PRIMARY KEY, organization TEXT NOT NULL, organization_coordsys_id INTEGER NOT NULL,
  definition TEXT NOT NULL, description TEXT);
CREATE TABLE gpkg_contents (
  table_name TEXT NOT NULL PRIMARY KEY, data_type TEXT NOT NULL, identifier TEXT UNIQUE, description TEXT DEFAULT '',
  last_change DATETIME NOT NULL DEFAULT (strftime('%Y-%m-%dT%H:%M:%fZ','now')),
  min_x DOUBLE, min_y DOUBLE, max_x DOUBLE, max_y DOUBLE, srs_id INTEGER,
  CONSTRAINT fk_gc_r_srs_id FOREIGN KEY (srs_id) REFERENCES gpkg_spatial_ref_sys(srs_id));
CREATE TABLE gpkg_geometry_columns (
  table_name TEXT NOT NULL, column_name TEXT NOT NULL, geometry_type_name TEXT NOT NULL, srs_id INTEGER NOT NULL, z TINYINT NOT NULL, m TINYINT NOT NULL,
  CONSTRAINT pk_geom_cols PRIMARY KEY (table_name, column_name), CONSTRAINT uk_gc_table_name UNIQUE (table_name),
  CONSTRAINT fk_gc_tn FOREIGN KEY (table_name) REFERENCES gpkg_contents(table_name),
  CONSTRAINT fk_gc_srs FOREIGN KEY (srs_id) REFERENCES gpkg_spatial_ref_sys(srs_id));
CREATE TABLE gpkg_extensions (
  table_name TEXT, column_name TEXT, extension_name TEXT NOT NULL, definition TEXT NOT NULL, scope TEXT NOT NULL,
  CONSTRAINT ge_tce UNIQUE (table_name, column_name, extension_name));
CREATE TABLE gpkg_data_columns (
  table_name TEXT NOT NULL, column_name TEXT NOT NULL, name TEXT, title TEXT, description TEXT, mime_type TEXT, constraint_name TEXT,
  CONSTRAINT pk_gdc PRIMARY KEY (table_name, column_name), CONSTRAINT gdc_tn UNIQUE (table_name, name));
CREATE TABLE gpkg_data_column_constraints (
  constraint_name TEXT NOT NULL, constraint_type TEXT NOT NULL, value TEXT, min NUMERIC, min_is_inclusive BOOLEAN, max NUMERIC, max_is_inclusive BOOLEAN, description TEXT,
  CONSTRAINT gdcc_ntv UNIQUE (constraint_name, constraint_type, value));
INSERT INTO gpkg_extensions VALUES
  ('gpkg_data_columns', NULL, 'gpkg_schema', '${SCHEMA_DEFINITION}', 'read-write'),
  ('gpkg_data_column_constraints', NULL, 'gpkg_schema', '${SCHEMA_DEFINITION}', 'read-write');
`;

/**
 * The triggers that keep a layer's R-tree true when somebody edits it later: inserts, updates of the geometry or of the
 * row number, deletions. Without them the index of an edited file would lie. Source: OGC 12-128r17, annex F.3.
 */
export function rtreeTriggers(table: string, column: string): string {
  const [t, c, r] = [table, column, `rtree_${table}_${column}`].map(quoted);
  const trigger = (name: string, rest: string): string => `CREATE TRIGGER ${quoted(`rtree_${table}_${column}_${name}`)} AFTER ${rest}; END;`;
  const put = `INSERT OR REPLACE INTO ${r} VALUES (NEW.fid, ST_MinX(NEW.${c}), ST_MaxX(NEW.${c}), ST_MinY(NEW.${c}), ST_MaxY(NEW.${c}))`;
  const there = `(NEW.${c} NOTNULL AND NOT ST_IsEmpty(NEW.${c}))`;
  const gone = `(NEW.${c} ISNULL OR ST_IsEmpty(NEW.${c}))`;
  const drop = `DELETE FROM ${r} WHERE id = OLD.fid`;
  return [
    trigger('insert', `INSERT ON ${t} WHEN ${there} BEGIN ${put}`),
    trigger('update1', `UPDATE OF ${c} ON ${t} WHEN OLD.fid = NEW.fid AND ${there} BEGIN ${put}`),
    trigger('update2', `UPDATE OF ${c} ON ${t} WHEN OLD.fid = NEW.fid AND ${gone} BEGIN ${drop}`),
    trigger('update3', `UPDATE ON ${t} WHEN OLD.fid != NEW.fid AND ${there} BEGIN ${drop}; ${put}`),
    trigger('update4', `UPDATE ON ${t} WHEN OLD.fid != NEW.fid AND ${gone} BEGIN DELETE FROM ${r} WHERE id IN (OLD.fid, NEW.fid)`),
    trigger('delete', `DELETE ON ${t} WHEN OLD.${c} NOT NULL BEGIN ${drop}`),
  ].join('\n');
}

function quoted(name: string): string {
  return `"${name.replaceAll('"', '""')}"`;
}
