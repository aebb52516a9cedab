import type { NoiseModel } from '../detection/types.js';
import { fitSources, type Fit, type Window } from './fitSources.js';
import { bestFit } from './bestFit.js';
import type { Entry, SourceMap } from './sourceMap.js';
import { placeOf, type Source } from './sources.js';
import { startingPoints, type Kind } from './startingPoints.js';

/** A source with the fits that its place and class rest on. */
export interface Refined {
  readonly entry: Entry;
  /** Fit of the best kind; the source is its first. */
  readonly fit: Fit;
  readonly window: Window;
  /** Information criterion of each kind in place of this source, and without it, all on the same window; ∞ where not tried. */
  readonly bic: Readonly<Record<Kind | 'none', number>>;
  /** The source as each kind, to begin the next fit with. */
  readonly asKind: Readonly<Record<Kind, Source | undefined>>;
  /** Best fit with the source as each kind. */
  readonly fits: Readonly<Partial<Record<Kind, Fit>>>;
}

/** Neighbours that are fitted along with a source, at most, and how near they have to lie, in windows. */
const NEIGHBOURS = 4;
const NEIGHBOUR_WINDOWS = 1.1;
/** A fit that moves a source by more than this many reaches is not taken. */
const STRAY_REACHES = 1.3;

export interface RefineOptions {
  readonly noise: NoiseModel;
  /** Kinds that are tried in its place. */
  readonly kinds: readonly Kind[];
  /** What an earlier fit of the source found: it begins there. */
  readonly before?: Refined | undefined;
  /** Sources that may adapt to this fit but stay on the map as they are. */
  readonly held?: ReadonlySet<Entry>;
}

/**
 * Fits a source once more, together with its neighbours, as each kind of source in turn. The map takes over the best fit,
 * neighbours included.
 */
export function refine(map: SourceMap, entry: Entry, { noise, kinds, before, held }: RefineOptions): Refined {
  const { survey } = map;
  const [x, y] = placeOf(entry.source);
  const neighbours = map.near(x, y, NEIGHBOUR_WINDOWS * survey.windowM)
    .filter((other) => other !== entry && other.source.kind !== 'line')
    .slice(0, NEIGHBOURS);
  const free = [entry, ...neighbours];
  const window = map.window(free.map((one) => placeOf(one.source)), { noise, free, radiusM: survey.windowM });
  const others = neighbours.map((one) => one.source);
  const own = new Map<number, number>();
  entry.index.forEach((i, k) => own.set(i, entry.made[k]!));
  const near = map.window([[x, y]], { noise, free: [], radiusM: survey.windowM });
  const left: Window = { ...near, fixed: [], value: Float64Array.from(near.index, (i) => survey.blocks.value[i]! - map.made[i]! + (own.get(i) ?? 0)) };
  const peak = peakOf(left, entry.source);
  const fits: Partial<Record<Kind, Fit>> = {};
  for (const kind of new Set([entry.source.kind, ...kinds])) {
    if (kind === 'line' && passesHearing(map, entry) < LINE_PASSES) continue;
    const known = kind === entry.source.kind ? entry.source : before?.asKind[kind];
    const starts: Source[] = known ? [known] : startingPoints(left, kind, peak);
    fits[kind] = bestFit(window, starts, others)!;
  }
  // A source that runs off to help another one is no fit of itself.
  const stays = (one: Fit) => one.sources.every((source, k) => {
    const [was, is] = [placeOf(free[k]!.source), placeOf(source)];
    return source.kind === 'line' || Math.hypot(is[0] - was[0], is[1] - was[1]) <= STRAY_REACHES * survey.reachM;
  });
  const all = Object.values(fits);
  const fit = (all.some(stays) ? all.filter(stays) : all).reduce((a, b) => (b.bic < a.bic ? b : a));
  // On the map a source stays compact: what an endless line would do to its neighbours is anybody's guess.
  const compact = [fits.pole, fits.dipole].filter((one) => one !== undefined && (stays(one) || !all.some(stays))).reduce<Fit>((a, b) => (b && b.bic < a.bic ? b : a), fits.pole && stays(fits.pole) ? fits.pole : fits.dipole ?? fits.pole ?? fit);
  if (stays(compact)) {
    map.learn(window, compact);
    free.forEach((one, k) => {
      if (!held?.has(one)) map.move(one, compact.sources[k]!);
    });
  }
  const none = fitSources(window, others);
  return {
    entry, fit, window, bic: { pole: fits.pole?.bic ?? Infinity, dipole: fits.dipole?.bic ?? Infinity, line: fits.line?.bic ?? Infinity, none: none.bic },
    fits,
    asKind: { pole: fits.pole?.sources[0], dipole: fits.dipole?.sources[0], line: fits.line?.sources[0] },
  };
}

/** Largest deflection that the source is to explain, near its place or, failing that, in the window. */
function peakOf(left: Window, source: Source): { x: number; y: number; heightNT: number } {
  const [x, y] = placeOf(source);
  let heightNT = 0;
  for (const radiusM of [left.radiusM / 2, Infinity]) {
    for (let k = 0; k < left.count; k++) {
      if (Math.hypot(left.x[k]! - x, left.y[k]! - y) < radiusM && Math.abs(left.value[k]!) > Math.abs(heightNT)) heightNT = left.value[k]!;
    }
    if (heightNT !== 0) break;
  }
  return { x, y, heightNT };
}

/** A source is kept where it betters the information criterion by this much ("very strong", Kass & Raftery 1995), in units of the misfit. */
export const GAIN = 10;

/** Misfit of the best model in units of the noise, at least 1: evidence and covariance are weakened by it (quasi-likelihood). */
export function misfitOf(fit: Fit): number {
  return Math.max(1, fit.chi2 / Math.max(1, fit.count - fit.parameters));
}

/** Whether the readings want the source, `odd` being what it costs for its size and depth. */
export function isNeeded({ fit, bic }: Refined, odd: number): boolean {
  return fit.bic + odd < bic.none - GAIN * misfitOf(fit);
}

/** Fewer passes than this cannot tell a line from anything else. */
const LINE_PASSES = 3;
/** A pass hears a source where that makes at least this share of its peak there. */
const HEARD_SHARE = 0.25;

function passesHearing({ survey }: SourceMap, { index, made }: Entry): number {
  let peak = 0;
  for (const value of made) peak = Math.max(peak, Math.abs(value));
  const passes = new Set<number>();
  index.forEach((i, k) => {
    if (Math.abs(made[k]!) >= HEARD_SHARE * peak) passes.add(survey.blocks.pass[i]!);
  });
  return passes.size;
}
