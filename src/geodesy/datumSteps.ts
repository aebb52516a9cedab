import { ELLIPSOIDS, fromGeocentric, toGeocentric } from './ellipsoid.js';
import { UNSTATED_ACCURACY_M } from './gridIdentity.js';
import { applyHelmert, helmertAt, ITRF2014_TO_ITRF2020, ITRF2014_TO_NAD83_2011, reverseHelmert, type Xyz } from './helmert.js';
import { meanShiftAt } from './meanShift.js';
import { reverseOffsetAt } from './offsetTables.js';
import type { Datum, DatumSetting, ShiftGrid } from './types.js';

/** A place after one step between two datums. */
export interface Moved {
  readonly lonDeg: number;
  readonly latDeg: number;
  readonly name: string;
  readonly sdM: number;
  readonly sharedSdM: number;
}

/** One step between neighbouring datums; `null` where it has nothing to say there and the next way is tried. */
export type Step = (lonDeg: number, latDeg: number) => Moved | null;

/** A grid, in its own direction or back. Its published accuracy is taken as the standard error on each axis. */
export function gridStep(grid: ShiftGrid, reverse: boolean): Step {
  const name = reverse ? `${grid.name}, reversed` : grid.name;
  return (lonDeg, latDeg) => {
    const offset = reverse ? reverseOffsetAt(grid, lonDeg, latDeg) : grid.offsetAt(lonDeg, latDeg);
    if (offset === null) return null;
    const stated = grid.statedAt?.(lonDeg, latDeg) ?? true;
    return {
      lonDeg: lonDeg + offset[0], latDeg: latDeg + offset[1], name: stated ? name : `${name}, beyond its area of use`,
      sdM: stated ? grid.accuracyM : Math.max(grid.accuracyM, UNSTATED_ACCURACY_M), sharedSdM: 0,
    };
  };
}

/**
 * The regional mean of NAD27. TR8350.2 leads to the WGS 84 of 1987, which NAD83 was made to coincide with (EPSG:1188),
 * so here it leads to NAD83; its own error is several times what lies between the two.
 */
export function meanStep(reverse: boolean): Step {
  return (lonDeg, latDeg) => {
    const mean = meanShiftAt(lonDeg, latDeg);
    const sign = reverse ? -1 : 1;
    const [from, to] = reverse ? (['NAD83', 'NAD27'] as const) : (['NAD27', 'NAD83'] as const);
    const [x, y, z] = toGeocentric(ELLIPSOIDS[from], lonDeg, latDeg);
    const [lon, lat] = fromGeocentric(ELLIPSOIDS[to], x + sign * mean.dxM, y + sign * mean.dyM, z + sign * mean.dzM);
    return { lonDeg: lon, latDeg: lat, name: reverse ? `${mean.name}, reversed` : mean.name, sdM: 0, sharedSdM: mean.sharedSdM };
  };
}

/** A null shift with its published accuracy. What it leaves out is plate motion and the frames' origins: the same for all neighbours. */
export function nullStep(name: string, axisSdM: number): Step {
  return (lonDeg, latDeg) => ({ lonDeg, latDeg, name, sdM: 0, sharedSdM: axisSdM });
}

/** EPSG's accuracy of a geocentric shift covers three axes (EPSG:1188: "2 m in each axis", stated as 4 m). */
const AXIS_SHARE = 1 / Math.sqrt(3);
export const NAD83_AS_WGS84 = nullStep('none (NAD83 as WGS 84, EPSG:1188)', 2);
export const NAD83_2011_AS_WGS84 = nullStep('none (NAD83(2011) as WGS 84, EPSG:9774)', 2 * AXIS_SHARE);
export const NAD83_AS_2011 = nullStep('none (NAD83 as NAD83(2011), EPSG:8971)', 1 * AXIS_SHARE);

type Receiver = NonNullable<DatumSetting['receiver']>;

/** A realisation of WGS 84 follows the ITRF of its day to about a centimetre (EPSG:9757). */
const WGS84_SD_M = 0.01;
/**
 * The 14 parameters carry the stable part of the plate; NAD83(2011) holds for 2010.0. What is left grows each year, by
 * millimetres on the plate and by centimetres in the belt along the Pacific coast. From memory.
 */
const MOTION_STABLE_M_PER_YEAR = 0.003;
const MOTION_PACIFIC_M_PER_YEAR = 0.025;
const PACIFIC_BELT_EAST_DEG = -114;

/** The receiver's frame at its epoch against NAD83(2011), by the 14 parameters of EPSG:8970. */
export function receiverStep({ frame, epoch }: Receiver, reverse: boolean): Step {
  const at = epoch.toFixed(2);
  if (frame === 'NAD83(2011)') return (lonDeg, latDeg) => ({ lonDeg, latDeg, name: 'none (receiver on NAD83(2011))', sdM: 0, sharedSdM: 0 });
  const ellipsoid = frame === 'WGS 84' ? ELLIPSOIDS['WGS 84'] : ELLIPSOIDS.NAD83;
  const nad83 = ELLIPSOIDS['NAD83(2011)'];
  const toNad83 = helmertAt(ITRF2014_TO_NAD83_2011, epoch);
  const toItrf2020 = helmertAt(ITRF2014_TO_ITRF2020, epoch);
  const toItrf2014 = (xyz: Xyz): Xyz => (frame === 'ITRF2020' ? reverseHelmert(toItrf2020, xyz) : xyz);
  const fromItrf2014 = (xyz: Xyz): Xyz => (frame === 'ITRF2020' ? applyHelmert(toItrf2020, xyz) : xyz);
  const name = reverse ? `NAD83(2011) to ${frame} at ${at} (EPSG:8970, reversed)` : `${frame} at ${at} to NAD83(2011) (EPSG:8970)`;
  const years = Math.abs(epoch - ITRF2014_TO_NAD83_2011.epoch);
  return (lonDeg, latDeg) => {
    const [lon, lat] = reverse
      ? fromGeocentric(ellipsoid, ...fromItrf2014(reverseHelmert(toNad83, toGeocentric(nad83, lonDeg, latDeg))))
      : fromGeocentric(nad83, ...applyHelmert(toNad83, toItrf2014(toGeocentric(ellipsoid, lonDeg, latDeg))));
    const motion = (lonDeg < PACIFIC_BELT_EAST_DEG ? MOTION_PACIFIC_M_PER_YEAR : MOTION_STABLE_M_PER_YEAR) * years;
    return { lonDeg: lon, latDeg: lat, name, sdM: 0, sharedSdM: Math.hypot(motion, frame === 'WGS 84' ? WGS84_SD_M : 0) };
  };
}

/** Grids of the setting that lead from one datum to the other, in the order given, in either direction. */
export function gridSteps(grids: readonly ShiftGrid[], from: Datum, to: Datum): Step[] {
  return grids.flatMap((grid) => {
    if (grid.from === from && grid.to === to) return [gridStep(grid, false)];
    return grid.from === to && grid.to === from ? [gridStep(grid, true)] : [];
  });
}
