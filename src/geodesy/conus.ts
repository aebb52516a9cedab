import { CONUS_BASE64 } from './data/conusBytes.js';
import { readCtable } from './ctableGrid.js';
import { CONUS_ACCURACY } from './gridIdentity.js';
import type { ShiftGrid } from './types.js';

/** Decoded once, when a place is first asked for. */
let decoded: ShiftGrid | null = null;

/** NOAA's NADCON grid for the lower 48 states, NAD27 to NAD83, shipped with Ironplat (data/README.md). */
export const CONUS: ShiftGrid = {
  name: 'NADCON conus', from: 'NAD27', to: 'NAD83', ...CONUS_ACCURACY,
  offsetAt(lonDeg, latDeg) {
    decoded ??= readCtable('conus', conusBytes(), { label: 'NADCON conus' });
    return decoded.offsetAt(lonDeg, latDeg);
  },
};

/** The shipped file, byte for byte. */
export function conusBytes(): Uint8Array {
  return Uint8Array.from(atob(CONUS_BASE64), (character) => character.charCodeAt(0));
}
