/** A line of longitude and latitude, from west to east. */
type Line = readonly (readonly [number, number])[];

/**
 * The 48 states' borders with Canada and Mexico, longitude against latitude, drawn to some 20 km, from memory: beside a
 * border either neighbour's mean is within its error.
 */
const NORTH: Line = [
  [-125, 48.4], [-123.3, 48.4], [-123.1, 49], [-95.2, 49], [-94.6, 48.7], [-93, 48.6], [-91.5, 48.07], [-89.6, 48], [-88.4, 48.3], [-84.9, 46.9],
  [-84.5, 46.45], [-83.5, 45.9], [-82.5, 45.3], [-82.4, 43], [-82.9, 42.3], [-82.7, 41.7], [-81.2, 42.2], [-79, 42.85], [-79.05, 43.45], [-76.8, 43.63],
  [-76.3, 44.2], [-75, 44.98], [-71.5, 45], [-70.9, 45.3], [-70.3, 45.9], [-70, 46.7], [-69.2, 47.45], [-68.3, 47.35], [-67.8, 47.07], [-67.7, 45.6], [-66.9, 44.8], [-66.8, 44.4],
];
const SOUTH: Line = [
  [-125, 32.53], [-117.1, 32.53], [-114.8, 32.5], [-111, 31.33], [-108.2, 31.33], [-106.5, 31.78], [-104.5, 29.6], [-103.2, 29], [-102.5, 29.7], [-101, 29.6],
  [-99.5, 27.5], [-97.2, 25.9], [-96.9, 25.9], [-83, 24.4], [-79.9, 24.4], [-79.8, 27.5], [-75, 33], [-66.8, 40],
];

/** Whether a place lies in the 48 states or close off their coasts. */
export function inLower48(lonDeg: number, latDeg: number): boolean {
  return lonDeg >= NORTH[0]![0] && lonDeg <= NORTH.at(-1)![0] && latDeg <= along(NORTH, lonDeg) && latDeg >= along(SOUTH, lonDeg);
}

/** Area of use of NADCON's lower 48 grid, sea included. Source: EPSG:1241, extent 2374 (latitude 23.81 to 49.38, longitude −129.17 to −65.69). */
const WITH_SEA = { west: -129.17, south: 23.81, east: -65.69, north: 49.38 };
/** Between these the southern edge is Mexico's land, elsewhere the sea. */
const MEXICO = { west: -117.1, east: -97.2 };

/** Whether a place lies in the 48 states or their seas; Canada and Mexico are left out. */
export function inLower48OrSea(lonDeg: number, latDeg: number): boolean {
  if (!(lonDeg >= WITH_SEA.west && lonDeg <= WITH_SEA.east && latDeg >= WITH_SEA.south && latDeg <= WITH_SEA.north)) return false;
  const lon = Math.min(Math.max(lonDeg, NORTH[0]![0]), NORTH.at(-1)![0]);
  if (latDeg > along(NORTH, lon)) return false;
  return lonDeg <= MEXICO.west || lonDeg >= MEXICO.east || latDeg >= along(SOUTH, lonDeg);
}

function along(line: Line, lonDeg: number): number {
  const next = Math.max(line.findIndex(([lon]) => lon >= lonDeg), 1);
  const [[lonA, latA], [lonB, latB]] = [line[next - 1]!, line[next]!];
  return latA + ((latB - latA) * (lonDeg - lonA)) / (lonB - lonA);
}
