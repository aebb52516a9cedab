import type { NoiseModel } from '../detection/types.js';
import { fitSources, type Window } from './fitSources.js';
import { pairStarts } from './pairStarts.js';
import type { Entry, SourceMap } from './sourceMap.js';
import { placeOf } from './sources.js';

const FIRST_STEPS = 5;
/** Of all starts so many are followed to the end. */
const FOLLOWED = 2;

/**
 * Fits two overlapping sources anew from many starts and keeps the outcome where the information criterion is better than
 * that of the pair as it stands.
 */
export function untangle(map: SourceMap, pair: readonly [Entry, Entry], noise: NoiseModel): boolean {
  const { survey } = map;
  const places = pair.map((entry) => placeOf(entry.source));
  const window = map.window(places, { noise, free: pair, radiusM: survey.windowM });
  const own = new Map<number, number>();
  for (const { index, made } of pair) index.forEach((i, k) => own.set(i, (own.get(i) ?? 0) + made[k]!));
  const left: Window = { ...window, fixed: [], value: Float64Array.from(window.index, (i) => survey.blocks.value[i]! - map.made[i]! + (own.get(i) ?? 0)) };
  const now = fitSources(window, [pair[0].source, pair[1].source]);
  const best = pairStarts(left, [pair[0].source, pair[1].source], places)
    .map((start) => fitSources(window, start, { maxIterations: FIRST_STEPS }))
    .toSorted((a, b) => a.bic - b.bic)
    .slice(0, FOLLOWED)
    .map((fit) => fitSources(window, fit.sources))
    .toSorted((a, b) => a.bic - b.bic)[0];
  const fit = best && best.bic < now.bic ? best : now;
  map.learn(window, fit);
  pair.forEach((entry, k) => map.move(entry, fit.sources[k]!));
  return fit === best;
}
