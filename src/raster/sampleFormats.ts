/** How a cell is kept in a file: real numbers as they are, or whole numbers with `value = stored × scale + offset`. */
export type SampleKind = 'float32' | 'int16' | 'byte';

export interface SampleFormat {
  readonly kind: SampleKind;
  readonly bits: number;
  /** TIFF tag SampleFormat: 1 unsigned, 2 signed, 3 floating point. */
  readonly tiffFormat: number;
  /** TIFF tag Predictor: 2 differences of samples, 3 differences of floating-point byte planes. */
  readonly predictor: 2 | 3;
  /** What stands for a cell without a value. */
  readonly nodata: number;
  /** Smallest and largest stored number that is a value. */
  readonly lowest: number;
  readonly highest: number;
}

export const SAMPLE_FORMATS: Readonly<Record<SampleKind, SampleFormat>> = Object.freeze({
  float32: { kind: 'float32', bits: 32, tiffFormat: 3, predictor: 3, nodata: NaN, lowest: -Infinity, highest: Infinity },
  int16: { kind: 'int16', bits: 16, tiffFormat: 2, predictor: 2, nodata: -32768, lowest: -32767, highest: 32767 },
  byte: { kind: 'byte', bits: 8, tiffFormat: 1, predictor: 2, nodata: 255, lowest: 0, highest: 254 },
});

/**
 * The scale and offset with which whole numbers hold every value from `minimum` to `maximum` as finely as they can: a
 * value comes back within half of `scale`. A byte is enough for a preview, 16 bits for most fields. Where both are
 * equal the scale is 1.
 */
export function sampleScaling(kind: 'int16' | 'byte', { minimum, maximum }: { minimum: number; maximum: number }): { scale: number; offset: number } {
  const { lowest, highest } = SAMPLE_FORMATS[kind];
  if (!(maximum - minimum >= 0 && maximum - minimum < Infinity)) throw new RangeError(`No scale from ${minimum} to ${maximum}`);
  const scale = (maximum - minimum) / (highest - lowest) || 1;
  return { scale, offset: minimum - lowest * scale };
}

export type Samples = Float32Array | Int16Array | Uint8Array;

/**
 * Cell values as they are stored. NaN becomes the format's nodata. A value that the stored range cannot hold throws,
 * since a clipped number in a file cannot be told from a true one. 32-bit floats are given back as they are, uncopied.
 */
export function toSamples(values: Float32Array | Float64Array, format: SampleFormat, scaling: { scale: number; offset: number }): Samples {
  if (format.kind === 'float32') return values instanceof Float32Array ? values : toFloats(values);
  const { scale, offset } = scaling;
  const samples = format.kind === 'int16' ? new Int16Array(values.length) : new Uint8Array(values.length);
  for (let i = 0; i < values.length; i += 1) {
    const value = values[i]!;
    const stored = Math.round((value - offset) / scale);
    if (stored < format.lowest || stored > format.highest) {
      throw new RangeError(`Cell value ${value} does not fit ${format.kind} with scale ${scale} and offset ${offset}`);
    }
    // NaN differs from itself, and passes the comparisons above.
    samples[i] = value === value ? stored : format.nodata;
  }
  return samples;
}

/** A finite value that 32 bits can only call infinite is refused too: nobody could tell it from a fault. */
function toFloats(values: Float64Array): Float32Array {
  const samples = new Float32Array(values);
  for (let i = 0; i < samples.length; i += 1) {
    if (Math.abs(samples[i]!) === Infinity && Math.abs(values[i]!) !== Infinity) throw new RangeError(`Cell value ${values[i]} does not fit float32`);
  }
  return samples;
}
