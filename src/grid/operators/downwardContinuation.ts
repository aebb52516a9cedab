import { UserError } from '../../errors.js';
import type { Grid } from '../../raster/types.js';
import { radialSpectrum, type RadialSpectrum } from './radialSpectrum.js';
import { signalSpectrum, type SignalSpectrum } from './signalSpectrum.js';
import { spectral, type SpectralOptions } from './spectral.js';
import type { TransformedGrid } from './types.js';

export interface DownwardOptions extends SpectralOptions {
  /** Most that may be wrong with the result, rms, as a share of the signal's rms on the deeper surface. */
  readonly errorShare?: number;
}

export const DOWNWARD_DEFAULTS = Object.freeze({
  /** A tenth: peaks then keep their place and their order. */
  errorShare: 0.1,
});

/** Halvings in the search for the lowest surface that can be reached: to a thousandth of the way asked for. */
const HALVINGS = 10;

/**
 * The field `depthM` (≥ 0, metres) below the surface that the grid lies on, in the grid's unit: e^(|k|h), weighed by
 * S/(S + N) after Wiener so that waves below the noise are not raised. S is the signal's power at that wave number, taken
 * from the grid itself; N is the square of `noise`, the standard deviation of a cell's value (independent from cell to
 * cell), which the caller states. The expected error of the result follows from both; where it is more than `errorShare`
 * of the signal, the request is refused with the lowest surface that can be reached.
 *
 * Holds above the sources only. NaN stays NaN; near edges and gaps the result rests on the fill, more so than any other
 * operator's.
 *
 * Source: Blakely (1995), ch. 12.1; Wiener (1949), Extrapolation, Interpolation and Smoothing of Stationary Time Series;
 * Pawlowski (1995), Geophysics 60, 1390-1398 (preferential continuation, from memory).
 */
export function downwardContinuation(grid: Grid, depthM: number, { noise, ...rest }: DownwardOptions & { readonly noise: number }): TransformedGrid {
  const { errorShare, ...options } = { ...DOWNWARD_DEFAULTS, ...rest };
  const where = 'downward continuation';
  if (!(depthM >= 0 && Number.isFinite(depthM))) throw new UserError({ code: 'value_invalid', where: `${where}, height_m`, found: String(depthM), wanted: 'a depth of 0 m or more' });
  if (!(noise > 0 && Number.isFinite(noise))) throw new UserError({ code: 'value_invalid', where: `${where}, noise_nt`, found: String(noise), wanted: 'the standard deviation of a cell\'s value, above 0' });
  const spectrum = radialSpectrum(grid);
  const signal = signalSpectrum(spectrum, noise);
  const tooDeep = (found: string, wanted: string): UserError => new UserError({ code: 'value_invalid', where: `${where}, height_m`, found, wanted, advice: 'noise would drown the sources; state less noise only if the readings bear it out' });
  if (signal === null) throw tooDeep(`a grid with nothing above noise of ${noise}`, 'a signal above the noise');
  const error = expectedError(spectrum, signal, { depthM, noise });
  // Far below the sources the sums run over; that is no number, and too deep as well.
  if (!(error <= errorShare)) {
    const deepest = lowestSurface(spectrum, signal, { depthM, noise, errorShare });
    throw tooDeep(`${depthM} m, where ${percent(error)} of the result would be wrong`, `at most ${deepest.toFixed(2)} m, where ${percent(errorShare)} is`);
  }
  const values = spectral(grid, {
    response(east, north, out) {
      const k = Math.sqrt(east * east + north * north);
      out[0] = k === 0 ? 1 : Math.exp(k * depthM) * kept(signal.power(k), noise);
      out[1] = 0;
    },
    plane: (plane) => plane,
  }, options);
  const notes = [`continued ${depthM} m downwards with noise of ${noise} a cell: waves shorter than ${((2 * Math.PI) / signal.cut).toFixed(1)} m lie below it and are left out; expected error ${percent(error)} of the signal`];
  return { ...grid, values, notes, warnings: [] };
}

/** S/(S + N). */
function kept(power: number, noise: number): number {
  return power / (power + noise * noise);
}

/** Expected rms error of the weighed result over the rms of the true signal at that depth (Wiener's least error, S N/(S + N)). */
function expectedError({ step, waves }: RadialSpectrum, signal: SignalSpectrum, { depthM, noise }: { readonly depthM: number; readonly noise: number }): number {
  let error = 0, all = 0;
  for (let ring = 1; ring < waves.length; ring++) {
    const k = ring * step;
    const power = signal.power(k);
    const raised = waves[ring]! * power * Math.exp(2 * k * depthM);
    all += raised;
    error += raised * (1 - kept(power, noise));
  }
  return Math.sqrt(error / all);
}

interface Limits {
  readonly depthM: number;
  readonly noise: number;
  readonly errorShare: number;
}

function lowestSurface(spectrum: RadialSpectrum, signal: SignalSpectrum, { depthM, noise, errorShare }: Limits): number {
  let good = 0, bad = depthM;
  for (let n = 0; n < HALVINGS; n++) {
    const middle = (good + bad) / 2;
    if (expectedError(spectrum, signal, { depthM: middle, noise }) <= errorShare) good = middle;
    else bad = middle;
  }
  return good;
}

function percent(share: number): string {
  return `${(100 * share).toFixed(share < 0.1 ? 1 : 0)} %`;
}
