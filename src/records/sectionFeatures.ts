import type { Geometry, Position } from 'geojson';
import type { SectionFeatures } from '../geodesy/sections/types.js';
import type { Crs } from '../geodesy/types.js';
import type { Site } from '../site/types.js';
import type { VectorInput } from '../vector/types.js';

/** A layer of sections in the survey's frame, and what its move there adds to the error of its corners. */
export interface MovedSections {
  readonly features: SectionFeatures;
  /** Standard error per axis of the datum shift, metres; what neighbours share is in it, since corners are used one section at a time. */
  readonly shiftSdM: number;
}

/** Moves polygons of sections to the frame. Throws UserError where the layer's datum or projection has no such place. */
export function sectionFeatures(input: VectorInput, { frame, shiftFrom }: Pick<Site, 'frame' | 'shiftFrom'>): MovedSections {
  let shiftSdM = 0;
  const from: Crs = input.crs;
  const shift = shiftFrom(from.datum);
  const same = from.code === frame.code;
  const move = ([x, y]: Position): Position => {
    if (same) return [x!, y!];
    const moved = shift.place(...(from.kind === 'geographic' ? [x!, y!] as const : from.inverse(x!, y!)));
    shiftSdM = Math.max(shiftSdM, Math.hypot(moved.sdM, moved.sharedSdM));
    return frame.forward(moved.lonDeg, moved.latDeg);
  };
  const moved = (geometry: Geometry | null): Geometry | null => {
    if (geometry?.type === 'Polygon') return { ...geometry, coordinates: geometry.coordinates.map((ring) => ring.map(move)) };
    if (geometry?.type === 'MultiPolygon') return { ...geometry, coordinates: geometry.coordinates.map((part) => part.map((ring) => ring.map(move))) };
    return geometry;
  };
  const features = input.features.map(({ geometry, properties }) => ({ geometry: moved(geometry), properties }));
  return { features: { source: input.source, crs: frame, features }, shiftSdM };
}
