import { areaBounds, areaM2 } from '../density/area.js';
import type { Area } from '../density/types.js';
import type { Target } from '../detection/types.js';
import { UserError } from '../errors.js';
import { mainFieldInFrame } from '../field/mainField.js';
import { poleFromCasing } from '../field/casing.js';
import { baseName, extension, type FileSource } from '../files.js';
import { areaOfUseWarning } from '../geodesy/areaOfUse.js';
import { convergenceDeg } from '../geodesy/convergence.js';
import { crs } from '../geodesy/crs.js';
import { datumShift, type DatumSetting } from '../geodesy/datumShift.js';
import { decimalYear } from '../geodesy/decimalYear.js';
import { readShiftGrid, type ShiftGrid } from '../geodesy/shiftGrid.js';
import type { Crs, Datum, DatumShift, ReceiverFrame } from '../geodesy/types.js';
import { clipAreas } from './clipAreas.js';
import { readArea } from './readArea.js';
import type { Site } from './types.js';

/** The survey file's common keys, under the names of code. */
export interface SiteSettings {
  readonly title: string;
  readonly crs: string;
  /** As in 2026-04-14. */
  readonly date: string;
  readonly parcel: string;
  readonly parcelCrs?: string;
  readonly exclusions: readonly string[];
  /** Datum-shift grids, or folders of them. */
  readonly grids: readonly string[];
  readonly receiver?: { readonly frame: ReceiverFrame; readonly epoch?: number };
  readonly target?: {
    readonly poleAm?: readonly [number, number];
    readonly depthM?: readonly [number, number];
    readonly casing?: { readonly odIn: number; readonly lbPerFt: number; readonly magnetisationAPerM: readonly [number, number] };
  };
}

export const SITE_DEFAULTS = Object.freeze({
  title: 'Survey without a title',
  seed: 0,
  exclusions: Object.freeze([]) as readonly string[],
  grids: Object.freeze([]) as readonly string[],
  /** Working range of a casing's top pole, A·m (from memory: passive magnetic ranging literature). */
  poleAm: Object.freeze([50, 500]) as readonly [number, number],
  /** From a casing that stands at the surface to one cut off below plough depth, m (common practice). */
  depthM: Object.freeze([0, 3]) as readonly [number, number],
});

/** A parcel wider than this is more likely in another unit than a day's work on foot or from the air, m. */
const WIDEST_PARCEL_M = 300_000;
const DATUMS: ReadonlySet<string> = new Set<Datum>(['NAD27', 'NAD83', 'NAD83(2011)', 'WGS 84']);
const GRID_FILES: ReadonlySet<string> = new Set(['gsb', 'tif', 'tiff', 'ct2', 'lla', '']);

/** Reads the ground and settles the frame, the datum shifts, the main field and the target. */
export async function makeSite(settings: SiteSettings, { files, where, warn }: { files: Files; where: string; warn(message: string): void }): Promise<Site> {
  const frame = crs(settings.crs, `${where}, crs`);
  if (frame.kind !== 'projected') {
    throw new UserError({ code: 'crs_unknown', where: `${where}, crs`, found: `${frame.code} (${frame.name}), which is geographic`, wanted: 'a projected CRS: its State Plane or UTM zone' });
  }
  const year = decimalYear(settings.date, `${where}, date`);
  const grids = await readGrids(settings.grids, { files, warn });
  const setting: Partial<DatumSetting> = { grids, ...(settings.receiver ? { receiver: { epoch: year, ...settings.receiver } } : {}) };
  const shifts = new Map<Datum, DatumShift>();
  const shiftFrom = (datum: Datum): DatumShift => {
    const known = shifts.get(datum);
    if (known) return known;
    const made = datumShift(datum, frame.datum, setting);
    shifts.set(datum, made);
    return made;
  };
  const toWgs84 = datumShift(frame.datum, 'WGS 84', setting);
  const namedCrs = settings.parcelCrs === undefined ? undefined : crs(settings.parcelCrs, `${where}, parcel_crs`);
  const read = (path: string): Promise<Area> => readArea(path, { files, frame, shiftFrom, crs: namedCrs, warn });
  const parcel = await read(settings.parcel);
  checkExtent(parcel, baseName(settings.parcel), frame, warn);
  const exclusions = (await Promise.all(settings.exclusions.map(read))).flat();
  const open = clipAreas('difference', parcel, exclusions);
  if (areaM2(open) === 0) {
    throw new UserError({ code: 'polygon_invalid', where: baseName(settings.parcel), found: 'exclusions that cover the whole parcel', wanted: 'ground that can be walked' });
  }
  const [eastM, northM] = centre(parcel);
  const [lonDeg, latDeg] = frame.inverse(eastM, northM);
  const there = toWgs84.place(lonDeg, latDeg);
  return {
    title: settings.title, frame, parcel, exclusions, open, decimalYear: year, target: makeTarget(settings.target, where), shiftFrom, toWgs84,
    mainField: mainFieldInFrame({ lonDeg: there.lonDeg, latDeg: there.latDeg, heightM: 0, decimalYear: year, convergenceDeg: convergenceDeg(frame, eastM, northM) }),
  };
}

type Files = FileSource & { list?(folder: string): Promise<string[]> };

async function readGrids(paths: readonly string[], { files, warn }: { files: Files; warn(message: string): void }): Promise<ShiftGrid[]> {
  const names: string[] = [];
  for (const path of paths) {
    if (!await files.has(path) && files.list) names.push(...(await files.list(path)).filter((name) => GRID_FILES.has(extension(name))).toSorted());
    else names.push(path);
  }
  const grids = await Promise.all(names.map(async (name) => readShiftGrid(baseName(name), await files.read(name))));
  for (const { name, from, to } of grids) {
    if (!DATUMS.has(from) || !DATUMS.has(to)) warn(`${name} leads from ${from} to ${to}, between which Ironplat moves nothing; it is not used`);
  }
  return grids;
}

function checkExtent(parcel: Area, source: string, frame: Crs, warn: (message: string) => void): void {
  const { west, south, east, north } = areaBounds(parcel);
  const width = Math.max(east - west, north - south);
  if (width > WIDEST_PARCEL_M) {
    throw new UserError({ code: 'position_invalid', where: source, found: `a parcel ${Math.round(width / 1000)} km wide in ${frame.code}`, wanted: `one below ${WIDEST_PARCEL_M / 1000} km`, advice: 'check the CRS and the unit of the file' });
  }
  const [lonDeg, latDeg] = frame.inverse(...centre(parcel));
  const warning = areaOfUseWarning(frame, lonDeg, latDeg);
  if (warning) warn(`${source}: ${warning}`);
}

function centre(area: Area): [number, number] {
  const { west, south, east, north } = areaBounds(area);
  return [(west + east) / 2, (south + north) / 2];
}

function makeTarget(stated: SiteSettings['target'], where: string): Target {
  const depthM = ordered(stated?.depthM ?? SITE_DEFAULTS.depthM, `${where}, target.depth_m`, 0);
  if (stated?.poleAm && stated.casing) {
    throw new UserError({ code: 'key_invalid', where: `${where}, target`, found: 'both pole_am and casing', wanted: 'the casing by its pole strength or by its size, not both' });
  }
  if (stated?.casing) {
    const { odIn, lbPerFt, magnetisationAPerM } = stated.casing;
    const magnetisation = ordered(magnetisationAPerM, `${where}, target.casing.magnetisation_a_per_m`, Number.MIN_VALUE);
    return {
      depthM, poleAM: poleFromCasing({ odIn, lbPerFt }, magnetisation),
      basis: `casing of ${odIn} in, ${lbPerFt} lb/ft, magnetised with ${magnetisation[0]} to ${magnetisation[1]} A/m`,
    };
  }
  const poleAM = ordered(stated?.poleAm ?? SITE_DEFAULTS.poleAm, `${where}, target.pole_am`, Number.MIN_VALUE);
  return { depthM, poleAM, basis: stated?.poleAm ? 'pole strength as stated in the survey file' : 'not stated: working range of a casing\'s top pole (from memory)' };
}

function ordered([low, high]: readonly [number, number], where: string, least: number): [number, number] {
  if (!(low >= least && low <= high)) {
    throw new UserError({ code: 'key_invalid', where, found: `${low} to ${high}`, wanted: `a lowest and a highest value, ${least > 0 ? 'above 0' : 'not below 0'}` });
  }
  return [low, high];
}
