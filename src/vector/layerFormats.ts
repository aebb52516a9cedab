/** A file format that layers are written in. */
export interface LayerFormat {
  readonly id: 'geojson' | 'fgb' | 'gpkg' | 'shp';
  readonly title: string;
  readonly mediaType: string;
  /** Endings of its files; the first is the one that is opened. */
  readonly extensions: readonly string[];
  /** Whose coordinates: WGS 84 degrees, or those of the project's CRS in its own unit. */
  readonly coordinates: 'WGS 84' | 'project';
  /** Whether one file holds several layers. */
  readonly manyLayers: boolean;
}

/** The formats that layers can be written in; the first two always are. */
export const LAYER_FORMATS: readonly LayerFormat[] = [
  { id: 'geojson', title: 'GeoJSON (RFC 7946)', mediaType: 'application/geo+json', extensions: ['geojson'], coordinates: 'WGS 84', manyLayers: false },
  { id: 'fgb', title: 'FlatGeobuf with index', mediaType: 'application/vnd.flatgeobuf', extensions: ['fgb'], coordinates: 'project', manyLayers: false },
  { id: 'gpkg', title: 'GeoPackage', mediaType: 'application/geopackage+sqlite3', extensions: ['gpkg'], coordinates: 'project', manyLayers: true },
  { id: 'shp', title: 'Shapefile', mediaType: 'application/vnd.shp', extensions: ['shp', 'shx', 'dbf', 'prj', 'cpg'], coordinates: 'project', manyLayers: false },
];
