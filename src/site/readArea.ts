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
export async function readArea(path: string, { files, frame, shiftFrom, crs, warn }: {
  files: FileSource; frame: Crs; shiftFrom(datum: Datum): DatumShift; crs: Crs | undefined; warn(message: string): void;
}): Promise<Area> {
  const source = baseName(path);
  const input = await readVector(path, files, { crs: crs ?? null, crsKey: 'parcel_crs' });
  const from = input.crs;
  input.notes.forEach(warn);
  const area: Rings[] = [];
  input.features.forEach(({ geometry }, i) => {
    const where = `${source}, feature ${i + 1}`;
    if (geometry?.type === 'Polygon') area.push(rings(geometry.coordinates, where, from));
    else if (geometry?.type === 'MultiPolygon') area.push(...geometry.coordinates.map((part) => rings(part, where, from)));
    else throw new UserError({ code: 'polygon_invalid', where, found: geometry ? `a ${geometry.type}` : 'no geometry', wanted: 'a polygon' });
  });
  if (area.length === 0) throw new UserError({ code: 'file_empty', where: source, found: 'no polygon', wanted: 'at least one polygon' });
  const move = mover(from, frame, shiftFrom);
  return clipAreas('union', area.map((polygonRings) => polygonRings.map((ring) => ring.map(([x, y]) => move(x, y)))));
}

function rings(coordinates: Position[][], where: string, { metresPerUnit, unit }: Crs): Rings {
  for (const ring of coordinates) {
    if (ring.length < 4) throw new UserError({ code: 'polygon_invalid', where, found: `a ring of ${ring.length} points`, wanted: 'at least four, the last equal to the first' });
    if (ring.some((point) => !point.every(Number.isFinite))) throw new UserError({ code: 'polygon_invalid', where, found: 'a coordinate that is no number', wanted: 'numbers' });
  }
  const crossing = kinks(polygon(coordinates)).features[0];
  if (crossing) {
    const [x, y] = crossing.geometry.coordinates as [number, number];
    throw new UserError({ code: 'polygon_invalid', where, found: `an outline that crosses itself at ${round(x / metresPerUnit)}, ${round(y / metresPerUnit)} (${unit})`, wanted: 'a simple outline', advice: 'mend the polygon in a GIS' });
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

function round(value: number): number {
  return Math.round(value * 1e6) / 1e6;
}
