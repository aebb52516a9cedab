import { mainFieldAt } from '../field/mainField.js';
import type { Site } from '../site/types.js';

/**
 * Nodes of the lattice stand at most this far apart. The model's shortest wave (degree 12) is 3,300 km long and below
 * some 3,000 nT, so the second derivative stays below 2·10⁻⁸ nT/m² and linear interpolation in two directions misses
 * it by less than 2 · 4000²/8 · 2·10⁻⁸ = 0.08 nT.
 */
const NODE_M = 4000;
/** The lattice is laid a little wider than the readings, so that none lies on its rim. */
const RIM_M = 10;
const YEAR_S = 365 * 86_400;

export interface MainFieldPlaces {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** UTC seconds; NaN takes the date of the survey. */
  readonly timeS: Float64Array;
  /** Readings that count (0); others may lie anywhere and get NaN. */
  readonly flag: Uint8Array;
}

/**
 * Main field at each reading's place and time, nT: computed on a lattice at the first and the last time, and
 * interpolated linearly in place and time, within 0.1 nT of the model itself. `groundHeightM` is above the ellipsoid.
 */
export function mainFieldAlong(places: MainFieldPlaces, site: Site, groundHeightM: number): Float64Array {
  const { x, y, timeS, flag } = places;
  const box = { west: Infinity, south: Infinity, east: -Infinity, north: -Infinity, from: Infinity, to: -Infinity };
  for (let i = 0; i < x.length; i++) {
    if (flag[i] !== 0) continue;
    box.west = Math.min(box.west, x[i]!);
    box.east = Math.max(box.east, x[i]!);
    box.south = Math.min(box.south, y[i]!);
    box.north = Math.max(box.north, y[i]!);
    if (Number.isNaN(timeS[i]!)) continue;
    box.from = Math.min(box.from, timeS[i]!);
    box.to = Math.max(box.to, timeS[i]!);
  }
  const columns = Math.ceil((box.east - box.west + 2 * RIM_M) / NODE_M) + 1;
  const rows = Math.ceil((box.north - box.south + 2 * RIM_M) / NODE_M) + 1;
  const stepX = (box.east - box.west + 2 * RIM_M) / (columns - 1);
  const stepY = (box.north - box.south + 2 * RIM_M) / (rows - 1);
  const lattice = (year: number): Float64Array => Float64Array.from({ length: columns * rows }, (_, k) => {
    const [lon, lat] = site.frame.inverse(box.west - RIM_M + (k % columns) * stepX, box.south - RIM_M + Math.floor(k / columns) * stepY);
    const { lonDeg, latDeg } = site.toWgs84.place(lon, lat);
    return mainFieldAt(lonDeg, latDeg, groundHeightM, year).totalNT;
  });
  const timed = box.from <= box.to;
  const first = lattice(timed ? decimalYearOf(box.from) : site.decimalYear);
  const last = timed && box.to > box.from ? lattice(decimalYearOf(box.to)) : first;
  const out = new Float64Array(x.length).fill(NaN);
  for (let i = 0; i < x.length; i++) {
    if (flag[i] !== 0) continue;
    const u = (x[i]! - box.west + RIM_M) / stepX;
    const v = (y[i]! - box.south + RIM_M) / stepY;
    const c = Math.min(columns - 2, Math.floor(u));
    const r = Math.min(rows - 2, Math.floor(v));
    const share = timed && box.to > box.from && !Number.isNaN(timeS[i]!) ? (timeS[i]! - box.from) / (box.to - box.from) : 0;
    let value = 0;
    for (const [dc, dr] of CORNERS) {
      const k = (r + dr) * columns + c + dc;
      value += (dc ? u - c : 1 - u + c) * (dr ? v - r : 1 - v + r) * (first[k]! + share * (last[k]! - first[k]!));
    }
    out[i] = value;
  }
  return out;
}
const CORNERS = [[0, 0], [1, 0], [0, 1], [1, 1]] as const;

/** Year plus seconds since its beginning over 365 days, as the model's coefficients count. */
export function decimalYearOf(timeS: number): number {
  const year = new Date(timeS * 1000).getUTCFullYear();
  return year + (timeS - Date.UTC(year, 0, 1) / 1000) / YEAR_S;
}
