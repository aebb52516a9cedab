import type { NoiseModel } from '../detection/types.js';
import { madSd, quantile } from '../numerics/robust.js';
import { rampPlace, type ColourRange } from '../raster/colourRange.js';
import type { Grid } from '../raster/types.js';

/** Share of the cells that the ends of the scale leave out, so that one cell does not set it. */
const CUT = 0.0005;
/** Noise below which a scale bends no further: a magnetometer's own steps, nT. */
const LEAST_KNEE_NT = 0.1;
/** Steps of a legend that fit a bent scale: each about three times the last. */
const STEPS = [1, 3];
/** Share of the legend's bar that a label takes. */
const ROOM = 0.068;

/**
 * Colours for a residual: the same for both signs, even through the noise and by logarithm above it, up to a round
 * number near the highest. From all cells of a grid or from a sample of them. Null where none has a value.
 */
export function residualRange({ values }: Pick<Grid, 'values'>, noise?: NoiseModel): ColourRange | null {
  const high = quantile(Float64Array.from(values, Math.abs), 1 - CUT);
  if (!Number.isFinite(high)) return null;
  const spread = noise ? Math.hypot(noise.whiteSdNT, noise.correlatedSdNT) : madSd(values);
  const knee = Math.max(LEAST_KNEE_NT, spread);
  const end = roundUp(Math.max(high, 3 * knee));
  return { low: -end, high: end, knee };
}

/** Values that the legend names, ascending, the ends and zero among them: round ones, as many as have room. */
export function legendValues(range: ColourRange): number[] {
  const { high, knee = 1 } = range;
  const above: number[] = [];
  let last = 0.5;
  for (let power = Math.floor(Math.log10(knee)); power <= Math.log10(high); power += 1) {
    for (const step of STEPS) {
      const value = step * 10 ** power;
      const place = rampPlace(range, value);
      if (place - last < ROOM || 1 - place < ROOM) continue;
      last = place;
      above.push(Number(value.toPrecision(6)));
    }
  }
  return [-high, ...above.toReversed().map((value) => -value), 0, ...above, high];
}

/** The next of 1, 1.5, 2, 3, 5, 7 × 10ⁿ. */
function roundUp(value: number): number {
  const power = 10 ** Math.floor(Math.log10(value));
  const digit = [1, 1.5, 2, 3, 5, 7, 10].find((step) => step * power >= value * (1 - 1e-12)) ?? 10;
  return Number((digit * power).toPrecision(6));
}
