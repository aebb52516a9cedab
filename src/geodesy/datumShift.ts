import { UserError } from '../errors.js';
import { CONUS } from './conus.js';
import { gridSteps, meanStep, NAD83_2011_AS_WGS84, NAD83_AS_2011, NAD83_AS_WGS84, receiverStep, type Step } from './datumSteps.js';
import type { Datum, DatumSetting, DatumShift, ShiftedColumns, ShiftedPlace, ShiftGrid } from './types.js';

export type { DatumSetting } from './types.js';

/** The shipped grid alone, and a receiver whose frame nobody stated. */
export const DATUM_DEFAULTS: DatumSetting = Object.freeze({ grids: Object.freeze([]), shipped: true });

const FRAMES: readonly string[] = ['WGS 84', 'ITRF2014', 'ITRF2020', 'NAD83(2011)'];
/** Joins the names where more than one step was taken. */
const AND = ' + ';

/**
 * The way from one datum to another. NAD27 leads to the others through NAD83: by the first grid that covers the place,
 * else by the regional mean. Between NAD83 or NAD83(2011) and WGS 84 stands the time-dependent shift of EPSG:8970 where
 * the receiver's frame and epoch are stated, else the null shift, named with its accuracy. Errors of the steps add as
 * variances. Throws UserError `key_invalid` for a receiver that is none.
 */
export function datumShift(from: Datum, to: Datum, setting: Partial<DatumSetting> = {}): DatumShift {
  const { grids: further, shipped, receiver } = { ...DATUM_DEFAULTS, ...setting };
  const grids = shipped ? [...further, CONUS] : further;
  if (receiver) checkReceiver(receiver);
  const path = pathBetween(from, to, receiver !== undefined);
  const legs = path.slice(1).map((next, index) => legBetween(path[index]!, next, { grids, receiver }));
  const nad = path.some((datum) => datum !== 'WGS 84') && from !== to;
  const place = (lonDeg: number, latDeg: number): ShiftedPlace => {
    if (!(Math.abs(lonDeg) <= 360 && Math.abs(latDeg) <= 90)) throw noPlace(from, lonDeg, latDeg);
    const lon = turned(lonDeg);
    if (nad && !inNorthAmerica(lon, latDeg)) throw outsideArea(from, to, { found: [lonDeg, latDeg], wanted: 'a place in North America, where NAD27 and NAD83 hold', advice: 'check signs, the order of the columns and the datum' });
    if (path.includes('NAD27') && inHawaii(lon, latDeg)) throw outsideArea(from, to, { found: [lonDeg, latDeg], wanted: 'a place where NAD27 was used', advice: 'maps of Hawaii from that time are on the Old Hawaiian datum, several hundred metres off' });
    return move(legs, lon, latDeg, `none (${from})`);
  };
  return { from, to, place, arrays: (lonDeg, latDeg) => columns(place, lonDeg, latDeg) };
}

function move(legs: readonly Step[], lonDeg: number, latDeg: number, nothing: string): ShiftedPlace {
  let place: ShiftedPlace = { lonDeg, latDeg, shift: nothing, sdM: 0, sharedSdM: 0 };
  for (const leg of legs) {
    const moved = leg(place.lonDeg, place.latDeg);
    if (moved === null || !Number.isFinite(moved.lonDeg) || !Number.isFinite(moved.latDeg)) throw new Error(`no shift at ${lonDeg}, ${latDeg}`);
    place = {
      lonDeg: turned(moved.lonDeg), latDeg: moved.latDeg,
      shift: leg === legs[0] ? moved.name : place.shift + AND + moved.name,
      sdM: Math.hypot(place.sdM, moved.sdM), sharedSdM: Math.hypot(place.sharedSdM, moved.sharedSdM),
    };
  }
  return place;
}

function columns(place: (lonDeg: number, latDeg: number) => ShiftedPlace, lonDeg: ArrayLike<number>, latDeg: ArrayLike<number>): ShiftedColumns {
  if (lonDeg.length !== latDeg.length) throw new Error(`columns of ${lonDeg.length} and ${latDeg.length} rows`);
  const lon = new Float64Array(lonDeg.length).fill(NaN);
  const lat = new Float64Array(lonDeg.length).fill(NaN);
  const shifts = new Set<string>();
  let sdM = 0;
  let sharedSdM = 0;
  for (let row = 0; row < lon.length; row++) {
    if (Number.isNaN(lonDeg[row]!) || Number.isNaN(latDeg[row]!)) continue;
    const moved = place(lonDeg[row]!, latDeg[row]!);
    lon[row] = moved.lonDeg;
    lat[row] = moved.latDeg;
    shifts.add(moved.shift);
    sdM = Math.max(sdM, moved.sdM);
    sharedSdM = Math.max(sharedSdM, moved.sharedSdM);
  }
  return { lonDeg: lon, latDeg: lat, shifts: [...shifts], sdM, sharedSdM };
}

/** With a receiver stated the way between NAD83 and WGS 84 leads over NAD83(2011), which EPSG:8970 defines. */
function pathBetween(from: Datum, to: Datum, receiver: boolean): Datum[] {
  if (from === to) return [from];
  const line: Datum[] = receiver || from === 'NAD83(2011)' || to === 'NAD83(2011)' ? ['NAD27', 'NAD83', 'NAD83(2011)', 'WGS 84'] : ['NAD27', 'NAD83', 'WGS 84'];
  const [a, b] = [line.indexOf(from), line.indexOf(to)];
  return a < b ? line.slice(a, b + 1) : line.slice(b, a + 1).toReversed();
}

/** Ways between two neighbours in the order of trust; the last one always answers. */
function legBetween(from: Datum, to: Datum, { grids, receiver }: { grids: readonly ShiftGrid[]; receiver: DatumSetting['receiver'] }): Step {
  const ways = [...gridSteps(grids, from, to), lastWay(from, to, receiver)];
  return (lonDeg, latDeg) => {
    for (const way of ways) {
      const moved = way(lonDeg, latDeg);
      if (moved !== null) return moved;
    }
    return null;
  };
}

function lastWay(from: Datum, to: Datum, receiver: DatumSetting['receiver']): Step {
  if (from === 'NAD27' || to === 'NAD27') return meanStep(to === 'NAD27');
  if (from !== 'WGS 84' && to !== 'WGS 84') return NAD83_AS_2011;
  if (receiver) return receiverStep(receiver, to === 'WGS 84');
  return from === 'NAD83' || to === 'NAD83' ? NAD83_AS_WGS84 : NAD83_2011_AS_WGS84;
}

/** Area of use of NAD27 and NAD83 together (EPSG:4267, 4269), with a degree to spare; beyond it these datums mean nothing. */
const NORTH_AMERICA = { west: 166, south: 6, east: -40, north: 88 };

function inNorthAmerica(lonDeg: number, latDeg: number): boolean {
  return latDeg >= NORTH_AMERICA.south && latDeg <= NORTH_AMERICA.north && (lonDeg >= NORTH_AMERICA.west || lonDeg <= NORTH_AMERICA.east);
}

/** The Hawaiian islands, which NAD27 never reached though EPSG's box around its area holds them. */
const HAWAII = { west: -161, south: 18, east: -154, north: 23 };

function inHawaii(lonDeg: number, latDeg: number): boolean {
  return lonDeg >= HAWAII.west && lonDeg <= HAWAII.east && latDeg >= HAWAII.south && latDeg <= HAWAII.north;
}

/** Into −180 to 180. */
function turned(lonDeg: number): number {
  return lonDeg > 180 ? lonDeg - 360 : lonDeg < -180 ? lonDeg + 360 : lonDeg;
}

function checkReceiver({ frame, epoch }: NonNullable<DatumSetting['receiver']>): void {
  if (!FRAMES.includes(frame)) throw invalid('receiver.frame', frame, `one of ${FRAMES.join(', ')}`);
  // The first satellite positions in any of these frames are from the 1990s.
  if (!(epoch >= 1990 && epoch <= 2100)) throw invalid('receiver.epoch', epoch, 'the decimal year in which the positions were measured');
}

function invalid(where: string, found: unknown, wanted: string): UserError {
  return new UserError({ code: 'key_invalid', where, found: JSON.stringify(found) ?? 'nothing', wanted });
}

function noPlace(from: Datum, lonDeg: number, latDeg: number): UserError {
  return new UserError({ code: 'position_invalid', where: `datum ${from}`, found: `longitude ${lonDeg}, latitude ${latDeg}`, wanted: 'longitude and latitude in degrees' });
}

function outsideArea(from: Datum, to: Datum, { found: [lonDeg, latDeg], wanted, advice }: { found: readonly [number, number]; wanted: string; advice: string }): UserError {
  return new UserError({ code: 'outside_area', where: `shift from ${from} to ${to}`, found: `longitude ${lonDeg}, latitude ${latDeg}`, wanted, advice });
}
