import { fromArrayBuffer, type GeoTIFFImage } from 'geotiff';
import { UserError } from '../errors.js';
import { type GridNaming, gridAccuracy, gridDatum } from './gridIdentity.js';
import { shiftGrid, type OffsetTable } from './offsetTables.js';
import type { ShiftGrid } from './types.js';

const DEG_PER_UNIT: Readonly<Record<string, number>> = { 'arc-second': 1 / 3600, degree: 1, radian: 180 / Math.PI };
/** Bit 0 of NewSubfileType: a reduced copy of another image, not a grid of its own. */
const REDUCED_IMAGE = 1;

export function isTiff(bytes: Uint8Array): boolean {
  const mark = (bytes[0] === 0x49 && bytes[1] === 0x49) || (bytes[0] === 0x4d && bytes[1] === 0x4d);
  return mark && (bytes[2] === 42 || bytes[3] === 42 || bytes[2] === 43 || bytes[3] === 43);
}

/**
 * Reads a horizontal shift grid in GeoTIFF: bands found by their description (`latitude_offset`, `longitude_offset`),
 * with the unit and the direction that their metadata state; further images are finer tables.
 * Source: PROJ, "Geodetic TIFF grids (GTG)" specification.
 */
export async function readGeotiffGrid(name: string, bytes: Uint8Array, { label, datums }: GridNaming): Promise<ShiftGrid> {
  try {
    return await readImages(name, bytes, { label, datums });
  } catch (error) {
    if (error instanceof UserError) throw error;
    // The library meets a damaged file with errors of many kinds, all of them the file's fault.
    throw unusable(name, `a TIFF that cannot be read (${error instanceof Error ? error.message : String(error)})`);
  }
}

async function readImages(name: string, bytes: Uint8Array, { label, datums }: GridNaming): Promise<ShiftGrid> {
  // A copy, since a Buffer may be a window of a larger one.
  const tiff = await fromArrayBuffer(new Uint8Array(bytes).buffer);
  const count = await tiff.getImageCount();
  const first = await tiff.getImage(0);
  const meta = await metadata(first, null);
  if (meta['TYPE'] !== 'HORIZONTAL_OFFSET') throw unusable(name, `a GeoTIFF of type ${JSON.stringify(meta['TYPE'] ?? null)}`);
  const tables: OffsetTable[] = [];
  let channels: Channels | null = null;
  for (let index = 0; index < count; index++) {
    const image = await tiff.getImage(index);
    if ((Number(image.fileDirectory.getValue('NewSubfileType') ?? 0) & REDUCED_IMAGE) !== 0) continue;
    // Later images may leave out what the first one says, or hold something else (accuracies), which is passed over.
    const own: Channels | 'undescribed' | 'other' = await readChannels(name, image);
    if (own === 'other' || (own === 'undescribed' && channels === null)) continue;
    channels = own === 'undescribed' ? channels : own;
    tables.push(await readTable(name, image, channels!));
  }
  if (tables.length === 0) throw unusable(name, 'bands that are not described as latitude_offset and longitude_offset');
  const source = first.getGeoKeys()?.GeographicTypeGeoKey as number | undefined;
  const target = meta['target_crs_epsg_code'];
  if (datums === undefined && (source === undefined || target === undefined)) throw unusable(name, 'a grid that does not say between which datums it leads');
  return shiftGrid({
    name: label, from: datums?.from ?? gridDatum(`EPSG:${source}`), to: datums?.to ?? gridDatum(`EPSG:${target}`),
    ...gridAccuracy(name, meta['area_of_use'] ?? ''),
  }, tables);
}

/** Where an offset is, and how its raw value becomes degrees, positive east or north: base + scale × raw. */
interface Channel {
  readonly band: number;
  readonly base: number;
  readonly scale: number;
}

interface Channels {
  readonly lon: Channel;
  readonly lat: Channel;
}

async function readChannels(name: string, image: GeoTIFFImage): Promise<Channels | 'undescribed' | 'other'> {
  const found = new Map<string, Channel>();
  let described = false;
  for (let band = 0; band < image.getSamplesPerPixel(); band++) {
    const meta = await metadata(image, band);
    const what = meta['DESCRIPTION'];
    described ||= what !== undefined;
    if (what !== 'latitude_offset' && what !== 'longitude_offset') continue;
    const unit = DEG_PER_UNIT[meta['UNITTYPE'] ?? 'arc-second'];
    if (unit === undefined) throw unusable(name, `offsets in ${JSON.stringify(meta['UNITTYPE'])}`);
    const direction = meta['positive_value'] ?? 'east';
    if (what === 'longitude_offset' && direction !== 'east' && direction !== 'west') throw unusable(name, `longitude offsets positive to ${JSON.stringify(direction)}`);
    const toDeg = direction === 'west' ? -unit : unit;
    found.set(what, { band, base: Number(meta['OFFSET'] ?? 0) * toDeg, scale: Number(meta['SCALE'] ?? 1) * toDeg });
  }
  const [lon, lat] = [found.get('longitude_offset'), found.get('latitude_offset')];
  if (lon !== undefined && lat !== undefined) return { lon, lat };
  return described ? 'other' : 'undescribed';
}

async function readTable(name: string, image: GeoTIFFImage, { lon, lat }: Channels): Promise<OffsetTable> {
  const width = image.getWidth();
  const height = image.getHeight();
  const [west, north] = image.getOrigin() as [number, number];
  const [stepLonDeg, stepDown] = image.getResolution() as [number, number];
  const stepLatDeg = -stepDown;
  if (!(width > 1 && height > 1 && stepLonDeg > 0 && stepLatDeg > 0)) throw unusable(name, `${width} by ${height} nodes with steps of ${stepLonDeg} and ${stepLatDeg} degrees`);
  // Nodes are the pixels' centres unless the file says that its tie point is a node itself.
  const half = image.pixelIsArea() ? 0.5 : 0;
  const rasters = await image.readRasters({ samples: [lon.band, lat.band], interleave: false }) as unknown as ArrayLike<number>[];
  const noData = image.getGDALNoData();
  const southUp = (band: ArrayLike<number>, { base, scale }: Channel): Float64Array => {
    const out = new Float64Array(width * height);
    for (let row = 0; row < height; row++) {
      for (let column = 0; column < width; column++) {
        const value = band[(height - 1 - row) * width + column]!;
        out[row * width + column] = value === noData ? NaN : base + value * scale;
      }
    }
    return out;
  };
  return {
    west: west + half * stepLonDeg, south: north - (height - 1 + half) * stepLatDeg, stepLonDeg, stepLatDeg, width, height,
    dLonDeg: southUp(rasters[0]!, lon), dLatDeg: southUp(rasters[1]!, lat),
  };
}

async function metadata(image: GeoTIFFImage, band: number | null): Promise<Record<string, string | undefined>> {
  return (await image.getGDALMetadata(band) ?? {}) as Record<string, string | undefined>;
}

function unusable(name: string, found: string): UserError {
  return new UserError({ code: 'grid_file_invalid', where: name, found, wanted: 'a horizontal shift grid in GeoTIFF with its bands, units and datums described' });
}
