import type { Area } from '../../src/density/types.js';
import { crs } from '../../src/geodesy/crs.js';
import { clipAreas } from '../../src/site/clipAreas.js';
import type { Site } from '../../src/site/types.js';

/** Closed ring through the corners. */
export function ring(...corners: Array<readonly [number, number]>): ReadonlyArray<readonly [number, number]> {
  return [...corners, corners[0]!];
}

export function rectangle(west: number, south: number, east: number, north: number): Area {
  return [[ring([west, south], [east, south], [east, north], [west, north])]];
}

/** Everything turned by an angle, clockwise, about the origin. */
export function turned(area: Area, byDeg: number): Area {
  const by = (byDeg * Math.PI) / 180;
  const [sin, cos] = [Math.sin(by), Math.cos(by)];
  return area.map((rings) => rings.map((each) => each.map(([x, y]) => [x * cos + y * sin, y * cos - x * sin] as const)));
}

function noShift(): never {
  throw new Error('a plan moves nothing between datums');
}

/** A site in UTM 17N; datum shifts play no part in a plan. */
export function testSite(parcel: Area, exclusions: Area = []): Site {
  return {
    title: 'Test ground', frame: crs('EPSG:26917'), parcel, exclusions, open: clipAreas('difference', parcel, exclusions), decimalYear: 2026.3,
    mainField: { totalNT: 51_000, inclinationDeg: 65, declinationDeg: -9, convergenceDeg: 0.5, unit: [-0.0697, 0.4168, -0.9063] },
    target: { poleAM: [60, 400], depthM: [0, 2.5], basis: 'test' },
    shiftFrom: noShift, toWgs84: { from: 'NAD83', to: 'WGS 84', place: noShift, arrays: noShift },
  };
}

/** Distance from a point to a segment. */
export function toSegment(x: number, y: number, { x0, y0, x1, y1 }: { x0: number; y0: number; x1: number; y1: number }): number {
  const [dx, dy] = [x1 - x0, y1 - y0];
  const t = Math.min(1, Math.max(0, ((x - x0) * dx + (y - y0) * dy) / (dx * dx + dy * dy)));
  return Math.hypot(x - x0 - t * dx, y - y0 - t * dy);
}

/** Numbers in [0, 1) that fill it evenly: additive recurrence by the golden ratio's plane (Roberts 2018, from memory). */
export function evenly(i: number): [number, number] {
  return [(0.5 + i * 0.7548776662466927) % 1, (0.5 + i * 0.5698402909980532) % 1];
}
