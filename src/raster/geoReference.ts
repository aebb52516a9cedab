import { UserError } from '../errors.js';
import { crs } from '../geodesy/crs.js';
import type { Crs } from '../geodesy/types.js';
import { TAG } from './tiffTags.js';
import type { ReadDirectory } from './tiffDirectories.js';

const MODEL_TRANSFORMATION = 34264;
/** GeoKeys. Source: OGC 19-008r4 (GeoTIFF 1.1), annex on GeoKey IDs. */
const RASTER_TYPE = 1025;
const GEODETIC_CRS = 2048;
const PROJECTED_CRS = 3072;
const PIXEL_IS_POINT = 2;
const USER_DEFINED = 32767;

/** Two sides of a cell that differ by less than this share are equal but for rounding. */
const SQUARE_SHARE = 1e-6;

/** The CRS that a directory's GeoKeys name. */
export function systemOf(directory: ReadDirectory, where: string): Crs {
  const code = geoKey(directory, PROJECTED_CRS) ?? geoKey(directory, GEODETIC_CRS);
  if (code === undefined || code === 0 || code === USER_DEFINED) {
    throw new UserError({
      code: 'crs_missing', where, found: 'no EPSG code among its GeoKeys', wanted: 'a GeoTIFF whose coordinate system has an EPSG code',
      advice: 'write the code into the file, for example with gdal_edit -a_srs EPSG:2272',
    });
  }
  return crs(code, where);
}

/** Outer corner and side of the first cell, in the CRS's own unit. Cells that are points are moved by half a cell. */
export function placeOf(directory: ReadDirectory, where: string): { west: number; north: number; cell: number } {
  const invalid = (found: string): UserError => new UserError({ code: 'grid_file_invalid', where, found, wanted: 'a grid of square cells with north up' });
  const values = (id: number, count: number): readonly number[] | undefined => {
    const all = directory.tags.get(id)?.values;
    return all && all.length >= count && all.slice(0, count).every(Number.isFinite) ? all : undefined;
  };
  const tie = values(TAG.modelTiepoint, 6);
  const scale = values(TAG.modelPixelScale, 2);
  const matrix = values(MODEL_TRANSFORMATION, 16);
  let west: number;
  let north: number;
  let across: number;
  let down: number;
  if (tie && scale) {
    [across, down] = [scale[0]!, scale[1]!];
    [west, north] = [tie[3]! - tie[0]! * across, tie[4]! + tie[1]! * down];
  } else if (matrix) {
    if (matrix[1] !== 0 || matrix[4] !== 0) throw invalid('a rotated grid');
    [across, down, west, north] = [matrix[0]!, -matrix[5]!, matrix[3]!, matrix[7]!];
  } else throw invalid('no place of the grid on the ground');
  if (!(across > 0) || Math.abs(across - down) > SQUARE_SHARE * across) throw invalid(`cells of ${across} × ${down}`);
  const shift = geoKey(directory, RASTER_TYPE) === PIXEL_IS_POINT ? across / 2 : 0;
  return { west: west - shift, north: north + shift, cell: across };
}

/** A key whose value stands in the directory itself. */
function geoKey(directory: ReadDirectory, id: number): number | undefined {
  const keys = directory.tags.get(TAG.geoKeyDirectory)?.values ?? [];
  for (let at = 4; at + 3 < keys.length; at += 4) if (keys[at] === id && keys[at + 1] === 0) return keys[at + 3];
  return undefined;
}
