import { checkGhostArea } from './checkGhostArea.js';
import { readTiffDirectories, type ReadDirectory, type ReadTiff } from './tiffDirectories.js';

/** Tag numbers, stated again and not taken from the writer: a check that shares the writer's mistakes finds none of them. */
const NEW_SUBFILE_TYPE = 254;
const IMAGE_WIDTH = 256;
const IMAGE_LENGTH = 257;
const BITS_PER_SAMPLE = 258;
const COMPRESSION = 259;
const NOT_COMPRESSED = 1;
const PHOTOMETRIC = 262;
const STRIP_OFFSETS = 273;
const SAMPLES_PER_PIXEL = 277;
const PLANAR_CONFIGURATION = 284;
const TILE_WIDTH = 322;
const TILE_LENGTH = 323;
const TILE_OFFSETS = 324;
const TILE_BYTE_COUNTS = 325;
const SAMPLE_FORMAT = 339;
const MODEL_PIXEL_SCALE = 33550;
const MODEL_TIEPOINT = 33922;
const GEO_KEY_DIRECTORY = 34735;

/** TIFF 6.0, section 15. */
const TILE_MULTIPLE = 16;
/** The largest tile side that the standard's note names as common. */
const LARGEST_TILE = 1024;
/** Requirement number, A. */
const LARGEST_STEP = 10;
const CLASSIC_LIMIT_BYTES = 2 ** 32 - 1;
/** An origin that moved by less than this share of a cell has only been rounded. */
const SAME_ORIGIN_CELLS = 1e-6;

/** An image of the file, with what the checks ask of it most. */
interface Image {
  readonly name: string;
  readonly directory: ReadDirectory;
  readonly width: number;
  readonly height: number;
  readonly tileWidth: number;
  readonly tileHeight: number;
  readonly reduced: boolean;
  readonly offsets: readonly number[];
  readonly byteCounts: readonly number[];
}

/**
 * Violations of the Cloud-Optimised GeoTIFF standard in a file, as sentences that begin with the requirement's name;
 * empty where it passes. Also checked: the recommendations that make the file fast to read (order of directories and data;
 * tile sides equal and a power of two; compression), and what the file's ghost area promises. A grid that fits one tile, or that is
 * one cell thin, needs no overview: it cannot be made smaller in any useful way. HTTP range requests are the server's.
 * Source: OGC 21-026, version 1.0, clauses 7 and 8.
 */
export function checkCog(bytes: Uint8Array): string[] {
  const tiff = readTiffDirectories(bytes);
  const violations = tiff.faults.map((fault) => `requirement use-geotiff: ${fault}`);
  if (!tiff.big && bytes.length > CLASSIC_LIMIT_BYTES) violations.push('requirement use-geotiff: the file passes 4 GB and is no BigTIFF');
  const images = tiff.directories.map(toImage).filter((image) => !isMask(image.directory));
  if (images.length === 0) return violations;
  violations.push(
    ...images.flatMap((image) => checkTiling(image, bytes.length)),
    ...checkOverviews(images),
    ...checkSameness(images),
    ...checkGeoreference(images),
    ...checkSteps(images),
    ...images.flatMap((image) => checkTileSides(image, images[0]!)),
    ...images.filter((image) => one(image.directory, COMPRESSION, NOT_COMPRESSED) === NOT_COMPRESSED).map((image) => `recommendation rec-compression: ${image.name} is not compressed`),
    ...checkOrder(tiff, images),
    ...checkOverlap(images),
    ...checkGhostArea(bytes, tiff.big, images.map((image) => ({ ...image, directoryAt: image.directory.offset }))),
  );
  return violations;
}

function one(directory: ReadDirectory, id: number, otherwise: number): number {
  return directory.tags.get(id)?.values[0] ?? otherwise;
}

function isMask(directory: ReadDirectory): boolean {
  return (one(directory, NEW_SUBFILE_TYPE, 0) & 4) !== 0;
}

function toImage(directory: ReadDirectory, index: number): Image {
  return {
    name: `directory ${index}`,
    directory,
    width: one(directory, IMAGE_WIDTH, 0),
    height: one(directory, IMAGE_LENGTH, 0),
    tileWidth: one(directory, TILE_WIDTH, 0),
    tileHeight: one(directory, TILE_LENGTH, 0),
    reduced: (one(directory, NEW_SUBFILE_TYPE, 0) & 1) !== 0,
    offsets: directory.tags.get(TILE_OFFSETS)?.values ?? [],
    byteCounts: directory.tags.get(TILE_BYTE_COUNTS)?.values ?? [],
  };
}

function checkTiling(image: Image, fileBytes: number): string[] {
  const say = (what: string): string => `requirement tiling: ${image.name} ${what}`;
  if (image.directory.tags.has(STRIP_OFFSETS) || image.tileWidth === 0 || image.tileHeight === 0) return [say('is not in tiles')];
  const found: string[] = [];
  if (image.width === 0 || image.height === 0) found.push(say('has no width or no height'));
  if (image.tileWidth % TILE_MULTIPLE !== 0 || image.tileHeight % TILE_MULTIPLE !== 0) {
    found.push(say(`has tiles of ${image.tileWidth} × ${image.tileHeight}, not multiples of ${TILE_MULTIPLE}`));
  }
  const planes = one(image.directory, PLANAR_CONFIGURATION, 1) === 2 ? one(image.directory, SAMPLES_PER_PIXEL, 1) : 1;
  const wanted = Math.ceil(image.width / image.tileWidth) * Math.ceil(image.height / image.tileHeight) * planes;
  if (image.offsets.length !== wanted || image.byteCounts.length !== wanted) {
    found.push(say(`has ${image.offsets.length} tile offsets and ${image.byteCounts.length} tile sizes for ${wanted} tiles`));
  }
  const outside = image.offsets.findIndex((offset, i) => !(offset >= 0 && offset + (image.byteCounts[i] ?? 0) <= fileBytes));
  if (outside >= 0) found.push(say(`has tile ${outside} outside the file`));
  const half = image.offsets.findIndex((offset, i) => (offset > 0) !== ((image.byteCounts[i] ?? 0) > 0));
  if (half >= 0) found.push(say(`has tile ${half} with a place and no size, or a size and no place`));
  return found;
}

/** Tiles that lie over each other were never written so: one of them has been overwritten. The same tile twice is a saving that some writers make. */
function checkOverlap(images: readonly Image[]): string[] {
  const tiles = images.flatMap(({ name, offsets, byteCounts }) => offsets.map((at, tile) => ({ name, tile, at, end: at + (byteCounts[tile] ?? 0) })))
    .filter(({ at }) => at > 0).toSorted((a, b) => a.at - b.at);
  const over = tiles.findIndex(({ at, end }, i) => i > 0 && at < tiles[i - 1]!.end && (at !== tiles[i - 1]!.at || end !== tiles[i - 1]!.end));
  if (over < 0) return [];
  const [before, after] = [tiles[over - 1]!, tiles[over]!];
  return [`requirement use-geotiff: tile ${after.tile} of ${after.name} lies over tile ${before.tile} of ${before.name}`];
}

/** What has to be the same in a pyramid: an overview shows the same values, only fewer of them. */
const SAME_IN_OVERVIEWS: ReadonlyArray<readonly [id: number, what: string]> = [
  [BITS_PER_SAMPLE, 'bits a sample'], [SAMPLES_PER_PIXEL, 'samples a cell'], [SAMPLE_FORMAT, 'sample format'], [PHOTOMETRIC, 'photometric interpretation'],
];

function checkSameness(images: readonly Image[]): string[] {
  let full: Image | undefined;
  return images.flatMap((image) => {
    if (!image.reduced) full = image;
    const text = (of: Image, id: number): string => (of.directory.tags.get(id)?.values ?? []).join();
    return SAME_IN_OVERVIEWS.filter(([id]) => full && text(full, id) !== text(image, id)).map(([, what]) => `requirement overviews: ${image.name} has another ${what} than its full image`);
  });
}

function checkOverviews(images: readonly Image[]): string[] {
  const found: string[] = [];
  if (images.every((image) => image.reduced)) found.push('requirement overviews: no directory is a full-resolution image');
  if (images[0]!.reduced) found.push('requirement overviews: the first directory is not a full-resolution image');
  for (const [index, image] of images.entries()) {
    const before = images[index - 1];
    if (!image.reduced || !before) continue;
    if (image.width >= before.width || image.height >= before.height) {
      found.push(`requirement overviews: ${image.name} (${image.width} × ${image.height}) is not smaller than the one before it (${before.width} × ${before.height})`);
    }
  }
  return found;
}

function checkGeoreference(images: readonly Image[]): string[] {
  const found: string[] = [];
  let origin: readonly number[] | undefined;
  for (const image of images) {
    const { tags } = image.directory;
    const tie = tags.get(MODEL_TIEPOINT)?.values;
    const scale = tags.get(MODEL_PIXEL_SCALE)?.values;
    const keys = tags.get(GEO_KEY_DIRECTORY)?.values;
    if (image.reduced) {
      const moved = tie && origin && Math.max(Math.abs((tie[3] ?? NaN) - origin[0]!), Math.abs((tie[4] ?? NaN) - origin[1]!));
      if (moved !== undefined && !(moved <= SAME_ORIGIN_CELLS * (origin?.[2] ?? 0))) {
        found.push(`requirement point-of-origin: ${image.name} does not begin where the full image does`);
      }
      continue;
    }
    origin = tie && tie.length >= 6 ? [tie[3]! - tie[0]! * (scale?.[0] ?? 0), tie[4]! + tie[1]! * (scale?.[1] ?? 0), scale?.[0] ?? 0] : undefined;
    if (!tie || tie.length < 6) found.push(`requirement georeference: ${image.name} has no ModelTiepoint`);
    if (!scale || scale.length < 2 || !(scale[0]! > 0) || !(scale[1]! > 0)) found.push(`requirement georeference: ${image.name} has no ModelPixelScale, or one that is not positive`);
    if (!keys) found.push(`requirement georeference: ${image.name} has no GeoKeyDirectory`);
    else found.push(...checkKeys(keys).map((fault) => `requirement basic-metadata-format: ${image.name} ${fault}`));
  }
  return found;
}

/** Source: OGC 19-008r4 (GeoTIFF 1.1), clauses 7.1 and 7.4. */
function checkKeys(keys: readonly number[]): string[] {
  const [version = 0, revision = 0, , count = 0] = keys;
  if (version !== 1 || revision !== 1 || keys.length < 4 + 4 * count) return ['has a GeoKeyDirectory that is not well formed'];
  const found: string[] = [];
  const ids = Array.from({ length: count }, (_, i) => keys[4 + 4 * i]!);
  if (ids.some((id, i) => i > 0 && id <= ids[i - 1]!)) found.push('has GeoKeys that are not in ascending order');
  const value = (id: number): number | undefined => (ids.includes(id) ? keys[4 + 4 * ids.indexOf(id) + 3] : undefined);
  const model = value(1024);
  if (model === undefined) found.push('has no GTModelType key');
  if (value(1025) !== 1 && value(1025) !== 2) found.push('does not say whether a cell is an area or a point');
  if (model === 1 && value(3072) === undefined) found.push('is projected and has no ProjectedCRS key');
  if (model === 2 && value(2048) === undefined) found.push('is geographic and has no GeodeticCRS key');
  return found;
}

function checkSteps(images: readonly Image[]): string[] {
  const found: string[] = [];
  for (const [index, image] of images.entries()) {
    const before = images[index - 1];
    if (image.reduced && before && (before.width / image.width > LARGEST_STEP || before.height / image.height > LARGEST_STEP)) {
      found.push(`requirement number: ${image.name} is smaller than the one before it by more than ${LARGEST_STEP}`);
    }
    const next = images[index + 1];
    if (next?.reduced) continue;
    const across = Math.ceil(image.width / image.tileWidth);
    const down = Math.ceil(image.height / image.tileHeight);
    const exempt = !image.reduced && ((across === 1 && down === 1) || Math.min(image.width, image.height) === 1);
    if (image.reduced && across > 1 && down > 1) found.push(`requirement number: the last overview, ${image.name}, is ${across} × ${down} tiles and neither way a single one`);
    if (!image.reduced && !exempt) found.push(`requirement number: ${image.name} is ${across} × ${down} tiles and has no overview`);
  }
  return found;
}

function checkTileSides(image: Image, first: Image): string[] {
  const found: string[] = [];
  if (image.tileWidth !== image.tileHeight) found.push(`requirement small-sizes: ${image.name} has tiles that are not square`);
  if (Math.max(image.tileWidth, image.tileHeight) > LARGEST_TILE) found.push(`requirement small-sizes: ${image.name} has tiles wider than ${LARGEST_TILE}`);
  if (Math.log2(image.tileWidth) % 1 !== 0) found.push(`recommendation size-and-numbers: ${image.name} has tiles whose side is no power of two`);
  if (image.tileWidth !== first.tileWidth || image.tileHeight !== first.tileHeight) found.push(`recommendation size-and-numbers: ${image.name} has tiles of another size than ${first.name}`);
  return found;
}

function checkOrder({ directories }: ReadTiff, images: readonly Image[]): string[] {
  const found: string[] = [];
  const say = (what: string): void => void found.push(`recommendation ifd-order: ${what}`);
  if (directories.some((directory, i) => i > 0 && directory.offset < directories[i - 1]!.offset)) say('the directories do not lie in the order of their chain');
  const start = (image: Image): number => image.offsets.reduce((first, offset) => (offset > 0 ? Math.min(first, offset) : first), Infinity);
  const firstTile = images.reduce((first, image) => Math.min(first, start(image)), Infinity);
  const ends = directories.flatMap((directory) => [directory.offset, ...[...directory.tags.values()].map((tag) => tag.end)]);
  if (ends.reduce((last, end) => Math.max(last, end), 0) > firstTile) say('a directory or its values lie behind tile data');
  for (const [index, image] of images.entries()) {
    const before = images[index - 1];
    if (image.reduced && before && start(image) > start(before)) say(`the tiles of ${image.name} lie behind those of the larger image before it`);
    const last = image.offsets.reduce((most, offset) => Math.max(most, offset), 0);
    if (image.reduced && before && last > start(before)) say(`tiles of ${image.name} lie among those of the image before it`);
  }
  return [...new Set(found)];
}
