import { areaBounds } from '../density/area.js';
import type { Site } from '../site/types.js';
import { distanceToAreaM } from './distanceToArea.js';
import { framePlace } from './framePlace.js';
import { geodesicM, inverseOrNull, likelySlip, type Slip } from './implausible.js';
import type { Fault, RawPlace, RawRecord } from './rawRecord.js';
import type { DatumWeights } from './recordDatum.js';
import { sourceCrs, type RecordSource } from './recordSource.js';

/** Farther than this from the parcel the frame's projection is not trusted for a distance; the geodesic is said instead. */
const PROJECTED_LIMIT_M = 100_000;

/** A row that lies too far from the parcel to be a place, and the slip of the pen that would explain it. */
export interface FarPlace {
  readonly fault: Fault;
  readonly slip: Slip | null;
}

/** Null where the place is at most `maxDistanceM` from the parcel under its likeliest datum. */
export function farFromParcel(raw: RawRecord & { readonly place: RawPlace }, datums: DatumWeights, options: {
  readonly source: RecordSource; readonly site: Site; readonly maxDistanceM: number;
}): FarPlace | null {
  const { source, site, maxDistanceM } = options;
  const crs = sourceCrs(source);
  const { west, south, east, north } = areaBounds(site.parcel);
  const centre = site.frame.inverse((west + east) / 2, (south + north) / 2);
  const { place } = raw;
  const lonLat = place.kind === 'angles' ? [place.lonDeg, place.latDeg] as const : inverseOrNull(crs!, place.eastM, place.northM);
  const onEarth = lonLat !== null && Math.abs(lonLat[0]) <= 180 && Math.abs(lonLat[1]) <= 90;
  const roughM = onEarth ? geodesicM(lonLat, centre) : Infinity;
  const parcelRadiusM = Math.hypot(east - west, north - south) / 2;
  let distanceM = roughM;
  if (roughM < PROJECTED_LIMIT_M + parcelRadiusM) {
    const likeliest = datums.reduce((a, b) => (b.weight > a.weight ? b : a)).datum;
    const { x, y } = framePlace(place, { crs, shift: site.shiftFrom(likeliest), frame: site.frame });
    distanceM = distanceToAreaM(site.parcel, x, y);
  }
  if (distanceM <= maxDistanceM) return null;
  const slip = likelySlip(place, centre, { crs, limitM: maxDistanceM + parcelRadiusM });
  return {
    slip,
    fault: {
      column: raw.coordinates.columns, value: raw.coordinates.value,
      problem: onEarth
        ? `lies ${kilometres(distanceM)} from the parcel, more than the ${kilometres(maxDistanceM)} that max_distance_m allows`
        : place.kind === 'angles' ? 'is no place on Earth: a latitude goes to 90°, a longitude to 180°' : `is no place that ${crs!.code} can express`,
      advice: slip
        ? `with ${slip.words} it would lie ${Math.round(slip.distanceM)} m from the parcel's centre; correct the row`
        : 'compare the row with the permit and correct it; if it is right, raise max_distance_m',
    },
  };
}

function kilometres(lengthM: number): string {
  return `${(lengthM / 1000).toLocaleString('en-US', { maximumFractionDigits: lengthM < 100_000 ? 1 : 0 })} km`;
}
