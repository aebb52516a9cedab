import { areaBounds, pointInArea } from '../density/area.js';
import type { Area } from '../density/types.js';
import type { Site } from '../site/types.js';
import { distanceToAreaM } from './distanceToArea.js';
import { framePlace } from './framePlace.js';
import { geodesicM, inverseOrNull, likelySlips, type Slip } from './implausible.js';
import type { Candidate } from './placeCoordinates.js';
import type { Fault, RawText } from './rawRecord.js';
import type { Solution } from './solution.js';

/** Farther than this from the parcel the frame's projection is not trusted for a distance; the geodesic is said instead. */
const PROJECTED_LIMIT_M = 100_000;
/** Metres in a degree of latitude at most, for a first look that needs no geodesic. */
const DEGREE_M = 111_700;
const RAD = Math.PI / 180;

/** The parcel, and how far from it a record may be. */
export interface Reach {
  readonly site: Site;
  readonly maxDistanceM: number;
  /** Middle of the parcel's bounds in the frame, and in degrees. */
  readonly x: number;
  readonly y: number;
  readonly centre: readonly [lonDeg: number, latDeg: number];
  readonly parcelRadiusM: number;
}

export function reachOf(site: Site, maxDistanceM: number): Reach {
  const { west, south, east, north } = areaBounds(site.parcel);
  const [x, y] = [(west + east) / 2, (south + north) / 2];
  return { site, maxDistanceM, x, y, centre: site.frame.inverse(x, y), parcelRadiusM: Math.hypot(east - west, north - south) / 2 };
}

/** A row that lies too far from the parcel to be a place, and the slips of the pen that would explain it, likeliest first. */
export interface FarPlace {
  readonly fault: Fault;
  readonly slips: readonly Slip[];
  /** From the parcel; Infinity for what is no place at all. */
  readonly distanceM: number;
}

/** Null where the place is at most `maxDistanceM` from the parcel under its likeliest datum. */
export function farFromParcel(candidates: readonly Candidate[], text: RawText, reach: Reach): FarPlace | null {
  const { site, maxDistanceM, centre, parcelRadiusM } = reach;
  const likeliest = candidates.reduce((a, b) => (b.weight > a.weight ? b : a));
  const { place, crs, datum } = likeliest;
  const lonLat = place.kind === 'angles' ? [place.lonDeg, place.latDeg] as const : inverseOrNull(crs!, place.eastM, place.northM);
  const onEarth = lonLat !== null && Math.abs(lonLat[0]) <= 180 && Math.abs(lonLat[1]) <= 90;
  const limitM = PROJECTED_LIMIT_M + parcelRadiusM;
  const roughM = !onEarth ? Infinity : surelyWithin(lonLat, centre, limitM) ? 0 : geodesicM(lonLat, centre);
  let distanceM = roughM;
  if (roughM < limitM) {
    const { x, y } = framePlace(place, { crs, shift: site.shiftFrom(datum), frame: site.frame });
    distanceM = distanceToParcelM(reach, x, y);
  }
  if (distanceM <= maxDistanceM) return null;
  const slips = likelySlips(place, centre, { ...likeliest, limitM: maxDistanceM + parcelRadiusM });
  return {
    slips, distanceM,
    fault: {
      column: text.columns, value: text.value,
      problem: onEarth
        ? `lies ${kilometres(distanceM)} from the parcel, more than the ${kilometres(maxDistanceM)} that max_distance_m allows`
        : place.kind === 'angles' ? 'is no place on Earth: a latitude goes to 90°, a longitude to 180°' : `is no place that ${crs!.code} can express`,
      advice: farAdvice(slips[0] ?? null),
    },
  };
}

/** What to do about a place that is too far: the slip that would explain it, if one would. */
export function farAdvice(slip: Slip | null): string {
  return slip
    ? `with ${slip.words} it would lie ${Math.round(slip.distanceM)} m from the parcel's centre; correct the row`
    : 'compare the row with the permit and correct it; if it is right, raise max_distance_m';
}

/** Whether two places are nearer than a limit by a bound that needs no geodesic. */
function surelyWithin([lon, lat]: readonly [number, number], [centreLon, centreLat]: readonly [number, number], limitM: number): boolean {
  return Math.hypot((lon - centreLon) * Math.cos(Math.min(Math.abs(lat), Math.abs(centreLat)) * RAD), lat - centreLat) * DEGREE_M < limitM;
}

/** From the parcel, 0 where the place surely is within reach: who only asks whether it is needs no edge. */
function distanceToParcelM({ site, x, y, parcelRadiusM, maxDistanceM }: Reach, px: number, py: number): number {
  return Math.hypot(px - x, py - y) + parcelRadiusM <= maxDistanceM ? 0 : distanceToAreaM(site.parcel, px, py);
}

/** A solved statement that lies too far from the parcel: its distance, else null. Of an area its nearest corner counts. */
export function solutionFarM(solution: Solution, reach: Reach): number | null {
  let least = distanceToParcelM(reach, solution.x, solution.y);
  for (const part of least > reach.maxDistanceM ? solution.parts : []) {
    if (part.kind === 'area') least = Math.min(least, areaDistanceM(part.area, reach));
  }
  return least > reach.maxDistanceM ? least : null;
}

function areaDistanceM(area: Area, { site, x, y }: Reach): number {
  if (pointInArea(area, x, y)) return 0;
  return Math.min(...area.flatMap((rings) => rings[0]!.map(([px, py]) => distanceToAreaM(site.parcel, px, py))));
}

export function kilometres(lengthM: number): string {
  return `${(lengthM / 1000).toLocaleString('en-US', { maximumFractionDigits: lengthM < 100_000 ? 1 : 0 })} km`;
}
