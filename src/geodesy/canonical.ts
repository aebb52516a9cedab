import type { RegistryRow } from './registryRows.js';

/** The projection methods of the registry, whatever a file calls them. */
export type CanonicalMethod = 'transverse_mercator' | 'lambert' | 'albers' | 'oblique_mercator' | 'web_mercator';

/** A projection in one form for all sources: degrees, metres, ratios. What a method does not use stands at its default. */
export interface Canonical {
  readonly method: CanonicalMethod;
  readonly lat0: number;
  readonly lon0: number;
  readonly lat1: number;
  readonly lat2: number;
  readonly scale: number;
  readonly falseEastM: number;
  readonly falseNorthM: number;
  readonly azimuth: number;
  readonly gridAngle: number;
  /** Oblique Mercator: whether false coordinates count from the natural origin (EPSG variant A) or from the centre (B). */
  readonly fromNaturalOrigin: boolean;
}

/** What is taken where a definition says nothing. */
export const CANONICAL_DEFAULTS: Omit<Canonical, 'method'> = Object.freeze({
  lat0: 0, lon0: 0, lat1: 0, lat2: 0, scale: 1, falseEastM: 0, falseNorthM: 0, azimuth: 0, gridAngle: 0, fromNaturalOrigin: false,
});

/** A registry row's projection; null where it is geographic. */
export function canonicalOf({ method, parameters: p }: RegistryRow): Canonical | null {
  const common = {
    ...CANONICAL_DEFAULTS, lat0: p['lat_0'] ?? 0, lon0: p['lon_0'] ?? 0, scale: p['k'] ?? p['k_0'] ?? 1, falseEastM: p['x_0'] ?? 0, falseNorthM: p['y_0'] ?? 0,
  };
  switch (method) {
    case 'longlat': return null;
    case 'webmerc': return { ...CANONICAL_DEFAULTS, method: 'web_mercator' };
    // A UTM zone is 6° wide, counted from 180° W. Source: DMA TM8358.2.
    case 'utm': return { ...CANONICAL_DEFAULTS, method: 'transverse_mercator', lon0: p['zone']! * 6 - 183, scale: 0.9996, falseEastM: 500_000, falseNorthM: p['south'] ? 10_000_000 : 0 };
    case 'tmerc': return { ...common, method: 'transverse_mercator' };
    case 'lcc': return { ...common, method: 'lambert', lat1: p['lat_1']!, lat2: p['lat_2'] ?? p['lat_1']! };
    case 'aea': return { ...common, method: 'albers', lat1: p['lat_1']!, lat2: p['lat_2'] ?? p['lat_1']! };
    case 'omerc': return { ...common, method: 'oblique_mercator', lon0: p['lonc']!, azimuth: p['alpha']!, gridAngle: p['gamma'] ?? p['alpha']!, fromNaturalOrigin: p['no_uoff'] === 1 };
  }
}

/** Files round degrees to eight digits or more: 1e-7° is a centimetre. */
const ANGLE_TOLERANCE_DEG = 1e-7;
/** 1e-8 of a zone's half-width of 200 km is 2 mm. */
const SCALE_TOLERANCE = 1e-8;
/** Half of the last digit of a false easting in feet with two decimals, in metres. */
const FALSE_TOLERANCE_M = 0.002;

/** Whether two definitions give the same coordinates to a centimetre. */
export function sameProjection(a: Canonical, b: Canonical): boolean {
  const parallels = (angle(a.lat1, b.lat1) && angle(a.lat2, b.lat2)) || (angle(a.lat1, b.lat2) && angle(a.lat2, b.lat1));
  return a.method === b.method && a.fromNaturalOrigin === b.fromNaturalOrigin && parallels
    && angle(a.lat0, b.lat0) && angle(a.lon0, b.lon0) && angle(a.azimuth, b.azimuth) && angle(a.gridAngle, b.gridAngle)
    && Math.abs(a.scale - b.scale) <= SCALE_TOLERANCE
    && Math.abs(a.falseEastM - b.falseEastM) <= FALSE_TOLERANCE_M && Math.abs(a.falseNorthM - b.falseNorthM) <= FALSE_TOLERANCE_M;
}

function angle(x: number, y: number): boolean {
  return Math.abs(((x - y + 540) % 360) - 180) <= ANGLE_TOLERANCE_DEG;
}
