import type { Target } from '../detection/types.js';
import { median } from '../numerics/robust.js';
import { alignments, type Alignment } from './alignment.js';
import { peakOf } from './peakOf.js';
import type { Entry, SourceMap } from './sourceMap.js';
import { placeOf, type Source } from './sources.js';

/** A run of sources that is one pipe, cable or fence. */
export interface Pipe {
  readonly run: Alignment;
  /** In order along the run. */
  readonly pieces: readonly Entry[];
}

/** Sources line up within this share of the reach … */
const ALIGN_REACHES = 0.7;
/** … no further apart than this many steps (a step: line spacing, or twice the reach), at least so many, over so many steps. */
const ALIGN_GAP = 2.5;
const ALIGN_MEMBERS = 4;
const ALIGN_LENGTH = 4;
/** On the average a member has to stand on every so many steps. */
const ALIGN_DENSITY = 1.7;
/** A source this many times stronger than the middle of its row is no piece of it. */
const OUTSTANDING = 4;
const OUTSTANDING_POLE = 2.5;
/** A stray source this near to a run, in reaches, was made up to explain what its pieces do not. */
const STRAY_REACHES = 1.3;

/** Looks for runs of sources. Those like a casing, and those that stand out of their row, are no pieces of it. */
export function findPipes(map: SourceMap, target: Target): Pipe[] {
  const { survey } = map;
  const step = Math.max(survey.spacingM, 2 * survey.reachM);
  const entries = map.entries.filter((entry) => !isCasingLike(entry.source, target));
  const runs = alignments(entries.map((entry) => ({ x: placeOf(entry.source)[0], y: placeOf(entry.source)[1], sdM: 0 })), {
    toleranceM: ALIGN_REACHES * survey.reachM, gapM: ALIGN_GAP * step, leastMembers: ALIGN_MEMBERS, leastLengthM: ALIGN_LENGTH * step, meanGapM: ALIGN_DENSITY * step,
  });
  const taken = new Set<Entry>();
  return runs.map((run) => {
    const members = run.members.map((k) => entries[k]!);
    const middle = median(members.map((entry) => peakOf(map, entry)));
    const along = ([x, y]: readonly [number, number]) => x * Math.sin(run.azimuth) + y * Math.cos(run.azimuth);
    const pieces = map.entries
      .filter((entry) => !taken.has(entry) && !isApart(map, entry, { middle, target }))
      .filter((entry) => members.includes(entry) || belongs(run, placeOf(entry.source), { acrossM: STRAY_REACHES * survey.reachM, beyondM: ALIGN_GAP * step }))
      .toSorted((a, b) => along(placeOf(a.source)) - along(placeOf(b.source)));
    for (const entry of pieces) taken.add(entry);
    return { run, pieces };
  }).filter(({ pieces }) => pieces.length >= ALIGN_MEMBERS);
}

/** Whether a source on the line of a run is something else: far stronger than its row, and no weak pole as joints are. */
function isApart(map: SourceMap, entry: Entry, { middle, target }: { readonly middle: number; readonly target: Target }): boolean {
  const { kind } = entry.source;
  if (kind === 'pole' && !isCasingLike(entry.source, target)) return false;
  return peakOf(map, entry) > (kind === 'pole' ? OUTSTANDING_POLE : OUTSTANDING) * middle;
}

/** A pole of at least this share of the least strength that is looked for may be a casing: it stays. */
function isCasingLike(source: Source, target: Target): boolean {
  return source.kind === 'pole' && Math.abs(source.values[3]!) > target.poleAM[0] * LEAST_SHARE;
}
const LEAST_SHARE = 0.8;

/** Whether a place lies on the run, or on its course a little beyond its ends. */
function belongs(run: Alignment, [x, y]: readonly [number, number], { acrossM, beyondM }: { readonly acrossM: number; readonly beyondM: number }): boolean {
  const s = Math.sin(run.azimuth);
  const c = Math.cos(run.azimuth);
  const along = (x - run.x) * s + (y - run.y) * c;
  const across = (x - run.x) * c - (y - run.y) * s;
  return Math.abs(across) <= acrossM && along >= run.from - beyondM && along <= run.to + beyondM;
}
