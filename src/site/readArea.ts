import { kinks, polygon } from '@turf/turf';
import type { Position } from 'geojson';
import type { Area, Rings } from '../density/types.js';
import { UserError } from '../errors.js';
import { baseName, type FileSource } from '../files.js';
import type { Crs, Datum, DatumShift } from '../geodesy/types.js';
import { readVector } from '../vector/readVector.js';
import { clipAreas } from './clipAreas.js';

/**
 * Reads polygons into the frame. A polygon that crosses itself is refused with the place of the crossing, since its
 * inside is anybody's guess; polygons that overlap are joined.
 */
export async function readArea(path: string, { files, frame, shiftFrom, crs }: {
  files: FileSource; frame: Crs; shiftFrom(datum: Datum): DatumShift; crs: Crs | undefined;
}): Promise<Area> {
  const source = baseName(path);
  const input = await readVector(path, files, crs ? { crs } : {});
  const from = input.crs;
  if (from === null) throw crsMissing(source, input.features.map(({ geometry }) => geometry));
  const area: Rings[] = [];
  input.features.forEach(({ geometry }, i) => {
    const where = `${source}, feature ${i + 1}`;
    if (geometry?.type === 'Polygon') area.push(rings(geometry.coordinates, where));
    else if (geometry?.type === 'MultiPolygon') area.push(...geometry.coordinates.map((part) => rings(part, where)));
    else throw new UserError({ code: 'polygon_invalid', where, found: geometry ? `a ${geometry.type}` : 'no geometry', wanted: 'a polygon' });
  });
  if (area.length === 0) throw new UserError({ code: 'file_empty', where: source, found: 'no polygon', wanted: 'at least one polygon' });
  const move = mover(from, frame, shiftFrom);
  return clipAreas('union', area.map((polygonRings) => polygonRings.map((ring) => ring.map(([x, y]) => move(x, y)))));
}

function rings(coordinates: Position[][], where: string): Rings {
  for (const ring of coordinates) {
    if (ring.length < 4) throw new UserError({ code: 'polygon_invalid', where, found: `a ring of ${ring.length} points`, wanted: 'at least four, the last equal to the first' });
    if (ring.some((point) => !point.every(Number.isFinite))) throw new UserError({ code: 'polygon_invalid', where, found: 'a coordinate that is no number', wanted: 'numbers' });
  }
  const crossing = kinks(polygon(coordinates)).features[0];
  if (crossing) {
    const [x, y] = crossing.geometry.coordinates as [number, number];
    throw new UserError({ code: 'polygon_invalid', where, found: `an outline that crosses itself at ${round(x)}, ${round(y)} (metres or degrees)`, wanted: 'a simple outline', advice: 'mend the polygon in a GIS' });
  }
  return coordinates.map((ring) => ring.map(([x, y]): [number, number] => [x!, y!]));
}

function mover(from: Crs, frame: Crs, shiftFrom: (datum: Datum) => DatumShift): (x: number, y: number) => [number, number] {
  if (from.code === frame.code) return (x, y) => [x, y];
  const shift = shiftFrom(from.datum);
  return (x, y) => {
    const { lonDeg, latDeg } = shift.place(...from.inverse(x, y));
    return frame.forward(lonDeg, latDeg);
  };
}

function crsMissing(source: string, geometries: ReadonlyArray<{ type: string; coordinates?: unknown } | null>): UserError {
  const numbers = JSON.stringify(geometries[0]?.coordinates ?? []).match(/-?\d+(\.\d+)?(e[-+]?\d+)?/gi)?.slice(0, 2).map(Number) ?? [];
  const degrees = numbers.length === 2 && Math.abs(numbers[0]!) <= 180 && Math.abs(numbers[1]!) <= 90;
  return new UserError({
    code: 'crs_missing', where: source,
    found: `no CRS (no .prj beside it); its first point is ${numbers.join(', ')}${degrees ? ', which looks like degrees' : ''}`,
    wanted: 'a CRS that is stated', advice: 'add the .prj, or name the CRS in the survey file as "parcel_crs"',
  });
}

function round(value: number): number {
  return Math.round(value * 1e6) / 1e6;
}
