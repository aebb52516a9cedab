import { areaBounds } from '../density/area.js';
import type { Area } from '../density/types.js';

/** A piece of a line: from u0 to u1 (u0 < u1) at v, in a frame of lines. */
export interface Piece {
  readonly v: number;
  readonly u0: number;
  readonly u1: number;
}

/** A width that exceeds a whole number of spacings by less needs no further line: nobody knows a boundary to the centimetre. */
const WIDTH_SLACK_M = 0.01;

/** A gap in a line below this is a corner that the line grazes: it is walked through. */
const GRAZE_M = 0.05;

/** Places v of parallel lines over a band: as few as leave no point of the band farther than half a spacing from one, centred. */
export function linePlaces(low: number, high: number, spacingM: number): number[] {
  const count = Math.max(1, Math.ceil((high - low - WIDTH_SLACK_M) / spacingM));
  const first = (low + high) / 2 - ((count - 1) / 2) * spacingM;
  return Array.from({ length: count }, (_, i) => first + i * spacingM);
}

/** Pieces of parallel lines within an area, both in the lines' frame; by v, then by u. */
export function parallelLines(areaUV: Area, spacingM: number): Piece[] {
  const { south, north } = areaBounds(areaUV);
  const edges = edgesByTop(areaUV);
  return linePlaces(south, north, spacingM).flatMap((v) => piecesAt(edges, v));
}

/** Pieces of the line at v within an area. */
export function linePieces(areaUV: Area, v: number): Piece[] {
  return piecesAt(edgesByTop(areaUV), v);
}

interface Edges {
  /** Four numbers an edge: u, v of its lower end, u, v of its upper one. */
  readonly ends: Float64Array;
}

/** Edges that rise; level ones never cut a line, since a line counts as lying just above its v. */
function edgesByTop(area: Area): Edges {
  const ends: number[] = [];
  for (const rings of area) {
    for (const ring of rings) {
      for (let i = 0; i < ring.length; i++) {
        const [a, b] = [ring[i]!, ring[(i + 1) % ring.length]!];
        if (a[1] < b[1]) ends.push(a[0], a[1], b[0], b[1]);
        else if (b[1] < a[1]) ends.push(b[0], b[1], a[0], a[1]);
      }
    }
  }
  return { ends: Float64Array.from(ends) };
}

function piecesAt({ ends }: Edges, v: number): Piece[] {
  const cuts: number[] = [];
  for (let i = 0; i < ends.length; i += 4) {
    const [u0, v0, u1, v1] = [ends[i]!, ends[i + 1]!, ends[i + 2]!, ends[i + 3]!];
    // Lower end in, upper end out: a corner is counted once, and a tip that only touches the line twice or never.
    if (v0 <= v && v < v1) cuts.push(u0 + ((u1 - u0) * (v - v0)) / (v1 - v0));
  }
  cuts.sort((a, b) => a - b);
  const pieces: Piece[] = [];
  for (let i = 0; i + 1 < cuts.length; i += 2) {
    const [u0, u1] = [cuts[i]!, cuts[i + 1]!];
    const last = pieces.at(-1);
    // Two polygons that share an edge make one piece, too.
    if (last && u0 <= last.u1 + GRAZE_M) pieces[pieces.length - 1] = { v, u0: last.u0, u1: Math.max(last.u1, u1) };
    else if (u1 > u0) pieces.push({ v, u0, u1 });
  }
  return pieces;
}
