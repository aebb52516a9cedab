import { areaBounds } from '../density/area.js';
import { UserError } from '../errors.js';
import { projectArrays } from '../geodesy/projectArrays.js';
import type { Datum } from '../geodesy/types.js';
import { median } from '../numerics/robust.js';
import type { Site } from '../site/types.js';
import { numberColumn } from '../table/numberColumn.js';
import type { ReadingFile } from './readingSource.js';

/** Readings farther than this from the parcel are another place: a wrong column, sign, zone or unit. */
export const FAR_M = 5000;
/** For telling a mistake in degrees apart; the accuracy of a sphere will do. */
const METRES_PER_DEGREE = 111_195;

export interface Places {
  /** Frame metres; NaN where the row has no position. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** How positions were moved to the frame, in words, and the largest standard error of that on each axis, metres. */
  readonly shift: string;
  readonly shiftSdM: number;
}

/**
 * Positions of a file's rows in the survey's frame. A file that lies kilometres from the parcel is a UserError:
 * `coordinates_swapped` where longitude and latitude the other way round would lie there, else `outside_area`.
 */
export function readingPlaces(file: ReadingFile, site: Site): Places {
  const { longitude, latitude, easting, northing } = file.columns;
  if (longitude !== undefined && latitude !== undefined) return fromDegrees(file, site, [longitude, latitude]);
  if (easting !== undefined && northing !== undefined) return fromGrid(file, site, [easting, northing]);
  throw new UserError({
    code: 'key_missing', where: `columns of ${file.table.source}`, found: `the columns ${Object.keys(file.columns).join(', ')}`,
    wanted: 'longitude and latitude, or easting and northing',
    advice: `name them in the survey file; ${file.table.source} has ${file.table.names.join(', ')}`,
  });
}

function fromDegrees(file: ReadingFile, site: Site, [lonName, latName]: readonly [string, string]): Places {
  const lon = numberColumn(file.table, lonName, { allowEmpty: true });
  const lat = numberColumn(file.table, latName, { allowEmpty: true });
  checkDegrees(lon, lat, { file, site, names: `columns ${lonName} and ${latName}` });
  return toFrame(lon, lat, { site, datum: file.datum ?? 'WGS 84' });
}

function fromGrid(file: ReadingFile, site: Site, [eastName, northName]: readonly [string, string]): Places {
  const own = file.crs;
  if (!own || own.kind !== 'projected') {
    throw new UserError({
      code: 'crs_missing', where: file.table.source, found: `eastings and northings ${own ? `in ${own.code}, which is geographic` : 'without a CRS'}`,
      wanted: '"crs" with a projected EPSG code beside the columns',
    });
  }
  const scale = own.metresPerUnit;
  const x = numberColumn(file.table, eastName, { allowEmpty: true }).map((value) => value * scale);
  const y = numberColumn(file.table, northName, { allowEmpty: true }).map((value) => value * scale);
  if (own.code !== site.frame.code) {
    const lon = new Float64Array(x.length).fill(NaN);
    const lat = new Float64Array(x.length).fill(NaN);
    for (let i = 0; i < x.length; i++) if (!Number.isNaN(x[i]! + y[i]!)) [lon[i], lat[i]] = own.inverse(x[i]!, y[i]!);
    checkDegrees(lon, lat, { file, site, names: `columns ${eastName} and ${northName}, ${own.code}` });
    return toFrame(lon, lat, { site, datum: own.datum });
  }
  const middle = [median(x), median(y)] as const;
  const distanceM = distanceFrom(site, middle[0], middle[1]);
  if (distanceM > FAR_M) {
    const swapped = distanceFrom(site, middle[1], middle[0]) <= FAR_M;
    throw far(file, { names: `columns ${eastName} and ${northName}`, swapped, distanceM, found: `easting ${(middle[0] / scale).toFixed(1)}, northing ${(middle[1] / scale).toFixed(1)} at their middle` });
  }
  return { x, y, shift: `none (${own.code} is the survey's own)`, shiftSdM: 0 };
}

function toFrame(lon: Float64Array, lat: Float64Array, { site, datum }: { site: Site; datum: Datum }): Places {
  const moved = site.shiftFrom(datum).arrays(lon, lat);
  const { x, y } = projectArrays(site.frame, moved.lonDeg, moved.latDeg);
  return { x, y, shift: moved.shifts.join('; '), shiftSdM: Math.hypot(moved.sdM, moved.sharedSdM) };
}

/** Checks in degrees, before anything is projected: a projection of a place on the other side of the earth says nothing. */
function checkDegrees(lon: Float64Array, lat: Float64Array, { file, site, names }: { file: ReadingFile; site: Site; names: string }): void {
  const { west, south, east, north } = areaBounds(site.parcel);
  const [lon0, lat0] = site.frame.inverse((west + east) / 2, (south + north) / 2);
  const reachM = FAR_M + Math.hypot(east - west, north - south) / 2;
  const awayM = (lonDeg: number, latDeg: number): number =>
    METRES_PER_DEGREE * Math.hypot((lonDeg - lon0) * Math.cos(lat0 * Math.PI / 180), latDeg - lat0);
  const middle = [median(lon), median(lat)] as const;
  const distanceM = awayM(middle[0], middle[1]);
  if (!(distanceM > reachM)) return;
  throw far(file, {
    names, distanceM, swapped: awayM(middle[1], middle[0]) <= reachM, found: `longitude ${middle[0].toFixed(5)}, latitude ${middle[1].toFixed(5)} at their middle`,
    ...(awayM(-middle[0], middle[1]) <= reachM ? { advice: 'the longitude has the wrong sign: west of Greenwich is negative' } : {}),
  });
}

function distanceFrom(site: Site, x: number, y: number): number {
  const { west, south, east, north } = areaBounds(site.parcel);
  return Math.hypot(Math.max(west - x, 0, x - east), Math.max(south - y, 0, y - north));
}

function far(file: ReadingFile, { names, swapped, distanceM, found, advice }: { names: string; swapped: boolean; distanceM: number; found: string; advice?: string }): UserError {
  const where = `${file.table.source}, row 1 to ${file.table.rows}, ${names}`;
  if (swapped) {
    return new UserError({ code: 'coordinates_swapped', where, found: `${found}, which lies in the parcel the other way round`, wanted: 'each coordinate in its own column', advice: 'exchange the two column names in the survey file' });
  }
  return new UserError({
    code: 'outside_area', where, found: `${found}, ${Math.round(distanceM / 1000)} km from the parcel`, wanted: `readings within ${FAR_M / 1000} km of it`,
    advice: advice ?? 'check the columns, their CRS and unit, and the parcel',
  });
}
