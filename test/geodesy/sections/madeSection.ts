import type { Polygon } from 'geojson';
import { crs } from '../../../src/geodesy/crs.js';
import { sectionGeometry } from '../../../src/geodesy/sections/sectionGeometry.js';
import type { FootageCalls, Section, Side } from '../../../src/geodesy/sections/types.js';
import { US_SURVEY_FOOT_M } from '../../../src/units.js';
import { geodesicAzimuthDeg, geodesicFrom, geodesicM, type LonLat } from './geodesicPlace.js';

export const FT = US_SURVEY_FOOT_M;
/** Ohio South, in metres. */
export const MADE_FRAME = crs(32123);
const MIDDLE: LonLat = [-82.1, 39.4];
const RAD = Math.PI / 180;

export type Feet = readonly [east: number, north: number];

/** A place some feet from the middle, laid off by a geodesic, in frame metres. */
export function laidOff([east, north]: Feet): [number, number] {
  const azimuth = Math.atan2(east, north) / RAD;
  return MADE_FRAME.forward(...geodesicFrom(MIDDLE, azimuth, Math.hypot(east, north) * FT));
}

/** Feet east and north of the middle, by the geodesic to a place in frame metres. */
export function feetOf(x: number, y: number): [number, number] {
  const place: LonLat = MADE_FRAME.inverse(x, y);
  const distance = geodesicM(MIDDLE, place) / FT;
  const azimuth = geodesicAzimuthDeg(MIDDLE, place) * RAD;
  return [distance * Math.sin(azimuth), distance * Math.cos(azimuth)];
}

export function polygonOf(feet: readonly Feet[]): Polygon {
  const ring = feet.map(laidOff);
  return { type: 'Polygon', coordinates: [[...ring, ring[0]!]] };
}

export function madeSection(feet: readonly Feet[]): Section {
  return sectionGeometry(polygonOf(feet), MADE_FRAME, { where: 'made.geojson, feature 1', name: 'section 1' });
}

export const SQUARE: readonly Feet[] = [[-2640, -2640], [2640, -2640], [2640, 2640], [-2640, 2640]];

export function calls(first: readonly [number, Side], second: readonly [number, Side]): FootageCalls {
  return [{ distanceM: first[0] * FT, resolutionM: FT, from: first[1] }, { distanceM: second[0] * FT, resolutionM: FT, from: second[1] }];
}
