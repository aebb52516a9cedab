import type { Crs } from './types.js';

/** Flat columns of coordinates, metres (degrees where geographic). */
export interface Columns {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/**
 * Longitudes and latitudes (degrees, on the CRS's datum) to eastings and northings in metres. A row with NaN in either
 * column stays NaN in both; any other row that cannot be projected throws as `crs.forward` does.
 */
export function projectArrays(crs: Crs, lonDeg: ArrayLike<number>, latDeg: ArrayLike<number>): Columns {
  return mapColumns(lonDeg, latDeg, (lon, lat) => crs.forward(lon, lat));
}

/** Eastings and northings in metres back to longitudes (x) and latitudes (y) in degrees; NaN as in `projectArrays`. */
export function unprojectArrays(crs: Crs, eastM: ArrayLike<number>, northM: ArrayLike<number>): Columns {
  return mapColumns(eastM, northM, (east, north) => crs.inverse(east, north));
}

function mapColumns(a: ArrayLike<number>, b: ArrayLike<number>, map: (a: number, b: number) => [number, number]): Columns {
  if (a.length !== b.length) throw new Error(`columns of ${a.length} and ${b.length} rows`);
  const x = new Float64Array(a.length).fill(NaN);
  const y = new Float64Array(a.length).fill(NaN);
  for (let row = 0; row < a.length; row++) {
    const first = a[row]!;
    const second = b[row]!;
    if (Number.isNaN(first) || Number.isNaN(second)) continue;
    [x[row], y[row]] = map(first, second);
  }
  return { x, y };
}
