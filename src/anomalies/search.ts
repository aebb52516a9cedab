import type { NoiseModel } from '../detection/types.js';
import { fitSources, type Fit, type Window } from './fitSources.js';
import { aboveMedian, findPeaks, localNoise, thinPeaks, type Peak } from './peaks.js';
import { SourceMap, type Entry } from './sourceMap.js';
import { placeOf, type Source } from './sources.js';
import { startingPoints, type Kind } from './startingPoints.js';
import type { Survey } from './survey.js';

export interface SearchOptions {
  /** A peak has to stand out of the local noise by this factor. */
  readonly detectSnr: number;
  /** Radius of the local noise, metres. */
  readonly localRadiusM: number;
  readonly maxSources: number;
  readonly maxRounds: number;
}

/** A source is kept where it betters the information criterion by this much ("very strong", Kass & Raftery 1995). */
const GAIN = 10;
/** Model and truth differ by some share of the field that is subtracted: no peak is sought in that remainder. */
const MODEL_SHARE = 0.04;
/** Share of the stated position error that is left after the fit has estimated it. */
const LEFT_OF_SHIFT = 0.35;
/** Two sources nearer to each other than this share of the reach cannot be told apart. */
const APART_REACHES = 0.8;
/** Peaks of one round lie this far apart, in reaches and in spacings: the weaker ones wait for the next round. */
const ROUND_REACHES = 2;
const ROUND_SPACINGS = 1.2;
const KINDS: readonly Kind[] = ['pole', 'dipole', 'line'];
/** Iterations after which the better start of a kind is told from the worse. */
const FIRST_STEPS = 4;

/**
 * Finds sources one after the other: peaks of what is left along the passes, the strongest of each neighbourhood first;
 * a fit of each kind of source; the best is kept where the information criterion wants it, and subtracted; again until
 * nothing stands out.
 *
 * Source: matching pursuit, Mallat & Zhang (1993); the same idea as CLEAN, Högbom (1974).
 */
export function searchSources(survey: Survey, noise: NoiseModel, options: SearchOptions): { map: SourceMap; full: boolean } {
  const map = new SourceMap(survey);
  const tried = new Set<number>();
  for (let round = 0; round < options.maxRounds; round++) {
    const peaks = peaksLeft(map, options).filter((peak) => !tried.has(peak.block));
    let accepted = 0;
    for (const peak of thinPeaks(peaks, Math.max(ROUND_REACHES * survey.reachM, ROUND_SPACINGS * survey.spacingM))) {
      if (map.entries.length >= options.maxSources) return { map, full: true };
      if (tryPeak(map, peak, noise)) accepted++;
      else tried.add(peak.block);
    }
    if (accepted === 0) break;
  }
  return { map, full: false };
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

function tryPeak(map: SourceMap, peak: Peak, noise: NoiseModel): Entry | null {
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
  if (!best || best.bic > without.bic - GAIN) return null;
  const source = best.sources[0]!;
  const [x, y] = placeOf(source);
  if (Math.hypot(x - peak.x, y - peak.y) > survey.windowM) return null;
  for (const other of map.near(x, y, APART_REACHES * survey.reachM)) if (other.source.kind !== 'line') return null;
  map.learn(window, best);
  return map.add(source);
}

/** Of several starts the one that leads furthest down. */
export function bestFit(window: Window, starts: readonly Source[], others: readonly Source[] = []): Fit | null {
  const first = starts
    .map((start) => fitSources(window, [start, ...others], { maxIterations: FIRST_STEPS }))
    .sort((a, b) => a.bic - b.bic)[0];
  return first ? fitSources(window, first.sources) : null;
}
