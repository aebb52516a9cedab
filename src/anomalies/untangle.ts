import type { NoiseModel, Target } from '../detection/types.js';
import { fitSources, type Fit, type Window } from './fitSources.js';
import { oddness } from './classify.js';
import { pairStarts } from './pairStarts.js';
import { GAIN, misfitOf } from './refine.js';
import type { Entry, SourceMap } from './sourceMap.js';
import { placeOf } from './sources.js';

const FIRST_STEPS = 5;
/** Of all starts so many are followed to the end. */
const FOLLOWED = 2;

/**
 * Fits two overlapping sources anew from many starts and keeps the outcome where the information criterion is better than
 * that of the pair as it stands. Given one source, looks for a second beside it that it may have swallowed.
 */
export function untangle(map: SourceMap, tangle: readonly [Entry] | readonly [Entry, Entry], { noise, target }: { readonly noise: NoiseModel; readonly target: Target }): boolean {
  const { survey } = map;
  const places = tangle.map((entry) => placeOf(entry.source));
  const window = map.window(places, { noise, free: tangle, radiusM: survey.windowM });
  const own = new Map<number, number>();
  for (const { index, made } of tangle) index.forEach((i, k) => own.set(i, (own.get(i) ?? 0) + made[k]!));
  const left: Window = { ...window, fixed: [], value: Float64Array.from(window.index, (i) => survey.blocks.value[i]! - map.made[i]! + (own.get(i) ?? 0)) };
  const score = (fit: Fit) => fit.sources.reduce((sum, source) => sum + oddness(source, { target, reachM: survey.reachM }), fit.bic);
  const now = fitSources(window, tangle.map((entry) => entry.source));
  const best = pairStarts(left, Math.max(...tangle.map((entry) => entry.source.strengthSd)), places)
    .map((start) => fitSources(window, start, { maxIterations: FIRST_STEPS }))
    .toSorted((a, b) => a.bic - b.bic)
    .slice(0, FOLLOWED)
    .map((fit) => fitSources(window, fit.sources))
    .toSorted((a, b) => score(a) - score(b))[0];
  const wanted = tangle.length === 1 ? GAIN * misfitOf(best ?? now) : 0;
  const better = best !== undefined && score(best) < score(now) - wanted;
  const fit: Fit = better ? best : now;
  map.learn(window, fit);
  tangle.forEach((entry, k) => map.move(entry, fit.sources[k]!));
  if (better && tangle.length === 1) map.add(fit.sources[1]!);
  return better;
}
