/** By cell: what patchOpenness says, variance NaN where it was not asked; 1 where the cell holds readings; and there the inverse variance of a reading's error, 1 for the most accurate. */
export interface OpennessMaps {
  readonly variance: Float32Array;
  readonly strength: Float32Array;
  readonly expected: Float32Array;
  readonly occupied: Float32Array;
  readonly accuracy: Float32Array;
}

export interface ErrorScale {
  readonly width: number;
  readonly height: number;
  /** Line spacing and depth of the layer, in cells. */
  readonly spacing: number;
  readonly depth: number;
  /** Standard deviation of the most accurate reading's error. */
  readonly noiseNT: number;
}

/** Share of the layer's variance beyond which the readings do not say what the field is. */
export const UNKNOWN_SHARE = 1 / 3;
/** Radius (standard deviation) over which the layer's strength is judged, in roots of depth × spacing. Measured: 0.3 to 0.4 differ little. */
const STRENGTH_RADIUS = 0.35;
/**
 * Error variance in units of the layer's, with v the share left open: OWN v^DULLED / (1 + v / FEW) between lines, and
 * OUTSIDE OWN v^DULLED beyond the outermost, since a layer of poles does not carry a slope on. The layer's depth is itself
 * an estimate and readings are averaged over squares, so close to readings the error is more than the layer says; and
 * sources are few, not everywhere, so between two lines that show none there seldom is one. The numbers are measured on
 * made surveys over casings, compact iron and geology, lines half to four times as far apart as the sources are deep.
 */
const OWN = 0.84;
const DULLED = 0.93;
const FEW = 0.09;
const OUTSIDE = 1.3;
/** Distance from a place to the mean of the readings around it (Gaussian weights of half a spacing), over half a spacing: up to the first they lie on all sides, from the second on one. */
const AROUND_SPACINGS = 0.5;
const AROUND = 0.4;
const ONE_SIDE = 0.9;
/** Noise that is left however quiet the ground, over that of a reading: what is left open counts noise as small beside the window's field. */
const NOISE_LEFT = 0.2;
/** A Gaussian is cut off at so many standard deviations. */
const CUT = 3;

/**
 * Standard error of the field, nT: what the readings leave open of a unit layer, times the layer's local strength, which
 * is the ratio of what the readings make it to what a unit layer would show, both averaged around the cell. So it is large
 * beside a strong source and small over quiet ground at the same distance from readings. NaN where more than a third of
 * the layer's variance is left open.
 */
export function fieldError({ variance, strength, expected, occupied, accuracy }: OpennessMaps, { width, height, spacing, depth, noiseNT }: ErrorScale): Float32Array {
  const sigma = STRENGTH_RADIUS * Math.sqrt(depth * spacing);
  const shown = blur(strength, { width, height, sigma });
  const unit = blur(expected, { width, height, sigma });
  const least = (NOISE_LEFT * noiseNT) ** 2;
  const around = AROUND_SPACINGS * spacing;
  const readings = blur(occupied, { width, height, sigma: around });
  const accurate = blur(accuracy, { width, height, sigma: around });
  return variance.map((open, k) => {
    if (!(open <= UNKNOWN_SHARE)) return NaN;
    // A Gaussian mean's slope over the mean is the distance to the readings' middle over the radius squared.
    const i = k % width;
    const east = i > 0 && i < width - 1 ? (readings[k + 1]! - readings[k - 1]!) / 2 : 0;
    const south = k >= width && k < width * (height - 1) ? (readings[k + width]! - readings[k - width]!) / 2 : 0;
    const aside = (Math.hypot(east, south) / readings[k]!) * around;
    const between = Math.min(1, Math.max(0, (ONE_SIDE - aside) / (ONE_SIDE - AROUND)));
    return Math.sqrt(((OWN * (between + OUTSIDE * (1 - between)) * open ** DULLED) / (1 + (between * open) / FEW)) * (shown[k]! / unit[k]!) + least * (readings[k]! / accurate[k]!));
  });
}

/** Gaussian means but for a common factor; cells beyond the grid count nothing. */
export function blur(values: Float32Array, { width, height, sigma }: { readonly width: number; readonly height: number; readonly sigma: number }): Float64Array {
  const radius = Math.ceil(CUT * sigma);
  const kernel = Float64Array.from({ length: 2 * radius + 1 }, (_, n) => Math.exp(-((n - radius) ** 2) / (2 * sigma * sigma)));
  const along = new Float64Array(values.length);
  const both = new Float64Array(values.length);
  for (let j = 0, k = 0; j < height; j++) {
    for (let i = 0; i < width; i++, k++) {
      for (let n = Math.max(-radius, -i); n <= Math.min(radius, width - 1 - i); n++) along[k]! += kernel[n + radius]! * values[k + n]!;
    }
  }
  for (let j = 0, k = 0; j < height; j++) {
    for (let i = 0; i < width; i++, k++) {
      for (let n = Math.max(-radius, -j); n <= Math.min(radius, height - 1 - j); n++) both[k]! += kernel[n + radius]! * along[k + n * width]!;
    }
  }
  return both;
}
