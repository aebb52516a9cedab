import { sectionLayer, type SectionLayer } from '../../src/geodesy/sections/sectionLayer.js';
import type { SectionFeatures } from '../../src/geodesy/sections/types.js';
import { Random } from '../../src/numerics/random.js';
import { centreX, centreY, frame } from './testSite.js';

/** Side of a section, metres: a mile of US survey feet. */
export const MILE_M = (5280 * 1200) / 3937;
/** Standard deviation of a made corner off the regular net: real corners stray by tens of feet. */
const STRAY_M = 8;

/** Column and row, from the north-west, of a section: numbered to and fro from the north-east, as the law has it. */
function cellOf(section: number): [col: number, row: number] {
  const row = Math.floor((section - 1) / 6);
  const along = (section - 1) % 6;
  return [row % 2 === 0 ? 5 - along : along, row];
}

export interface MadeTownship {
  readonly township: string;
  readonly range: string;
  /** South-west corner in townships east and north of the one about the parcel. */
  readonly east: number;
  readonly north: number;
}

/** Townships of an invented survey: the first holds the test parcel in its section 15. Corners stray, and all is turned by a degree. */
export const MADE_TOWNSHIPS: readonly MadeTownship[] = [
  { township: '5N', range: '1E', east: 0, north: 0 },
  { township: '5N', range: '2E', east: 1, north: 0 },
  { township: '5N', range: '1W', east: -1, north: 0 },
  { township: '6N', range: '1E', east: 0, north: 1 },
];

/** Polygons of every section, each with its four corners and quarter corners, in the test site's frame. */
export function madeSections(townships: readonly MadeTownship[] = MADE_TOWNSHIPS, seed = 7): SectionFeatures {
  const corners = new Map<string, [number, number]>();
  const random = new Random(seed);
  const turn = Math.PI / 180;
  // Section 15 is the third column and third row of its township; the parcel's centre is made its middle.
  const corner = (col: number, row: number): [number, number] => {
    const key = `${col} ${row}`;
    const known = corners.get(key);
    if (known) return known;
    const [u, v] = [(col - 3.5) * MILE_M + STRAY_M * random.normal(), (row - 3.5) * MILE_M + STRAY_M * random.normal()];
    const made: [number, number] = [centreX + u * Math.cos(turn) - v * Math.sin(turn), centreY + u * Math.sin(turn) + v * Math.cos(turn)];
    corners.set(key, made);
    return made;
  };
  const features = townships.flatMap(({ township, range, east, north }) => Array.from({ length: 36 }, (_, i) => {
    const [col, fromNorth] = cellOf(i + 1);
    const [c, r] = [col + 6 * east, 5 - fromNorth + 6 * north];
    const ring = [corner(c, r), corner(c + 0.5, r), corner(c + 1, r), corner(c + 1, r + 0.5), corner(c + 1, r + 1), corner(c + 0.5, r + 1), corner(c, r + 1), corner(c, r + 0.5), corner(c, r)];
    return {
      geometry: { type: 'Polygon' as const, coordinates: [ring.map(([x, y]) => [x, y])] },
      properties: { TWNSHPNO: township, RANGENO: range, FRSTDIVNO: String(i + 1), PRINMERCD: '06' },
    };
  }));
  return { source: 'sections.shp', crs: frame, features };
}

export function madeLayer(townships?: readonly MadeTownship[]): SectionLayer {
  return sectionLayer(madeSections(townships));
}
