import { fromArrayBuffer, type GeoTIFFImage } from 'geotiff';
import { UserError } from '../errors.js';
import { crs } from '../geodesy/crs.js';
import type { Crs } from '../geodesy/types.js';
import { readItem } from './gdalMetadata.js';
import type { Grid } from './types.js';

export interface GeoTiffContent {
  /** Metres in the CRS (degrees where it is geographic); nodata is NaN, scale and offset are applied. */
  readonly grid: Grid;
  readonly crs: Crs;
  readonly epsg: number;
  readonly description: string;
  /** Unit of the values as the file states it; empty where it states none. */
  readonly unit: string;
  /** Number of overviews in the file. */
  readonly overviews: number;
}

/** Two sides of a cell that differ by less than this share are equal but for rounding. */
const SQUARE_SHARE = 1e-6;
const PIXEL_IS_POINT = 2;

/**
 * The first band of a GeoTIFF at full resolution as a Grid. Throws UserError where the file is no GeoTIFF, has no EPSG
 * code, is rotated, or has cells that are not square. `source` names the file in messages.
 */
export async function readGeoTiff(bytes: Uint8Array, source = 'GeoTIFF'): Promise<GeoTiffContent> {
  const { image, images } = await open(bytes, source);
  const system = systemOf(image, source);
  const { west, north, cell } = placeOf(image, source);
  const metadata: Record<string, unknown> = await image.getGDALMetadata(0) ?? {};
  const metres = system.metresPerUnit;
  return {
    grid: {
      width: image.getWidth(), height: image.getHeight(), west: west * metres, north: north * metres, cellM: cell * metres,
      values: await cellsOf(image, numberOr(metadata['SCALE'], 1), numberOr(metadata['OFFSET'], 0)),
    },
    crs: system,
    epsg: system.epsg,
    description: textOr(metadata['DESCRIPTION'], ''),
    unit: textOr(metadata['UNITTYPE'], ''),
    overviews: images - 1,
  };
}

async function open(bytes: Uint8Array, source: string): Promise<{ image: GeoTIFFImage; images: number }> {
  try {
    const tiff = await fromArrayBuffer(bytes.slice().buffer);
    return { image: await tiff.getImage(), images: await tiff.getImageCount() };
  } catch (problem) {
    throw new UserError({
      code: 'grid_file_invalid', where: source, found: `a file that does not open as a TIFF (${problem instanceof Error ? problem.message : String(problem)})`,
      wanted: 'a GeoTIFF',
    });
  }
}

function systemOf(image: GeoTIFFImage, source: string): Crs {
  const keys = image.getGeoKeys();
  const code: unknown = keys?.ProjectedCSTypeGeoKey ?? keys?.GeographicTypeGeoKey;
  if (typeof code !== 'number' || code === 0 || code === 32767) {
    throw new UserError({
      code: 'crs_missing', where: source, found: 'no EPSG code among its GeoKeys', wanted: 'a GeoTIFF whose coordinate system has an EPSG code',
      advice: 'write the code into the file, for example with gdal_edit -a_srs EPSG:2272',
    });
  }
  return crs(code, source);
}

function placeOf(image: GeoTIFFImage, source: string): { west: number; north: number; cell: number } {
  const invalid = (found: string): UserError => new UserError({
    code: 'grid_file_invalid', where: source, found, wanted: 'a grid of square cells with north up',
  });
  const directory = image.getFileDirectory();
  const matrix: ArrayLike<number> | undefined = directory.getValue('ModelTransformation');
  if (matrix && (matrix[1] !== 0 || matrix[4] !== 0)) throw invalid('a rotated grid');
  let west: number;
  let north: number;
  let across: number;
  let down: number;
  try {
    [across, down] = image.getResolution() as [number, number];
    [west, north] = image.getOrigin() as [number, number];
  } catch {
    // geotiff throws where neither a tie point with a scale nor a matrix is there: the file says nowhere where it lies.
    throw invalid('no place of the grid on the ground');
  }
  if (!(across > 0) || Math.abs(across + down) > SQUARE_SHARE * across) throw invalid(`cells of ${across} × ${-down}`);
  const shift = image.getGeoKeys()?.GTRasterTypeGeoKey === PIXEL_IS_POINT ? across / 2 : 0;
  return { west: west - shift, north: north + shift, cell: across };
}

async function cellsOf(image: GeoTIFFImage, scale: number, offset: number): Promise<Float32Array | Float64Array> {
  const [band] = await image.readRasters({ samples: [0] });
  const nodata = image.getGDALNoData();
  const plain = band instanceof Float32Array && scale === 1 && offset === 0;
  const values = plain ? new Float32Array(band) : Float64Array.from(band as ArrayLike<number>);
  const absent = nodata === null ? NaN : plain ? Math.fround(nodata) : nodata;
  for (let i = 0; i < values.length; i += 1) {
    values[i] = values[i] === absent ? NaN : values[i]! * scale + offset;
  }
  return values;
}

function numberOr(value: unknown, otherwise: number): number {
  const number = Number(value ?? NaN);
  return Number.isFinite(number) ? number : otherwise;
}

/** geotiff hands on the text of an item as it stands in the XML. */
function textOr(value: unknown, otherwise: string): string {
  return typeof value === 'string' ? readItem(value) : otherwise;
}
