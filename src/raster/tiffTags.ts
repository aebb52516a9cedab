/** Field types of TIFF 6.0 and BigTIFF that are written. */
export const TIFF_TYPES = Object.freeze({
  ASCII: { code: 2, bytes: 1 },
  SHORT: { code: 3, bytes: 2 },
  LONG: { code: 4, bytes: 4 },
  DOUBLE: { code: 12, bytes: 8 },
  LONG8: { code: 16, bytes: 8 },
});

export type TiffType = keyof typeof TIFF_TYPES;

export interface TiffTag {
  readonly id: number;
  readonly type: TiffType;
  readonly values: readonly number[];
}

/** Tag numbers. Source: TIFF 6.0; OGC 19-008r4 for 33550 to 34737; GDAL documentation for 42112 and 42113. */
export const TAG = Object.freeze({
  newSubfileType: 254, imageWidth: 256, imageLength: 257, bitsPerSample: 258, compression: 259, photometric: 262,
  imageDescription: 270, samplesPerPixel: 277, planarConfiguration: 284, predictor: 317, tileWidth: 322, tileLength: 323,
  tileOffsets: 324, tileByteCounts: 325, sampleFormat: 339, modelPixelScale: 33550, modelTiepoint: 33922,
  geoKeyDirectory: 34735, geoAsciiParams: 34737, gdalMetadata: 42112, gdalNodata: 42113,
});

export function shortTag(id: number, ...values: number[]): TiffTag {
  return { id, type: 'SHORT', values };
}

export function longTag(id: number, ...values: number[]): TiffTag {
  return { id, type: 'LONG', values };
}

export function doubleTag(id: number, ...values: number[]): TiffTag {
  return { id, type: 'DOUBLE', values };
}

/** Text as UTF-8 with the closing zero that TIFF wants. */
export function asciiTag(id: number, text: string): TiffTag {
  return { id, type: 'ASCII', values: [...new TextEncoder().encode(text), 0] };
}
