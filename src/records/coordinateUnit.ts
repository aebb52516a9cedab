import { agreement } from './agreement.js';
import { distanceToAreaM } from './distanceToArea.js';
import { farAdvice, farFromParcel } from './farFromParcel.js';
import { likelySlips, type Slip } from './implausible.js';
import type { LocateContext, RowRepair } from './locateContext.js';
import { placeCoordinates, type Candidate } from './placeCoordinates.js';
import type { Fault, RawPlace, RawText } from './rawRecord.js';
import type { Solution } from './solution.js';
import { metres, type SourceError } from './sourceError.js';

/** Coordinates solved, or why they are not, with the slips that were looked for. */
export interface CoordinateUnit {
  readonly solution: Solution | null;
  readonly fault: Fault | null;
  /** The slip that would explain a far place, where one is plainly likeliest. */
  readonly slip: Slip | null;
  readonly repairs: readonly RowRepair[];
}

/** Two repairs that lead to places nearer than this are one and the same. */
const SAME_PLACE_M = 1;

/**
 * Solves coordinates, and looks for a slip of the pen where they lie too far from the parcel. A slip counts only if it
 * brings the place within reach and, where the row names a section that lies within reach, into that section. It is mended
 * only where the survey file allows its kind and no other slip would do as well; it is listed in either case.
 */
export function coordinateUnit(candidates: readonly Candidate[], about: {
  readonly kind: Solution['kind']; readonly text: RawText; readonly said: string; readonly error: SourceError; readonly groupSdM: number;
  /** The section that the row names, solved, where it lies within reach. */
  readonly named: Solution | null;
}, context: LocateContext): CoordinateUnit {
  const { kind, text, said, error, groupSdM, named } = about;
  const place = (list: readonly Candidate[]): Solution =>
    placeCoordinates(list, { site: context.site, error, groupSdM, digits: context.settings.digits, kind, said, section: named === null ? null : areaOf(named) });
  const far = farFromParcel(candidates, text, context.reach);
  if (far === null) return { solution: place(candidates), fault: null, slip: null, repairs: [] };
  const mended = far.slips.flatMap((slip) => {
    const list = withoutSlip(candidates, slip, context);
    const solution = list === null ? null : place(list);
    if (solution === null) return [];
    const distanceM = distanceToAreaM(context.site.parcel, solution.x, solution.y);
    const fits = distanceM <= context.reach.maxDistanceM && (named === null || agreement(solution, named).p >= context.disagreeBelow);
    return fits ? [{ slip, solution, distanceM, candidate: list!.reduce((a, b) => (b.weight > a.weight ? b : a)) }] : [];
  });
  const best = mended[0] ?? null;
  const rivals = mended.filter(({ solution }) => Math.hypot(solution.x - best!.solution.x, solution.y - best!.solution.y) > SAME_PLACE_M);
  const allowed = best !== null && rivals.length === 0 && (context.settings.repairs ?? []).includes(best.slip.kind);
  const repairs = mended.map(({ slip, distanceM, candidate }): RowRepair => ({
    kind: slip.kind, column: text.columns, what: slip.words, before: text.value, after: placeText(candidate),
    distanceBeforeM: far.distanceM, distanceAfterM: distanceM, applied: allowed && slip === best!.slip,
    evidence: [
      `${metres(distanceM)} from the parcel`, ...(named === null ? [] : [`within ${named.said}, as the row says`]),
      ...(rivals.length > 0 ? [`but so would ${mended.length - 1} other`] : []),
    ].join(', '),
  }));
  if (allowed) return { solution: best.solution, fault: null, slip: null, repairs };
  return { solution: null, fault: { ...far.fault, advice: farAdvice(best?.slip ?? null) }, slip: best?.slip ?? null, repairs };
}

function areaOf(named: Solution): Solution['section'] {
  const [part] = named.parts;
  return named.section ?? (part?.kind === 'area' ? part.area : null);
}

/** The coordinates of every datum with the same slip taken out; null where one of them cannot have it. */
function withoutSlip(candidates: readonly Candidate[], slip: Slip, { reach }: LocateContext): Candidate[] | null {
  const mended = candidates.map((candidate): Candidate | null => {
    const same = likelySlips(candidate.place, reach.centre, { ...candidate, limitM: Infinity }).find(({ kind, words }) => kind === slip.kind && words === slip.words);
    return same ? { ...candidate, place: same.place, crs: same.crs } : null;
  });
  return mended.every((each) => each !== null) ? mended : null;
}

/** Coordinates as they would stand in a file: degrees, or the CRS's own unit. */
function placeText({ place, crs }: { readonly place: RawPlace; readonly crs: Candidate['crs'] }): string {
  const digits = (value: number, resolution: number): string => value.toFixed(Math.min(12, Math.max(0, Math.round(-Math.log10(resolution)))));
  if (place.kind === 'angles') return `${digits(place.latDeg, place.latResolutionDeg)}, ${digits(place.lonDeg, place.lonResolutionDeg)}`;
  const unit = crs!.metresPerUnit;
  return `${digits(place.eastM / unit, place.eastResolutionM / unit)}, ${digits(place.northM / unit, place.northResolutionM / unit)} (${crs!.code})`;
}

