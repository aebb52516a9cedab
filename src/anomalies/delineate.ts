import { UserError } from '../errors.js';
import type { Grid } from '../raster/types.js';
import type { Readings } from '../readings/types.js';
import type { Site } from '../site/types.js';
import { PRIOR, oddness } from './classify.js';
import { linearAnomaly, sourceAnomaly } from './describe.js';
import { noiseModel, whiteNoise } from './noise.js';
import { findPipes } from './pipes.js';
import { isNeeded, refine, type Refined } from './refine.js';
import { SourceMap, type Entry } from './sourceMap.js';
import { searchSources, splitStrained } from './search.js';
import { surveyOf, type SurveyOptions } from './survey.js';
import type { Anomalies, Anomaly } from './types.js';

export interface DelineateOptions extends SurveyOptions {
  /** A peak has to stand out of the local noise by this factor to be looked at. */
  readonly detectSnr: number;
  /** Outlines are contours at this multiple of the local noise. */
  readonly outlineSnr: number;
  /** Radius of the local noise, metres; unsaid, ten sensor–source distances. */
  readonly localRadiusM?: number;
  readonly maxSources: number;
}

export const DELINEATE_DEFAULTS: DelineateOptions = Object.freeze({
  detectSnr: 6, outlineSnr: 5, maxSources: 250,
  jitterM: 0.02, heightSdM: 0.1, heightCorrS: 4,
});

/** Rounds of peak, fit and subtraction; sources that overlap need two or three. */
const MAX_ROUNDS = 8;
/** Every source is fitted once more with its neighbours in place, and again with them refined. */
const SWEEPS = 2;
const LOCAL_REACHES = 10;
const KINDS = ['pole', 'dipole', 'line'] as const;
/** Fewer blocks than this hold no source and its noise. */
const LEAST_BLOCKS = 12;
/** Where known sources make more than this share of the residual's spread, a block tells nothing about noise. */
const QUIET_SHARE = 0.5;
/**
 * Sources in the residual: found along the passes, decided on the readings, outlined on the grid.
 *
 * @param readings Reduced readings; flagged ones (NaN) are left out. Ground is taken as flat, at height 0 under every
 *   sensor, so a depth counts from the ground under the sensors that hear the source.
 * @param residual Grid of the residual, for the outlines only.
 * @returns Anomalies by falling deflection, A1 the strongest; the survey's own noise.
 */
export function delineate(readings: Readings, residual: Grid, site: Site, options: Partial<DelineateOptions> = {}): Anomalies {
  const settings = { ...DELINEATE_DEFAULTS, ...options };
  const survey = surveyOf(readings, site, settings);
  if (survey.blocks.count < LEAST_BLOCKS) {
    throw new UserError({
      code: 'no_data', where: 'readings', found: `${survey.blocks.count} stretches with a residual`, wanted: `at least ${LEAST_BLOCKS}`,
      advice: 'check the column flag of the reduced readings: it says why each reading was left out',
    });
  }
  const localRadiusM = settings.localRadiusM ?? LOCAL_REACHES * survey.reachM;
  const whiteSdNT = whiteNoise(readings);
  const search = { detectSnr: settings.detectSnr, localRadiusM, maxSources: settings.maxSources, maxRounds: MAX_ROUNDS };
  const rough = noiseModel(survey, survey.blocks.value, { whiteSdNT, skip: new Uint8Array(survey.blocks.count) });
  const map = new SourceMap(survey);
  const full = searchSources(map, { noise: rough, target: site.target }, search);
  if (splitStrained(map, { noise: rough, target: site.target }, search) > 0) searchSources(map, { noise: rough, target: site.target }, search);
  const pipes = findPipes(map, site.target);
  const held = new Set(pipes.flatMap((pipe) => pipe.pieces));
  const left = survey.blocks.value.map((value, i) => value - map.made[i]!);
  const quiet = QUIET_SHARE * rough.correlatedSdNT;
  const noise = noiseModel(survey, left, { whiteSdNT, skip: Uint8Array.from(map.made, (made) => (Math.abs(made) > quiet ? 1 : 0)) });

  const known = new Map<Entry, Refined>();
  for (let sweep = 0; sweep < SWEEPS; sweep++) {
    for (const entry of map.entries.slice()) {
      if (held.has(entry)) continue;
      const refined = refine(map, entry, { noise, kinds: KINDS, before: known.get(entry), held });
      if (isNeeded(refined, oddness(refined.fit.sources[0]!, { target: site.target, reachM: survey.reachM }))) known.set(entry, refined);
      else map.remove(entry);
    }
  }
  const context = { map, survey, readings, residual, site, noise, settings, localRadiusM };
  const drafts = map.entries.filter((entry) => !held.has(entry)).map((entry) => sourceAnomaly(known.get(entry)!, context));
  const list: Anomaly[] = drafts.map(({ anomaly }) => anomaly);
  for (const pipe of pipes) list.push(linearAnomaly(pipe, context));
  list.sort((a, b) => b.snr - a.snr || a.x - b.x || a.y - b.y);
  const notes = [
    `Sensor to source ${survey.reachM.toFixed(1)} m, lines ${survey.spacingM.toFixed(1)} m apart, sources fitted within ${survey.windowM.toFixed(0)} m. Ground is taken as flat.`,
    `Noise of the residual away from sources: ${noise.whiteSdNT.toFixed(2)} nT a reading (white), ${noise.correlatedSdNT.toFixed(1)} nT over ${noise.correlationM.toFixed(0)} m (geology and the like), positions ${noise.positionSdM} m per axis wandering over ${noise.positionCorrelationS} s, sensor height ${settings.heightSdM} m.`,
    `Prior odds of casing, other pole, compact iron and line: ${PRIOR.casing}, ${PRIOR.otherPole}, ${PRIOR.compact} and ${PRIOR.linear} (a working assumption).`,
  ];
  if (full) notes.push(`The search stopped at ${settings.maxSources} sources (max_sources); weaker ones were not looked for.`);
  return { list: list.map((anomaly, k) => ({ ...anomaly, anomalyId: `A${k + 1}` })), noise, notes };
}
