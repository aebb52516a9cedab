import type { Crs } from '../geodesy/types.js';

/** The two tags that carry a CRS. */
export interface GeoKeys {
  /** GeoKeyDirectoryTag: four shorts of header, then four a key. */
  readonly directory: readonly number[];
  /** GeoAsciiParamsTag, without its closing zero. */
  readonly ascii: string;
}

/** EPSG codes of units of measure. */
const UNIT_CODES: Readonly<Record<Crs['unit'], number>> = { metre: 9001, foot: 9002, 'US survey foot': 9003, degree: 9102 };

/** Key numbers. Source: OGC 19-008r4 (GeoTIFF 1.1), annex on GeoKey IDs. */
const GT_MODEL_TYPE = 1024;
const GT_RASTER_TYPE = 1025;
const GT_CITATION = 1026;
const GEODETIC_CRS = 2048;
const ANGULAR_UNITS = 2054;
const PROJECTED_CRS = 3072;
const LINEAR_UNITS = 3076;

const ASCII_PARAMS_TAG = 34737;

/** GeoKeys of a registry CRS: its EPSG code, its own unit, its name as citation; a cell is an area. */
export function geoKeys(crs: Crs): GeoKeys {
  const ascii = `${crs.name.replace(/[^\x20-\x7b\x7d\x7e]/g, '?')}|`;
  const projected = crs.kind === 'projected';
  const keys = [
    [GT_MODEL_TYPE, 0, 1, projected ? 1 : 2],
    [GT_RASTER_TYPE, 0, 1, 1],
    [GT_CITATION, ASCII_PARAMS_TAG, ascii.length, 0],
    ...(projected
      ? [[PROJECTED_CRS, 0, 1, crs.epsg], [LINEAR_UNITS, 0, 1, UNIT_CODES[crs.unit]]]
      : [[GEODETIC_CRS, 0, 1, crs.epsg], [ANGULAR_UNITS, 0, 1, UNIT_CODES[crs.unit]]]),
  ];
  return { directory: [1, 1, 1, keys.length, ...keys.flat()], ascii };
}
