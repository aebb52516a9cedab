import { inLower48 } from './lower48.js';
import type { Bounds } from './types.js';

/** A regional mean of NAD27's three-parameter shift. */
export interface MeanShift {
  readonly name: string;
  /** Metres to add to earth-centred X, Y, Z on Clarke 1866. */
  readonly dxM: number;
  readonly dyM: number;
  readonly dzM: number;
  /** Standard error on each axis, metres, shared by neighbours. */
  readonly sharedSdM: number;
}

interface Region extends MeanShift {
  readonly area: Bounds;
}

/**
 * A mean lies this far off on each axis at least: against the lower 48 grid the rms on one axis is 3 to 7 m by region,
 * and physics does not change at a border.
 */
export const MEAN_SHIFT_LEAST_SD_M = 5;

/**
 * EPSG's accuracy of a three-parameter shift is the root of the sum of its three axes' squares (5, 5, 6 m make 10 m in
 * EPSG:1173), so one axis has 1/√3 of it.
 */
const AXIS_SHARE = 1 / Math.sqrt(3);

/**
 * Source: NGA TR8350.2, appendix B, NAD27, as EPSG operations 1170 to 1187, 1249 and 1250 carry it with area and
 * accuracy. In the order in which a place is looked for: small before large. EPSG's boxes overlap, so Alaska is cut at
 * the Yukon and along the panhandle, Ontario at the Ottawa, roughly (from memory): any of them is within its error there.
 */
const REGIONS: readonly Region[] = [
  ...[[-168.26, 54.34, -141, 71.4], [-141, 59.2, -135, 60.3], [-137, 57, -133.2, 59.2], [-137, 54.34, -131, 57]].map((part) =>
    region('Alaska mainland', 1176, [-5, 135, 172], 12, part as [number, number, number, number])),
  region('Aleutian Islands east', 1249, [-2, 152, 149], 15, [-178.3, 51.54, -164.84, 54.34]),
  region('Aleutian Islands west', 1250, [2, 204, 105], 18, [172.42, 51.3, 179.86, 53.07]),
  region('Canada, Yukon', 1183, [-7, 139, 181], 10, [-141.01, 59.99, -123.91, 69.7]),
  region('Canada, Alberta and British Columbia', 1179, [-7, 162, 188], 13, [-139.04, 48.25, -109.98, 60.01]),
  ...[[-102, 41.67, -79.5, 60.01], [-79.5, 42, -76, 45.4]].map((part) =>
    region('Canada, Manitoba and Ontario', 1180, [-9, 157, 184], 12, part as [number, number, number, number])),
  region('Canada, eastern provinces', 1181, [-22, 160, 190], 9, [-79.85, 43.41, -52.54, 62.62]),
  region('Canada, Northwest Territories, Nunavut and Saskatchewan', 1182, [4, 159, 188], 8, [-136.46, 49, -60.72, 83.17]),
  region('Canada', 1172, [-10, 158, 187], 20, [-141.01, 40, -44, 83.17]),
  region('Greenland, Hayes Peninsula', 1186, [11, 114, 195], 44, [-73.29, 75.86, -60.98, 79.2]),
  region('Bahamas, San Salvador', 1178, [1, 140, 165], 44, [-74.6, 23.9, -74.37, 24.19]),
  region('Bahamas', 1177, [-4, 154, 178], 8, [-79.04, 20.86, -72.68, 27.29]),
  region('Cuba', 1185, [-9, 152, 178], 44, [-85.01, 19.77, -74.07, 23.25]),
  region('Canal Zone', 1184, [0, 125, 201], 35, [-80.07, 8.82, -79.46, 9.45]),
  region('Mexico', 1187, [-12, 130, 190], 12, [-118.47, 14.51, -86.68, 32.72]),
  region('Central America', 1171, [0, 125, 194], 10, [-92.29, 7.98, -82.53, 18.49]),
  region('Caribbean', 1170, [-3, 142, 183], 16, [-85.01, 13, -59.37, 23.25]),
];
const US_EAST = region('US-48 east', 1174, [-9, 161, 179], 11, [-97.22, 24.41, -66.91, 49.38]);
const US_WEST = region('US-48 west', 1175, [-8, 159, 175], 7, [-124.79, 25.83, -89.64, 49.05]);
/** Offshore, and wherever no region is stated: the whole 48 states' mean, with twice its error. */
const ELSEWHERE: MeanShift = { ...region('US-48, outside its area', 1173, [-8, 160, 176], 20, [-180, -90, 180, 90]) };

/** The mean that TR8350.2 states for a place on NAD27. */
export function meanShiftAt(lonDeg: number, latDeg: number): MeanShift {
  if (inLower48(lonDeg, latDeg)) return lonDeg > eastOf(latDeg) ? US_EAST : US_WEST;
  return REGIONS.find(({ area }) => lonDeg >= area.west && lonDeg <= area.east && latDeg >= area.south && latDeg <= area.north) ?? ELSEWHERE;
}

function region(name: string, epsg: number, [dxM, dyM, dzM]: [number, number, number], accuracyM: number, [west, south, east, north]: [number, number, number, number]): Region {
  return {
    name: `mean ${name} (TR8350.2, EPSG:${epsg})`, dxM, dyM, dzM,
    sharedSdM: Math.max(accuracyM * AXIS_SHARE, MEAN_SHIFT_LEAST_SD_M), area: { west, south, east, north },
  };
}

/**
 * TR8350.2 counts Minnesota, Missouri and Louisiana to the east, Iowa, Arkansas and Texas to the west: the longitude of
 * that line by latitude, in steps, from memory. Both means are within each other's error beside it.
 */
function eastOf(latDeg: number): number {
  if (latDeg > 45.9) return -96.7;
  if (latDeg > 43.5) return -96.45;
  if (latDeg > 40.6) return -91.1;
  if (latDeg > 36.5) return -94.62;
  if (latDeg > 33) return -90.6;
  return -93.9;
}
