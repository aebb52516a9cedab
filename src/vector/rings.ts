import type { Position } from 'geojson';

/** Twice the signed area of a closed ring, in its own units squared: positive where it runs counter-clockwise. */
export function doubleRingArea(ring: readonly Position[]): number {
  // Taken from the first vertex, since eastings of millions of metres would eat the digits of a small ring.
  const [x0, y0] = ring[0]!;
  let sum = 0;
  for (let i = 1; i + 1 < ring.length; i++) {
    sum += (ring[i]![0]! - x0!) * (ring[i + 1]![1]! - y0!) - (ring[i + 1]![0]! - x0!) * (ring[i]![1]! - y0!);
  }
  return sum;
}

/** The rings of a polygon with the outer one in the stated sense and its holes in the other. Flat rings stay as they are. */
export function orientRings(rings: readonly Position[][], outer: 'clockwise' | 'counter-clockwise'): Position[][] {
  return rings.map((ring, index) => {
    const wanted = (outer === 'counter-clockwise') === (index === 0) ? 1 : -1;
    return doubleRingArea(ring) * wanted < 0 ? ring.toReversed() : ring;
  });
}
