/** Which values a ramp's ends stand for. */
export interface ColourRange {
  readonly low: number;
  readonly high: number;
  /**
   * Where the scale bends: values well below `knee` by magnitude are spread evenly, those well above it by their
   * logarithm (inverse hyperbolic sine), so that noise and a peak a thousand times as high both show. Even all the way
   * without it.
   */
  readonly knee?: number;
}

/** Place of a value on the ramp, 0 at `low` and 1 at `high`; beyond them below 0 and above 1; NaN stays NaN. */
export function rampPlace(range: ColourRange, value: number): number {
  const low = bend(range, range.low);
  return (bend(range, value) - low) / (bend(range, range.high) - low);
}

/** The value that lies at place t of the ramp: the inverse of `rampPlace`. */
export function rampValue(range: ColourRange, t: number): number {
  const low = bend(range, range.low);
  const bent = low + t * (bend(range, range.high) - low);
  return range.knee === undefined ? bent : range.knee * Math.sinh(bent);
}

function bend({ knee }: ColourRange, value: number): number {
  return knee === undefined ? value : Math.asinh(value / knee);
}
