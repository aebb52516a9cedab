import { areaBounds } from '../density/area.js';
import type { Area } from '../density/types.js';
import type { Site } from '../site/types.js';
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
  /** Present for a vector layer or table in a CRS other than WGS 84. */
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
  const corners = [place(box.west, box.south), place(box.east, box.south), place(box.east, box.north), place(box.west, box.north)];
  const lons = corners.map(([lon]) => lon);
  const lats = corners.map(([, lat]) => lat);
  return {
    type: 'Feature',
    stac_version: STAC_VERSION,
    stac_extensions: Object.values(EXTENSIONS),
    id,
    geometry: multiPolygon(site.parcel, place),
    bbox: [Math.min(...lons), Math.min(...lats), Math.max(...lons), Math.max(...lats)],
    properties: {
      title: site.title,
      datetime: start === null ? `${date}T00:00:00Z` : start === end ? start : null,
      ...(start !== null && start !== end ? { start_datetime: start, end_datetime: end } : {}),
      'proj:code': frame.code,
      'proj:bbox': [box.west, box.south, box.east, box.north].map((value) => value / frame.metresPerUnit),
      'processing:software': { ironplat: VERSION, ...Object.fromEntries(steps.map((step) => [`ironplat ${step.id}`, step.version])) },
    },
    links: [],
    assets: Object.fromEntries(assets.map((asset) => [asset.key, assetObject(asset)])),
  };
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
    ...(asset.epsg !== undefined ? { 'proj:code': `EPSG:${asset.epsg}` } : {}),
    ...(raster ? {
      'proj:code': `EPSG:${raster.epsg}`,
      'proj:shape': [raster.height, raster.width],
      'proj:transform': [raster.cell, 0, raster.west, 0, -raster.cell, raster.north, 0, 0, 1],
      bands: [{ data_type: 'float32', nodata: 'nan', ...(raster.unit ? { unit: raster.unit } : {}), ...(raster.statistics ? { statistics: raster.statistics } : {}) }],
    } : {}),
  };
}

function multiPolygon(area: Area, place: (x: number, y: number) => [number, number]): unknown {
  const polygons = area.map((rings) => rings.map((ring) => ring.map(([x, y]) => place(x, y))));
  return polygons.length === 1 ? { type: 'Polygon', coordinates: polygons[0] } : { type: 'MultiPolygon', coordinates: polygons };
}

function round(degrees: number): number {
  return Number(degrees.toFixed(DEGREE_DECIMALS));
}
