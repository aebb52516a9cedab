import { areaBounds, areaM2 } from '../density/area.js';
import type { Area, Rings } from '../density/types.js';
import { clipAreas } from '../site/clipAreas.js';
import { linePieces, type Piece } from './parallelLines.js';

/** Ground up to this many spacings from a line is left without a line of its own: half a spacing, and a stride more. */
const FILL_BEYOND = 0.6;
/** A gap smaller than this part of a square of the spacing is left: it is the rounding of the polygons or a sliver. */
const SMALL_GAP = 0.02;
/** Each round fills what the one before has left; more than three have never filled anything. */
const ROUNDS = 3;
/** Corners of the half circle round a line's end. */
const END_CORNERS = 12;

export interface FilledLines {
  readonly pieces: readonly Piece[];
  /** Pieces too short to be walked. */
  readonly dropped: number;
  /** Ground farther than half a spacing from every line, m². */
  readonly uncoveredM2: number;
}

/**
 * Drops pieces shorter than `minLengthM` and adds short lines where the ground between regular lines is left out: tips of a
 * parcel that end between two lines, nooks behind a pond. All in the lines' frame.
 */
export function fillGaps(areaUV: Area, regular: readonly Piece[], options: { readonly spacingM: number; readonly minLengthM: number }): FilledLines {
  const { spacingM, minLengthM } = options;
  const long = ({ u0, u1 }: Piece): boolean => u1 - u0 >= minLengthM;
  let pieces = regular.filter(long);
  for (let round = 0; round < ROUNDS; round++) {
    const added = beyond(areaUV, pieces, FILL_BEYOND * spacingM).flatMap((rings) => {
      if (areaM2([rings]) < SMALL_GAP * spacingM ** 2) return [];
      return lineThrough(rings, areaUV, minLengthM).filter(long);
    });
    if (added.length === 0) break;
    pieces = [...pieces, ...added];
  }
  return {
    pieces: pieces.toSorted((a, b) => a.v - b.v || a.u0 - b.u0),
    dropped: regular.length - regular.filter(long).length,
    uncoveredM2: areaM2(beyond(areaUV, pieces, spacingM / 2)),
  };
}

/** What lies farther than `radiusM` from every piece. */
function beyond(areaUV: Area, pieces: readonly Piece[], radiusM: number): Area {
  return clipAreas('difference', areaUV, pieces.map((piece) => [around(piece, radiusM)]));
}

/** Everything within `radiusM` of a piece, counter-clockwise; round ends drawn inside their circle. */
function around({ v, u0, u1 }: Piece, radiusM: number): Array<[number, number]> {
  const end = (u: number, from: number): Array<[number, number]> => Array.from({ length: END_CORNERS + 1 }, (_, i) => {
    const angle = from + (Math.PI * i) / END_CORNERS;
    return [u + radiusM * Math.cos(angle), v + radiusM * Math.sin(angle)];
  });
  const ring = [...end(u1, -Math.PI / 2), ...end(u0, Math.PI / 2)];
  return [...ring, ring[0]!];
}

/** A line along the middle of a gap, as far as the gap reaches and the ground allows; lengthened to `minLengthM` where it can be. */
function lineThrough(gap: Rings, areaUV: Area, minLengthM: number): Piece[] {
  const { west, east, south, north } = areaBounds([gap]);
  const v = (south + north) / 2;
  const missing = Math.max(0, minLengthM - (east - west)) / 2;
  return linePieces(areaUV, v).flatMap(({ u0, u1 }) => {
    if (u1 <= west || u0 >= east) return [];
    // What one end cannot give the other gives, so that the line stays long enough.
    const from = Math.max(u0, Math.min(west - missing, u1 - minLengthM));
    const to = Math.min(u1, Math.max(east + missing, from + minLengthM));
    return [{ v, u0: from, u1: to }];
  });
}
