import { CONUS_BASE64 } from './data/conusBytes.js';
import { readCtable } from './ctableGrid.js';
import { inLower48OrSea } from './lower48.js';
import type { ShiftGrid } from './types.js';

/** Decoded once, when a place is first asked for. */
let decoded: ShiftGrid | null = null;

/** NOAA's NADCON grid for the lower 48 states, NAD27 to NAD83, shipped with Ironplat (data/README.md). Accuracy: EPSG:1241. */
export const CONUS: ShiftGrid = {
  name: 'NADCON conus', from: 'NAD27', to: 'NAD83', accuracyM: 0.15,
  // The grid reaches into Canada and Mexico, for which nothing is published.
  statedAt: inLower48OrSea,
  offsetAt(lonDeg, latDeg) {
    decoded ??= readCtable('conus', conusBytes(), { label: 'NADCON conus' });
    return decoded.offsetAt(lonDeg, latDeg);
  },
};

/** The shipped file, byte for byte. */
export function conusBytes(): Uint8Array {
  return Uint8Array.from(atob(CONUS_BASE64), (character) => character.charCodeAt(0));
}
