import type { Site } from '../site/types.js';
import { encodeFlatGeobuf } from '../vector/encodeFlatGeobuf.js';
import { encodeGeoJson } from '../vector/encodeGeoJson.js';
import { encodeGeoPackage } from '../vector/encodeGeoPackage.js';
import { encodeShapefile } from '../vector/encodeShapefile.js';
import { LAYER_FORMATS, type LayerFormat } from '../vector/layerFormats.js';
import type { Layer } from '../vector/types.js';
import type { Delivered } from './deliver.js';
import type { Host } from './host.js';

/** Formats that are written when asked for, besides GeoJSON and FlatGeobuf, which always are. */
export const VECTOR_FORMATS = ['gpkg', 'shp'] as const;
export type VectorFormat = (typeof VECTOR_FORMATS)[number];

/** Files beside a .shp have no media type of their own. */
const COMPANION = 'application/octet-stream';

/** A role's layers in every format asked for. */
export async function layerFiles(layers: readonly Layer[], { role, site, host, formats }: {
  role: string; site: Site; host: Host; formats: readonly VectorFormat[];
}): Promise<Delivered[]> {
  const out: Delivered[] = [];
  const toWgs84 = (lonDeg: number, latDeg: number): [number, number] => {
    const there = site.toWgs84.place(lonDeg, latDeg);
    return [there.lonDeg, there.latDeg];
  };
  for (const layer of layers) {
    const add = (key: string, path: string, rest: { mediaType: string; content: Uint8Array; epsg?: number }): void => {
      out.push({ key, path, title: layer.title, roles: [role], ...rest });
    };
    add(layer.name, `${layer.name}.geojson`, { mediaType: mediaTypeOf('geojson'), content: encodeGeoJson(layer, { toWgs84 }), epsg: 4326 });
    add(`${layer.name}_fgb`, `${layer.name}.fgb`, { mediaType: mediaTypeOf('fgb'), content: encodeFlatGeobuf(layer), epsg: layer.crs.epsg });
    if (formats.includes('shp')) {
      for (const [ending, content] of Object.entries(encodeShapefile(layer))) {
        add(`${layer.name}_${ending}`, `${layer.name}.${ending}`, { mediaType: ending === 'shp' ? mediaTypeOf('shp') : COMPANION, content, epsg: layer.crs.epsg });
      }
    }
  }
  if (formats.includes('gpkg')) {
    if (!host.sqlite) throw new Error('GeoPackage needs an SQLite from the host');
    const content = encodeGeoPackage(layers, await host.sqlite() as Parameters<typeof encodeGeoPackage>[1]);
    out.push({ key: `${role}_gpkg`, path: `${role}.gpkg`, title: layers[0]!.title, mediaType: mediaTypeOf('gpkg'), roles: [role], epsg: site.frame.epsg, content });
  }
  return out;
}

function mediaTypeOf(id: LayerFormat['id']): string {
  return LAYER_FORMATS.find((format) => format.id === id)!.mediaType;
}
