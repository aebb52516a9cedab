import { beforeAll, describe, expect, it } from 'vitest';
import { crs } from '../../src/geodesy/crs.js';
import { checkCog } from '../../src/raster/checkCog.js';
import { encodeCog } from '../../src/raster/encodeCog.js';
import { CLASSIC_LIMIT_BYTES, GHOST_AREA, layoutTiff } from '../../src/raster/tiffLayout.js';
import { longTag } from '../../src/raster/tiffTags.js';
import { withGdal } from '../support/gdal.js';
import { deflate, madeGrid } from './made.js';
import { directoryAt, entryOf, nextPointerAt, tampered } from './tamper.js';

let cog: Uint8Array;

beforeAll(async () => {
  // Two overviews, several tiles on the full image and on the first overview.
  cog = await encodeCog(madeGrid({ width: 700, height: 600 }), { crs: crs(2272), deflate, tileSize: 256, unit: 'nT' });
});

/** Changes to a good file, each with the words that the finding has to begin with. */
const TAMPERINGS: ReadonlyArray<{ what: string; finding: RegExp; change(view: DataView): void }> = [
  { what: 'no TIFF signature', finding: /^requirement use-geotiff: the file does not begin as a TIFF/, change: (view) => view.setUint8(0, 0x4a) },
  { what: 'a chain that loops', finding: /^requirement use-geotiff: the chain/, change: (view) => view.setUint32(nextPointerAt(view, directoryAt(view, 2)), directoryAt(view, 0), true) },
  { what: 'a chain that leads out of the file', finding: /^requirement use-geotiff: a directory at byte/, change: (view) => view.setUint32(nextPointerAt(view, directoryAt(view, 2)), 0x7ffffff0, true) },
  { what: 'tag values outside the file', finding: /^requirement use-geotiff: the values of tag 324/, change: (view) => view.setUint32(entryOf(view, 0, 324).entryAt + 8, 0x7ffffff0, true) },
  { what: 'tags out of order', finding: /^requirement use-geotiff: tag 257 .* ascending/, change: (view) => view.setUint16(entryOf(view, 0, 256).entryAt, 300, true) },
  { what: 'strips in place of tiles', finding: /^requirement tiling: directory 1 is not in tiles/, change: (view) => view.setUint16(entryOf(view, 1, 322).entryAt, 321, true) },
  { what: 'tiles no multiple of 16', finding: /^requirement tiling: directory 0 has tiles of 250 × 256/, change: (view) => view.setUint16(entryOf(view, 0, 322).valuesAt, 250, true) },
  { what: 'too few tiles for its size', finding: /^requirement tiling: directory 0 has 9 tile offsets/, change: (view) => view.setUint32(entryOf(view, 0, 256).valuesAt, 1700, true) },
  { what: 'a tile outside the file', finding: /^requirement tiling: directory 0 has tile 8 outside/, change: (view) => view.setUint32(entryOf(view, 0, 324).valuesAt + 32, view.byteLength - 3, true) },
  { what: 'no full-resolution image', finding: /^requirement overviews: no directory is a full/, change: (view) => view.setUint32(entryOf(view, 0, 254).valuesAt, 1, true) },
  { what: 'an overview that is as wide as the image', finding: /^requirement overviews: directory 1 \(700 × 300\)/, change: (view) => view.setUint32(entryOf(view, 1, 256).valuesAt, 700, true) },
  { what: 'no tie point', finding: /^requirement georeference: directory 0 has no ModelTiepoint/, change: (view) => view.setUint16(entryOf(view, 0, 33922).entryAt, 33921, true) },
  { what: 'a pixel scale of zero', finding: /^requirement georeference: directory 0 has no ModelPixelScale/, change: (view) => view.setFloat64(entryOf(view, 0, 33550).valuesAt, 0, true) },
  { what: 'no GeoKeys', finding: /^requirement georeference: directory 0 has no GeoKeyDirectory/, change: (view) => view.setUint16(entryOf(view, 0, 34735).entryAt, 34734, true) },
  { what: 'a GeoKeyDirectory of a wrong version', finding: /^requirement basic-metadata-format: directory 0 has a GeoKeyDirectory that is not well formed/, change: (view) => view.setUint16(entryOf(view, 0, 34735).valuesAt, 7, true) },
  { what: 'no code of the CRS', finding: /^requirement basic-metadata-format: directory 0 is projected/, change: (view) => view.setUint16(entryOf(view, 0, 34735).valuesAt + 8 * 4, 3071, true) },
  { what: 'a raster type that is neither', finding: /^requirement basic-metadata-format: .* area or a point/, change: (view) => view.setUint16(entryOf(view, 0, 34735).valuesAt + 8 * 2 + 6, 9, true) },
  { what: 'an overview smaller by more than ten', finding: /^requirement number: directory 2 is smaller/, change: (view) => view.setUint32(entryOf(view, 2, 256).valuesAt, 30, true) },
  { what: 'a chain that ends too early', finding: /^requirement number: the last overview, directory 1, is 2 × 2 tiles/, change: (view) => view.setUint32(nextPointerAt(view, directoryAt(view, 1)), 0, true) },
  { what: 'no overview', finding: /^requirement number: directory 0 is 3 × 3 tiles and has no overview/, change: (view) => view.setUint32(nextPointerAt(view, directoryAt(view, 0)), 0, true) },
  { what: 'tiles that are not square', finding: /^requirement small-sizes: directory 0 has tiles that are not square/, change: (view) => view.setUint16(entryOf(view, 0, 323).valuesAt, 272, true) },
  { what: 'huge tiles', finding: /^requirement small-sizes: directory 2 has tiles wider/, change: (view) => { for (const tag of [322, 323]) view.setUint16(entryOf(view, 2, tag).valuesAt, 2048, true); } },
  { what: 'tiles no power of two', finding: /^recommendation size-and-numbers: directory 2/, change: (view) => { for (const tag of [322, 323]) view.setUint16(entryOf(view, 2, tag).valuesAt, 240, true); } },
  { what: 'tiles out of order', finding: /^ghost area: tile 1 of directory 0 lies before/, change: (view) => { swapTiles(view, 0, 0, 1); } },
  { what: 'an overview behind the full image', finding: /^recommendation ifd-order: the tiles of directory 2 lie behind/, change: (view) => view.setUint32(entryOf(view, 2, 324).valuesAt, view.getUint32(entryOf(view, 0, 324).valuesAt + 32, true), true) },
  { what: 'a ghost area of a wrong length', finding: /^ghost area: the first directory is at byte/, change: (view) => view.setUint8(8 + 'GDAL_STRUCTURAL_METADATA_SIZE=00014'.length, 0x32) },
  { what: 'a note that the file was edited', finding: /^ghost area: the file says that it was edited/, change: (view) => { [...'YES'].forEach((letter, i) => view.setUint8(8 + GHOST_AREA.indexOf('EDITION=') + 8 + i, letter.charCodeAt(0))); } },
  { what: 'a wrong size before a tile', finding: /^ghost area: the size before tile 0 of directory 2/, change: (view) => { const at = view.getUint32(entryOf(view, 2, 324).valuesAt, true); view.setUint32(at - 4, 1, true); } },
  { what: 'a changed last byte of a tile', finding: /^ghost area: the bytes after tile 0 of directory 2/, change: (view) => { const at = view.getUint32(entryOf(view, 2, 324).valuesAt, true) + view.getUint32(entryOf(view, 2, 325).valuesAt, true) - 1; view.setUint8(at, view.getUint8(at) ^ 255); } },
];

function swapTiles(view: DataView, directory: number, a: number, b: number): void {
  for (const tag of [324, 325]) {
    const { valuesAt } = entryOf(view, directory, tag);
    const [first, second] = [view.getUint32(valuesAt + 4 * a, true), view.getUint32(valuesAt + 4 * b, true)];
    view.setUint32(valuesAt + 4 * a, second, true);
    view.setUint32(valuesAt + 4 * b, first, true);
  }
}

/** The grid as GDAL writes it. */
function written(format: string, ...options: string[]): Promise<Uint8Array> {
  return withGdal({ 'a.tif': cog }, async (api, dataset) => {
    const { local } = await api.gdal_translate(dataset, ['-of', format, '-q', ...options], `foreign-${format}`);
    return api.Module.FS.readFile(local);
  });
}

describe('checkCog', () => {
  it('finds nothing in a good file', () => expect(checkCog(cog)).toEqual([]));

  it.each(TAMPERINGS)('finds $what', ({ change, finding }) => {
    const findings = checkCog(tampered(cog, change));
    expect(findings.filter((text) => finding.test(text)), findings.join('\n')).not.toEqual([]);
  });

  it('finds a file that was cut short', () => {
    for (const length of [0, 5, 200, 2000, cog.length - 10]) expect(checkCog(cog.slice(0, length))).not.toEqual([]);
  });

  it('finds nothing in a COG that GDAL wrote, and that a plain GeoTIFF of GDAL is no COG', async () => {
    expect(checkCog(await written('COG', '-co', 'COMPRESS=DEFLATE', '-co', 'PREDICTOR=YES', '-co', 'BLOCKSIZE=256'))).toEqual([]);
    const findings = checkCog(await written('GTiff'));
    expect(findings).toContain('requirement tiling: directory 0 is not in tiles');
  });
});

describe('layoutTiff', () => {
  it('states the length of its ghost area', () => {
    // Bytes as GDAL's documentation of the COG driver gives them for a file without mask.
    expect(GHOST_AREA.startsWith('GDAL_STRUCTURAL_METADATA_SIZE=000140 bytes\n')).toBe(true);
    expect(GHOST_AREA.length).toBe(43 + 140);
  });

  it('turns to BigTIFF exactly where the file would pass 4 GB', () => {
    const tags = [longTag(256, 1)];
    const bytes = (size: number): number => layoutTiff([{ tags, tileBytes: [size] }], 'auto').fileBytes;
    const version = (size: number): number => layoutTiff([{ tags, tileBytes: [size] }], 'auto').header[2]!;
    const overhead = bytes(10) - 10;
    expect(bytes(CLASSIC_LIMIT_BYTES - overhead)).toBe(CLASSIC_LIMIT_BYTES);
    expect(version(CLASSIC_LIMIT_BYTES - overhead)).toBe(42);
    expect(version(CLASSIC_LIMIT_BYTES - overhead + 1)).toBe(43);
  });

  it('writes offsets past 4 GB whole', () => {
    const size = 2 ** 31;
    const { header, offsets, fileBytes } = layoutTiff([{ tags: [longTag(256, 1)], tileBytes: [size, size, size, 8] }], 'auto');
    expect(fileBytes).toBe(header.length + 3 * size + 8 + 4 * 8);
    expect(offsets[0]).toEqual([0, 1, 2, 3].map((i) => header.length + 4 + i * (size + 8)));
    const view = new DataView(header.buffer);
    // The header ends with the index: four offsets of eight bytes, then four sizes of four.
    const indexAt = header.length - 4 * 8 - 4 * 4;
    expect([0, 1, 2, 3].map((i) => Number(view.getBigUint64(indexAt + 8 * i, true)))).toEqual(offsets[0]);
  });
});
