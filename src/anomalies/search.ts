import type { NoiseModel, Target } from '../detection/types.js';
import { NT_PER_POLE } from '../field/pole.js';
import { oddness } from './classify.js';
import { bestFit } from './bestFit.js';
import { fitSources, type Fit, type Window } from './fitSources.js';
import { aboveMedian, findPeaks, localNoise, thinPeaks, type Peak } from './peaks.js';
import { GAIN, misfitOf, refine } from './refine.js';
import type { Entry, SourceMap } from './sourceMap.js';
import { placeOf } from './sources.js';
import { peakOf } from './peakOf.js';
import { untangle } from './untangle.js';
import { startingPoints, type Kind } from './startingPoints.js';

export interface SearchOptions {
  /** A peak has to stand out of the local noise by this factor. */
  readonly detectSnr: number;
  /** Radius of the local noise, metres. */
  readonly localRadiusM: number;
  readonly maxSources: number;
  readonly maxRounds: number;
}

/** Model and truth differ by some share of the field that is subtracted: no peak is sought in that remainder. */
const MODEL_SHARE = 0.04;
/** Share of the stated position error that is left after the fit has estimated it. */
const LEFT_OF_SHIFT = 0.35;
/** Two sources nearer to each other than this share of the reach cannot be told apart. */
const APART_REACHES = 0.8;
/** Neighbours that are fitted anew when a source is added beside them. */
const SETTLE = 2;
/** Two sources nearer than this many reaches are fitted anew as a pair, where one of them is as strong as half the weakest casing. */
const PAIR_REACHES = 3;
const STRONG_SHARE = 0.5;
/** Peaks of one round lie this far apart, in reaches and in spacings: the weaker ones wait for the next round. */
const ROUND_REACHES = 2;
const ROUND_SPACINGS = 1.2;
/** A line is never needed to explain what a few passes hear; whether it explains it better is asked at the end. */
const KINDS: readonly Kind[] = ['pole', 'dipole'];

/**
 * Finds sources one after the other: peaks of what is left along the passes, the strongest of each neighbourhood first;
 * a fit of each kind of source; the best is kept where the information criterion wants it, and subtracted; again until
 * nothing stands out. True where it stopped at `maxSources`.
 *
 * Source: matching pursuit, Mallat & Zhang (1993); the same idea as CLEAN, Högbom (1974).
 */
export function searchSources(map: SourceMap, { noise, target }: { readonly noise: NoiseModel; readonly target: Target }, options: SearchOptions): boolean {
  const { survey } = map;
  const tried = new Set<number>();
  for (let round = 0; round < options.maxRounds; round++) {
    const peaks = peaksLeft(map, options).filter((peak) => !tried.has(peak.block));
    let accepted = 0;
    for (const peak of thinPeaks(peaks, Math.max(ROUND_REACHES * survey.reachM, ROUND_SPACINGS * survey.spacingM))) {
      if (map.entries.length >= options.maxSources) return true;
      if (tryPeak(map, peak, { noise, target })) accepted++;
      else tried.add(peak.block);
    }
    if (accepted === 0) break;
  }
  return false;
}

/** Peaks of the residual less all sources found, where model and position error cannot have made them. */
export function peaksLeft(map: SourceMap, { detectSnr, localRadiusM }: SearchOptions): Peak[] {
  const { survey } = map;
  const high = aboveMedian(survey, survey.blocks.value.map((value, i) => value - map.made[i]!));
  const local = localNoise(survey, high, localRadiusM);
  const shift = LEFT_OF_SHIFT * survey.motion.positionSdM;
  const noise = local.map((sd, i) => Math.hypot(sd, (MODEL_SHARE * map.made[i]!), shift * map.steepness[i]!));
  return findPeaks(survey, high, { noise, threshold: detectSnr });
}

function tryPeak(map: SourceMap, peak: Peak, { noise, target }: { readonly noise: NoiseModel; readonly target: Target }): Entry | null {
  const { survey } = map;
  const window = map.window([[peak.x, peak.y]], { noise, free: [], radiusM: survey.windowM });
  const without = fitSources(window, []);
  // The start is sought in what the known sources leave.
  const left: Window = { ...window, fixed: [], value: Float64Array.from(window.index, (i) => survey.blocks.value[i]! - map.made[i]!) };
  let best: Fit | null = null;
  for (const kind of KINDS) {
    const fit = bestFit(window, startingPoints(left, kind, peak));
    if (fit && (!best || fit.bic < best.bic)) best = fit;
  }
  if (!best) return null;
  if (best.bic + oddness(best.sources[0]!, { target, reachM: survey.reachM }) > without.bic - GAIN * misfitOf(best)) return null;
  const source = best.sources[0]!;
  const [x, y] = placeOf(source);
  if (Math.hypot(x - peak.x, y - peak.y) > survey.windowM) return null;
  for (const other of map.near(x, y, APART_REACHES * survey.reachM)) if (other.source.kind !== 'line') return null;
  map.learn(window, best);
  const entry = map.add(source);
  const beside = map.near(x, y, PAIR_REACHES * survey.reachM).find((other) => other !== entry && other.source.kind !== 'line');
  if (beside && Math.max(peakOf(map, entry), peakOf(map, beside)) > leastPeak(map, target)) untangle(map, [entry, beside], { noise, target });
  const neighbours = map.near(x, y, survey.windowM).filter((other) => other !== entry && other.source.kind !== 'line');
  if (neighbours.length > 0) {
    refine(map, entry, { noise, kinds: KINDS });
    for (const other of neighbours.slice(0, SETTLE)) refine(map, other, { noise, kinds: KINDS });
  }
  return entry;
}

/** A single source that leaves this much more than its like (or than the noise) may be two. */
const STRAINED = 1;

/** Looks beside every strong source whose fit leaves too much for a second one that it has swallowed. */
export function splitStrained(map: SourceMap, { noise, target }: { readonly noise: NoiseModel; readonly target: Target }, { maxSources }: SearchOptions): number {
  let split = 0;
  for (const entry of map.entries.slice()) {
    if (map.entries.length >= maxSources) break;
    if (entry.source.kind === 'line' || peakOf(map, entry) < leastPeak(map, target)) continue;
    const { fit } = refine(map, entry, { noise, kinds: [] });
    if (fit.chi2 > STRAINED * (fit.count - fit.parameters) && untangle(map, [entry], { noise, target })) split++;
  }
  return split;
}

/** What makes an anomaly worth the pains: a share of the weakest casing's, heard from the usual distance, nT. */
function leastPeak({ survey }: SourceMap, target: Target): number {
  return (STRONG_SHARE * NT_PER_POLE * target.poleAM[0]) / survey.reachM ** 2;
}
