import { samplesBounds } from '../gridFrame.js';
import { DEEP_SPACINGS } from './layer.js';
import { solvePatch } from './patch.js';
import { placeReadings, readingsWithin, type HighSamples } from './placedReadings.js';

/** Depths that are tried, in line spacings: from where each line stands alone to where lines say it all. */
const DEPTHS = [0.15, 0.2, 0.27, 0.36, 0.5, 0.67, 0.9, 1.25, 1.7, 2.4, 3.4];
/** Windows over which the likelihood is summed, each so many spacings wide. */
const WINDOWS = 40;
const WINDOW_SPACINGS = 4;
/** Squares to a spacing within which readings are averaged, and the readings that a window keeps at most. */
const SQUARES_PER_SPACING = 7;
const MOST = 150;
/** Depths are tried in steps of so many first: the misfit has one minimum as a rule. */
const COARSE = 3;
/** A window with fewer readings says nothing. */
const LEAST = 20;

/**
 * Depth, below the level that heights count from, of the layer of sources that the readings are likeliest under, metres:
 * a common depth, an amplitude of its own for each of up to 40 windows spread over the survey. No line is told from
 * another, so what decides is how fast the field varies along the lines. Windows without readings enough are passed over;
 * half a spacing where there is none.
 *
 * Source: Mardia & Marshall (1984), Maximum likelihood estimation of models for residual covariance in spatial
 * regression, Biometrika 71, 135-146.
 */
export function layerDepthM(samples: HighSamples, { spacingM, noiseNT }: { readonly spacingM: number; readonly noiseNT: number }): number {
  const bounds = samplesBounds(samples);
  const readings = placeReadings(samples, bounds, spacingM / SQUARES_PER_SPACING);
  const lowest = readings.up.reduce((least, up) => Math.min(least, up), 0);
  const depths = DEPTHS.map((share) => share * spacingM).filter((depth) => depth > -lowest + DEPTHS[0]! * spacingM * (lowest < 0 ? 1 : 0.99));
  const windowM = WINDOW_SPACINGS * spacingM;
  const across = Math.max(1, Math.round((bounds.east - bounds.west) / windowM));
  const down = Math.max(1, Math.round((bounds.north - bounds.south) / windowM));
  const stride = Math.max(1, (across * down) / WINDOWS);
  const windows: Int32Array[] = [];
  for (let pick = 0; Math.floor(pick) < across * down; pick += stride) {
    const i = Math.floor(pick) % across;
    const j = Math.floor(Math.floor(pick) / across);
    const west = bounds.west + ((bounds.east - bounds.west) * (i + 0.5)) / across - windowM / 2;
    const south = bounds.south + ((bounds.north - bounds.south) * (j + 0.5)) / down - windowM / 2;
    const chosen = readingsWithin(readings, { west, south, east: west + windowM, north: south + windowM }, MOST);
    if (chosen.length >= LEAST) windows.push(chosen);
  }
  if (windows.length === 0 || depths.length === 0) return Math.max(spacingM / 2, 2 * -lowest);
  const misfit = new Map<number, number>();
  const misfitOf = (d: number): number => {
    const known = misfit.get(d);
    if (known !== undefined) return known;
    const layer = { depthM: depths[d]!, deepM: DEEP_SPACINGS * spacingM };
    const sum = windows.reduce((total, chosen) => total + solvePatch(readings, chosen, { layer, noiseNT }).misfit, 0);
    misfit.set(d, sum);
    return sum;
  };
  // Every third depth first, then those around the best of them.
  let best = 0;
  for (let d = 0; d < depths.length; d += COARSE) if (misfitOf(d) < misfitOf(best)) best = d;
  const middle = best;
  for (let d = Math.max(0, middle - COARSE + 1); d < Math.min(depths.length, middle + COARSE); d++) if (misfitOf(d) < misfitOf(best)) best = d;
  return depths[best]!;
}
