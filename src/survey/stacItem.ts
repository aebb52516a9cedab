import { areaBounds } from '../density/area.js';
import type { Site } from '../site/types.js';
import { orientRings } from '../vector/rings.js';
import { VERSION } from '../version.js';
import type { OutputTrace } from './provenance.js';

const STAC_VERSION = '1.1.0';
const EXTENSIONS = {
  projection: 'https://stac-extensions.github.io/projection/v2.0.0/schema.json',
  raster: 'https://stac-extensions.github.io/raster/v2.0.0/schema.json',
  processing: 'https://stac-extensions.github.io/processing/v1.2.0/schema.json',
  file: 'https://stac-extensions.github.io/file/v2.1.0/schema.json',
} as const;
/** Multihash prefix of a SHA-256: function 0x12, 0x20 bytes (multiformats). */
const SHA256_MULTIHASH = '1220';
/** Decimals of a degree in the item: 0.1 mm. */
const DEGREE_DECIMALS = 9;

export interface AssetTrace extends OutputTrace {
  readonly key: string;
  readonly title: string;
  readonly mediaType: string;
  readonly roles: readonly string[];
  /** Present for a raster. */
  readonly raster?: { readonly epsg: number; readonly width: number; readonly height: number; readonly west: number; readonly north: number; readonly cell: number; readonly unit: string; readonly statistics?: Readonly<Record<string, number>> };
  /** CRS of a vector layer or table (4326 for GeoJSON and GPX); absent for a file without coordinates. */
  readonly epsg?: number;
}

/** A STAC Item as the manifest of a run. Its time is that of the readings (or the stated date), never the clock's. */
export function stacItem(site: Site, assets: readonly AssetTrace[], { id, start, end, date, steps }: {
  id: string; start: string | null; end: string | null; date: string; steps: readonly { readonly id: string; readonly version: string }[];
}): Record<string, unknown> {
  const { frame } = site;
  const place = (x: number, y: number): [number, number] => {
    const { lonDeg, latDeg } = site.toWgs84.place(...frame.inverse(x, y));
    return [round(lonDeg), round(latDeg)];
  };
  const box = areaBounds(site.parcel);
  const polygons = site.parcel.map((rings) => orientRings(rings.map((ring) => ring.map(([x, y]) => place(x, y))), 'counter-clockwise'));
  const places = polygons.flat(2);
  const lons = places.map(([lon]) => lon!);
  const lats = places.map(([, lat]) => lat!);
  const hasRaster = assets.some(({ raster }) => raster);
  return {
    type: 'Feature',
    stac_version: STAC_VERSION,
    // The raster extension is valid only where one of its fields is used.
    stac_extensions: Object.values(EXTENSIONS).filter((url) => hasRaster || url !== EXTENSIONS.raster),
    id,
    geometry: polygons.length === 1 ? { type: 'Polygon', coordinates: polygons[0] } : { type: 'MultiPolygon', coordinates: polygons },
    bbox: [Math.min(...lons), Math.min(...lats), Math.max(...lons), Math.max(...lats)],
    properties: {
      title: site.title,
      ...timeOf(start, end, date),
      'proj:code': frame.code,
      'proj:bbox': [box.west, box.south, box.east, box.north].map((value) => value / frame.metresPerUnit),
      'processing:software': { ironplat: VERSION, ...Object.fromEntries(steps.map((step) => [`ironplat ${step.id}`, step.version])) },
    },
    links: [],
    assets: Object.fromEntries(assets.map((asset) => [asset.key, assetObject(asset)])),
  };
}

/** Start and end together, or one time; STAC takes neither end of a span without the other. */
function timeOf(start: string | null, end: string | null, date: string): Record<string, string | null> {
  if (start !== null && end !== null && start !== end) return { datetime: null, start_datetime: start, end_datetime: end };
  return { datetime: start ?? end ?? `${date}T00:00:00Z` };
}

function assetObject(asset: AssetTrace): Record<string, unknown> {
  const { raster } = asset;
  return {
    href: `./${asset.path}`,
    title: asset.title,
    type: asset.mediaType,
    roles: asset.roles,
    'file:size': asset.bytes,
    'file:checksum': `${SHA256_MULTIHASH}${asset.sha256}`,
    // The item's own code would hold for an asset that says nothing; null stands for a file without coordinates.
    'proj:code': asset.epsg === undefined ? null : `EPSG:${asset.epsg}`,
    ...(raster ? {
      'proj:code': `EPSG:${raster.epsg}`,
      'proj:shape': [raster.height, raster.width],
      'proj:transform': [raster.cell, 0, raster.west, 0, -raster.cell, raster.north, 0, 0, 1],
      bands: [{ data_type: 'float32', nodata: 'nan', 'raster:sampling': 'area', ...(raster.unit ? { unit: raster.unit } : {}), ...(raster.statistics ? { statistics: raster.statistics } : {}) }],
    } : {}),
  };
}

function round(degrees: number): number {
  return Number(degrees.toFixed(DEGREE_DECIMALS));
}
