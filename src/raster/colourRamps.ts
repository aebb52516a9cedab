import { oklchToSrgb, type Oklch, type Rgb } from './oklab.js';

/** Colours from t = 0 to t = 1. */
export interface Ramp {
  readonly name: string;
  readonly kind: 'sequential' | 'diverging';
  /** Stops at ascending t, the first at 0 and the last at 1; between them lightness, chroma and hue go in straight lines. */
  readonly stops: ReadonlyArray<Oklch & { readonly t: number }>;
}

/**
 * For a value with a sign: blue below, orange-brown above, the palest in the middle. Our own, laid out in OKLab: both
 * arms fall in lightness at the same even rate, so that equal steps of the value look equal and the sign never makes
 * one side look stronger; blue against orange is told apart with red-green blindness too.
 */
export const RESIDUAL_RAMP: Ramp = Object.freeze({
  name: 'residual', kind: 'diverging',
  stops: [
    { t: 0, lightness: 0.36, chroma: 0.125, hueDeg: 262 },
    { t: 0.25, lightness: 0.665, chroma: 0.115, hueDeg: 245 },
    { t: 0.5, lightness: 0.97, chroma: 0.004, hueDeg: 235 },
    { t: 0.5, lightness: 0.97, chroma: 0.004, hueDeg: 75 },
    { t: 0.75, lightness: 0.665, chroma: 0.135, hueDeg: 58 },
    { t: 1, lightness: 0.36, chroma: 0.1, hueDeg: 42 },
  ],
});

/**
 * For a chance from 0 to 1: pale yellow over green to blue. Our own, laid out in OKLab with lightness falling evenly all
 * the way, so that it also reads in grey and with any colour blindness; it stays light enough for lines drawn over it.
 */
export const CHANCE_RAMP: Ramp = Object.freeze({
  name: 'chance', kind: 'sequential',
  stops: [
    { t: 0, lightness: 0.97, chroma: 0.055, hueDeg: 102 },
    { t: 0.35, lightness: 0.823, chroma: 0.1, hueDeg: 150 },
    { t: 0.65, lightness: 0.697, chroma: 0.1, hueDeg: 195 },
    { t: 1, lightness: 0.55, chroma: 0.105, hueDeg: 240 },
  ],
});

/** Colour of a ramp at t, sRGB 0 to 255; t outside 0 to 1 gives the nearer end, NaN throws. */
export function colourAt(ramp: Ramp, t: number): Rgb {
  if (Number.isNaN(t)) throw new Error('A ramp has no colour for NaN');
  const place = Math.min(1, Math.max(0, t));
  const { stops } = ramp;
  const above = Math.max(1, stops.findIndex((stop) => stop.t >= place));
  const from = stops[above - 1]!;
  const to = stops[above]!;
  const share = to.t > from.t ? (place - from.t) / (to.t - from.t) : 0;
  const mix = (key: 'lightness' | 'chroma' | 'hueDeg'): number => from[key] + share * (to[key] - from[key]);
  return oklchToSrgb({ lightness: mix('lightness'), chroma: mix('chroma'), hueDeg: mix('hueDeg') });
}

/** `#rrggbb`. */
export function hexColour(colour: Rgb): string {
  return `#${colour.map((channel) => channel.toString(16).padStart(2, '0')).join('')}`;
}
