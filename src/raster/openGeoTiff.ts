import { UserError } from '../errors.js';
import type { Bounds, Crs } from '../geodesy/types.js';
import { bandMetadata, nodataOf } from './bandMetadata.js';
import type { ByteSource } from './byteStores.js';
import { inflatePlainly, type Inflate } from './decompress.js';
import type { BandMetadata } from './gdalMetadata.js';
import { placeOf, systemOf } from './geoReference.js';
import { readTiles, type CellWindow } from './readTiles.js';
import { fetchTiffDirectories, type ReadDirectory } from './tiffDirectories.js';
import { tiffImage, type TiffImage } from './tiffImage.js';
import { TAG } from './tiffTags.js';
import type { GridPlace } from './types.js';

export interface GeoTiffOptions {
  /** Names the file in messages. */
  readonly where?: string;
  /** Undoes DEFLATE; the caller may have a faster way than the one that comes along. */
  readonly inflate?: Inflate;
}

export const GEOTIFF_DEFAULTS = Object.freeze({ where: 'GeoTIFF', inflate: inflatePlainly });

/** An image of the file: the grid itself, or an overview of it over the same ground. Metres; degrees where the CRS is geographic. */
export interface GeoTiffLevel {
  readonly width: number;
  readonly height: number;
  readonly cellWidthM: number;
  readonly cellHeightM: number;
}

/** Cells of a level, as in a Grid; those of an overview of an odd size are not quite square. */
export interface RasterWindow extends GeoTiffLevel {
  readonly west: number;
  readonly north: number;
  /** 32-bit where the file keeps 32-bit floats, else 64-bit; nodata is NaN, scale and offset are applied. */
  readonly values: Float32Array | Float64Array;
}

export interface GeoTiff extends GridPlace {
  readonly crs: Crs;
  /** As the file states it; description and unit are empty where it says nothing, statistics null. */
  readonly band: BandMetadata;
  /** The full image first, then overviews large to small. */
  readonly levels: readonly GeoTiffLevel[];
  /** A window within a level, in that level's cells. */
  readWindow(window: CellWindow, level?: number): Promise<RasterWindow>;
  /** All cells of a level that the bounds (metres) touch; throws UserError `outside_area` where there is none. */
  readBounds(bounds: Bounds, level?: number): Promise<RasterWindow>;
}

const REDUCED = 1;
const MASK = 4;

/**
 * The first band of a GeoTIFF of any size, read in windows: only the directories are fetched, then the tiles that a
 * window touches. Throws UserError where the file is no GeoTIFF, is broken, has no EPSG code, is rotated, or has cells
 * that are not square.
 */
export async function openGeoTiff(source: ByteSource, options: GeoTiffOptions = {}): Promise<GeoTiff> {
  const { where, inflate } = { ...GEOTIFF_DEFAULTS, ...options };
  const tiff = await fetchTiffDirectories(source);
  const first = tiff.directories[0];
  if (!first || tiff.faults.length > 0) {
    throw new UserError({ code: 'grid_file_invalid', where, found: `a file that does not open as a TIFF (${tiff.faults.join('; ')})`, wanted: 'a GeoTIFF' });
  }
  const system = systemOf(first, where);
  const place = placeOf(first, where);
  const metres = system.metresPerUnit;
  const images = pyramid(tiff.directories).map((directory) => tiffImage(directory, tiff.littleEndian, where));
  const full = images[0]!;
  const [west, north, cellM] = [place.west * metres, place.north * metres, place.cell * metres];
  const levels = images.map(({ width, height }): GeoTiffLevel => ({ width, height, cellWidthM: (cellM * full.width) / width, cellHeightM: (cellM * full.height) / height }));
  const band = bandMetadata(first);
  const nodata = nodataOf(first, where);

  async function readWindow(window: CellWindow, level = 0): Promise<RasterWindow> {
    const image = images[level];
    const { column, row, width, height } = window;
    const inside = image && column >= 0 && row >= 0 && width > 0 && height > 0 && column + width <= image.width && row + height <= image.height;
    if (!inside || ![column, row, width, height].every(Number.isInteger)) throw new RangeError(`No window of ${width} × ${height} cells at ${column}, ${row} in level ${level}`);
    const values = emptyValues(image, { cells: width * height, band, where });
    const { scale, offset } = band;
    // Without a scale a number is kept as it is: minus zero plus zero would be zero.
    const valueOf = scale === 1 && offset === 0 ? (stored: number) => stored : (stored: number) => stored * scale + offset;
    const absent = values instanceof Float32Array ? Math.fround(nodata) : nodata;
    await readTiles(image, window, { source, inflate, where, take: (stored, to) => { if (stored !== absent) values[to] = valueOf(stored); } });
    const { cellWidthM, cellHeightM } = levels[level]!;
    return { width, height, west: west + column * cellWidthM, north: north - row * cellHeightM, cellWidthM, cellHeightM, values };
  }

  async function readBounds(bounds: Bounds, level = 0): Promise<RasterWindow> {
    const size = levels[level];
    if (!size) throw new RangeError(`The file has no level ${level}`);
    const column = Math.max(0, Math.floor((bounds.west - west) / size.cellWidthM));
    const row = Math.max(0, Math.floor((north - bounds.north) / size.cellHeightM));
    const width = Math.min(size.width, Math.ceil((bounds.east - west) / size.cellWidthM)) - column;
    const height = Math.min(size.height, Math.ceil((north - bounds.south) / size.cellHeightM)) - row;
    if (!(width > 0 && height > 0)) {
      throw new UserError({ code: 'outside_area', where, found: `bounds ${bounds.west} to ${bounds.east} m east, ${bounds.south} to ${bounds.north} m north, beside the grid`, wanted: 'bounds that overlap it' });
    }
    return readWindow({ column, row, width, height }, level);
  }

  return { width: full.width, height: full.height, west, north, cellM, crs: system, band, levels, readWindow, readBounds };
}

/** The first full-resolution image with the overviews that follow it. */
function pyramid(directories: readonly ReadDirectory[]): ReadDirectory[] {
  const kind = (directory: ReadDirectory): number => directory.tags.get(TAG.newSubfileType)?.values[0] ?? 0;
  const images = directories.filter((directory) => (kind(directory) & MASK) === 0);
  const next = images.findIndex((directory, i) => i > 0 && (kind(directory) & REDUCED) === 0);
  return images.length === 0 ? directories.slice(0, 1) : images.slice(0, next < 0 ? images.length : next);
}

function emptyValues(image: TiffImage, { cells, band, where }: { cells: number; band: BandMetadata; where: string }): Float32Array | Float64Array {
  const plain = image.sample.bits === 32 && image.sample.format === 3 && band.scale === 1 && band.offset === 0;
  try {
    return plain ? new Float32Array(cells).fill(NaN) : new Float64Array(cells).fill(NaN);
  } catch (problem) {
    if (!(problem instanceof RangeError)) throw problem;
    throw new UserError({ code: 'grid_file_invalid', where, found: `${cells} cells`, wanted: 'a grid that fits into memory', advice: 'read it in windows' });
  }
}
