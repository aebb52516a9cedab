/** How a sample lies in memory once its tile is unpacked. */
export interface SampleType {
  readonly bits: number;
  /** TIFF tag SampleFormat: 1 unsigned, 2 signed, 3 floating point. */
  readonly format: number;
  view(bytes: Uint8Array): ArrayLike<number>;
}

function type(bits: number, format: number, View: new (buffer: ArrayBufferLike, offset: number, length: number) => ArrayLike<number>): SampleType {
  return { bits, format, view: (bytes) => new View(bytes.buffer, bytes.byteOffset, bytes.length / (bits / 8)) };
}

export const SAMPLE_TYPES: readonly SampleType[] = [
  type(8, 1, Uint8Array), type(8, 2, Int8Array), type(16, 1, Uint16Array), type(16, 2, Int16Array),
  type(32, 1, Uint32Array), type(32, 2, Int32Array), type(32, 3, Float32Array), type(64, 3, Float64Array),
];

/** A tile's rows of samples: cells of a row, samples of a cell side by side. */
export interface TileForm {
  readonly sample: SampleType;
  readonly rowCells: number;
  readonly interleaved: number;
  readonly predictor: number;
  readonly littleEndian: boolean;
}

/** The samples of a tile from its unpacked bytes, which are changed on the way. */
export function decodeTile(bytes: Uint8Array, form: TileForm): ArrayLike<number> {
  const width = form.sample.bits / 8;
  const rowSamples = form.rowCells * form.interleaved;
  if (form.predictor === 3) return form.sample.view(joinPlanes(bytes, { rowSamples, width, interleaved: form.interleaved }));
  if (!form.littleEndian && width > 1) turnRound(bytes, width);
  if (form.predictor === 2) addUp(bytes, { rowSamples, width, interleaved: form.interleaved });
  return form.sample.view(bytes);
}

interface Row {
  readonly rowSamples: number;
  /** Bytes of a sample. */
  readonly width: number;
  readonly interleaved: number;
}

/** Big-endian samples to little-endian ones, in place. */
function turnRound(bytes: Uint8Array, width: number): void {
  for (let at = 0; at < bytes.length; at += width) bytes.subarray(at, at + width).reverse();
}

/** Undoes predictor 2, in place: each sample is a difference from the one to the left, modulo its range. Source: TIFF 6.0, section 14. */
function addUp(bytes: Uint8Array, { rowSamples, width, interleaved }: Row): void {
  const count = bytes.length / width;
  if (width === 8) {
    const words = new BigUint64Array(bytes.buffer as ArrayBuffer, bytes.byteOffset, count);
    for (let i = 0; i < count; i += 1) if (i % rowSamples >= interleaved) words[i]! += words[i - interleaved]!;
    return;
  }
  const View = width === 4 ? Uint32Array : width === 2 ? Uint16Array : Uint8Array;
  const words = new View(bytes.buffer as ArrayBuffer, bytes.byteOffset, count);
  for (let row = 0; row < count; row += rowSamples) {
    for (let i = row + interleaved; i < row + rowSamples; i += 1) words[i]! += words[i - interleaved]!;
  }
}

/** Undoes predictor 3: differences of bytes, and planes from the highest byte to the lowest. Source: Adobe Photoshop TIFF Technical Note 3 (2005). */
function joinPlanes(bytes: Uint8Array, { rowSamples, width, interleaved }: Row): Uint8Array {
  const stride = rowSamples * width;
  const out = new Uint8Array(bytes.length);
  for (let start = 0; start < bytes.length; start += stride) {
    for (let i = start + interleaved; i < start + stride; i += 1) bytes[i]! += bytes[i - interleaved]!;
    for (let plane = 0; plane < width; plane += 1) {
      const from = start + plane * rowSamples;
      for (let i = 0, to = start + width - 1 - plane; i < rowSamples; i += 1, to += width) out[to] = bytes[from + i]!;
    }
  }
  return out;
}
