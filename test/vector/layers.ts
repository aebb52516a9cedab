import type { Geometry, Position } from 'geojson';
import { UserError } from '../../src/errors.js';
import type { FileSource } from '../../src/files.js';
import { crs } from '../../src/geodesy/crs.js';
import type { Feature, Layer } from '../../src/vector/types.js';
import { US_SURVEY_FOOT_M } from '../../src/units.js';

/** A corner in Pennsylvania South (EPSG:2272), in the metres that layers hold; its feet are whole. */
export const X0 = 1_500_000 * US_SURVEY_FOOT_M;
export const Y0 = 400_000 * US_SURVEY_FOOT_M;
const FT = US_SURVEY_FOOT_M;

/** Position in whole feet from the corner. */
export const ft = (east: number, north: number): Position => [X0 + east * FT, Y0 + north * FT];
export const ring = (...corners: ReadonlyArray<readonly [number, number]>): Position[] => [...corners, corners[0]!].map(([e, n]) => ft(e, n));

const square = (east: number, north: number, side: number): Position[] => ring([east, north], [east + side, north], [east + side, north + side], [east, north + side]);

export const GEOMETRIES: Readonly<Record<Layer['geometryType'], readonly (Geometry | null)[]>> = {
  Point: [{ type: 'Point', coordinates: ft(10, 20) }, { type: 'Point', coordinates: ft(-10.5, 40.25) }, null],
  LineString: [{ type: 'LineString', coordinates: [ft(0, 0), ft(100, 50), ft(100, 80)] }, { type: 'LineString', coordinates: [ft(5, 5), ft(5, -5)] }, null],
  MultiLineString: [{ type: 'MultiLineString', coordinates: [[ft(0, 0), ft(100, 50)], [ft(200, 200), ft(220, 210), ft(240, 200)]] }, { type: 'LineString', coordinates: [ft(5, 5), ft(5, -5)] }, null],
  // The outer ring is given clockwise, the holes counter-clockwise: the wrong way round for GeoJSON, the right one for a Shapefile.
  Polygon: [
    { type: 'Polygon', coordinates: [square(0, 0, 100).toReversed(), square(10, 10, 20), square(50, 50, 30)] },
    { type: 'Polygon', coordinates: [square(300, 300, 10)] },
    null,
  ],
  MultiPolygon: [
    { type: 'MultiPolygon', coordinates: [[square(0, 0, 100), square(10, 10, 20)], [square(200, 0, 50), square(210, 10, 5).toReversed(), square(220, 20, 5)]] },
    { type: 'Polygon', coordinates: [square(300, 300, 10)] },
    null,
  ],
};

const VALUES: readonly Feature['values'][] = [
  { name: 'Großer Őrség 北', count: 7, size_m: 12.3456 },
  { name: 'a, "b"', count: -2_000_000_000_123, size_m: NaN },
  { name: null, count: null, size_m: -0.0001 },
];

export function layerOf(geometryType: Layer['geometryType'], features?: readonly Feature[]): Layer {
  return {
    name: `test_${geometryType.toLowerCase()}`, title: 'Prüfung', crs: crs('EPSG:2272'), geometryType,
    fields: [
      { name: 'name', type: 'text', title: 'name of the thing' },
      { name: 'count', type: 'integer', title: 'how many' },
      { name: 'size_m', type: 'real', title: 'size, m', decimals: 2 },
    ],
    features: features ?? GEOMETRIES[geometryType].map((geometry, i) => ({ geometry, values: VALUES[i]! })),
  };
}
export const GEOMETRY_TYPES = Object.keys(GEOMETRIES) as Layer['geometryType'][];

/** Files in memory, by path. */
export function memoryFiles(files: Readonly<Record<string, Uint8Array | string>>): FileSource {
  return {
    has: path => Promise.resolve(path in files),
    read: path => {
      const file = files[path];
      if (file === undefined) return Promise.reject(new UserError({ code: 'file_missing', where: path, found: 'no such file', wanted: 'a file' }));
      return Promise.resolve(typeof file === 'string' ? new TextEncoder().encode(file) : file);
    },
  };
}
