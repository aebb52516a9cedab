import Flatbush from 'flatbush';

/** Neighbours looked at from each end of a line: those farther away are hardly ever next on a short walk. */
const NEIGHBOURS = 12;

/** For each end the nearest ends of other lines, nearest first. Ends are x and y in turn; 2i and 2i + 1 belong to one line. */
export function nearEnds(ends: Float64Array): Int32Array[] {
  const count = ends.length / 2;
  const index = new Flatbush(count);
  for (let i = 0; i < count; i++) index.add(ends[2 * i]!, ends[2 * i + 1]!);
  index.finish();
  return Array.from({ length: count }, (_, i) =>
    Int32Array.from(index.neighbors(ends[2 * i]!, ends[2 * i + 1]!, NEIGHBOURS, Infinity, (other) => other >> 1 !== i >> 1)));
}
