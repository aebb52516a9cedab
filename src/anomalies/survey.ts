import KDBush from 'kdbush';
import { median } from '../numerics/robust.js';
import type { NoiseModel } from '../detection/types.js';
import type { Readings } from '../readings/types.js';
import type { Site } from '../site/types.js';
import { averageBlocks, type Blocks } from './blocks.js';
import type { Window } from './fitSources.js';
import type { Source } from './sources.js';
import { STATES } from './wander.js';

/** The blocks of a survey with the lengths that everything else is measured in. */
export interface Survey {
  readonly blocks: Blocks;
  readonly tree: KDBush;
  /** Sensor to the middle of a casing's possible tops, metres. */
  readonly reachM: number;
  /** From a line to its nearest neighbour, median, metres. */
  readonly spacingM: number;
  /** Radius of the readings that a source is fitted to, metres. */
  readonly windowM: number;
  /** Middle of a casing's possible tops, metres (below 0). */
  readonly expectedZM: number;
  readonly field: readonly [number, number, number];
  readonly unit: readonly [number, number, number];
  readonly motion: Motion;
}

/** How positions and the sensor's height err. */
export interface Motion {
  readonly positionSdM: number;
  readonly positionCorrelationS: number;
  /** Error of a single position that is gone at the next one. */
  readonly jitterM: number;
  readonly heightSdM: number;
  readonly heightCorrelationS: number;
}

export interface SurveyOptions {
  /** Error of a single position that is gone at the next one, metres (satellite receivers: centimetres; common practice). */
  readonly jitterM: number;
  /** Sensor's true height about the stated one, metres, and the time over which it wanders, seconds (a walker; common practice). */
  readonly heightSdM: number;
  readonly heightCorrS: number;
}

/** A block is this share of the reach long: averaging then rounds a pole's peak off by less than 0.2 %. */
const BLOCK_SHARE = 0.1;
/** A hole in a line longer than this share of the reach begins a new pass. */
const GAP_SHARE = 1.5;
/** Without times, passes lie this many correlation times apart, so that their errors are independent. */
const PAUSE = 20;
/** A source is fitted to what is heard within so many reaches, and at least so many line spacings (two lines at either side). */
const WINDOW_REACHES = 4;
const WINDOW_SPACINGS = 1.75;
/** Blocks at which the line spacing is measured. */
const SPACING_SAMPLES = 400;

export function surveyOf(readings: Readings, site: Site, options: SurveyOptions): Survey {
  const used = readings.heightM.filter((height, i) => Number.isFinite(height) && Number.isFinite(readings.residual[i]!));
  const [shallow, deep] = site.target.depthM;
  const expectedZM = -(shallow + deep) / 2;
  const reachM = median(used) - expectedZM;
  const blocks = averageBlocks(readings, {
    blockM: BLOCK_SHARE * reachM, gapM: GAP_SHARE * reachM, pauseS: PAUSE * Math.max(1, readings.positionCorrelationS),
  });
  const tree = new KDBush(Math.max(1, blocks.count));
  for (let i = 0; i < blocks.count; i++) tree.add(blocks.x[i]!, blocks.y[i]!);
  if (blocks.count === 0) tree.add(0, 0);
  tree.finish();
  const spacingM = lineSpacing(blocks, tree, reachM);
  const { unit, totalNT } = site.mainField;
  return {
    blocks, tree, reachM, spacingM, expectedZM, windowM: Math.max(WINDOW_REACHES * reachM, WINDOW_SPACINGS * spacingM),
    field: [unit[0] * totalNT, unit[1] * totalNT, unit[2] * totalNT], unit,
    motion: {
      positionSdM: readings.positionSdM, positionCorrelationS: readings.positionCorrelationS,
      jitterM: options.jitterM, heightSdM: options.heightSdM, heightCorrelationS: options.heightCorrS,
    },
  };
}

/** Median distance from a block to the nearest block of another pass; twice the reach where there is but one pass. */
function lineSpacing(blocks: Blocks, tree: KDBush, reachM: number): number {
  const found: number[] = [];
  const step = Math.max(1, Math.floor(blocks.count / SPACING_SAMPLES));
  const widest = blocks.passes > 1 ? 2 ** 12 * reachM : 0;
  for (let i = 0; i < blocks.count; i += step) {
    for (let radius = reachM; radius <= widest; radius *= 2) {
      let nearest = Infinity;
      for (const j of tree.within(blocks.x[i]!, blocks.y[i]!, radius)) {
        if (blocks.pass[j] === blocks.pass[i]) continue;
        nearest = Math.min(nearest, Math.hypot(blocks.x[j]! - blocks.x[i]!, blocks.y[j]! - blocks.y[i]!));
      }
      if (nearest < Infinity) {
        found.push(nearest);
        break;
      }
    }
  }
  return found.length === 0 ? 2 * reachM : median(found);
}

/** Blocks within `radiusM` of any of the places, in walking order. */
export function blocksNear(survey: Survey, places: ReadonlyArray<readonly [number, number]>, radiusM: number): Int32Array {
  if (survey.blocks.count === 0) return new Int32Array(0);
  if (places.length === 1) return Int32Array.from(survey.tree.within(places[0]![0], places[0]![1], radiusM)).toSorted();
  const all = new Set<number>();
  for (const [x, y] of places) for (const i of survey.tree.within(x, y, radiusM)) all.add(i);
  return Int32Array.from(all).toSorted();
}

export interface WindowInput {
  readonly places: ReadonlyArray<readonly [number, number]>;
  readonly radiusM: number;
  readonly noise: NoiseModel;
  readonly fixed: readonly Source[];
  /** Value of every block of the survey less what sources outside the window make, nT. */
  readonly value: (block: number) => number;
}

export function windowOf(survey: Survey, { places, radiusM, noise, fixed, value }: WindowInput): Window {
  const { blocks, motion } = survey;
  const index = blocksNear(survey, places, radiusM);
  const n = index.length;
  const pick = (from: Float64Array) => Float64Array.from(index, (i) => from[i]!);
  const keep = new Float64Array(n * STATES);
  const whiteVar = new Float64Array(n);
  for (let k = 0; k < n; k++) {
    const i = index[k]!;
    whiteVar[k] = noise.whiteSdNT ** 2 / blocks.size[i]!;
    if (k === 0) continue;
    const before = index[k - 1]!;
    // Two blocks at the same instant would have no fresh error between them; a millisecond keeps the algebra finite.
    const dt = Math.max(1e-3, Math.abs(blocks.timeS[i]! - blocks.timeS[before]!));
    const position = motion.positionCorrelationS > 0 ? Math.exp(-dt / motion.positionCorrelationS) : 0;
    keep[k * STATES] = position;
    keep[k * STATES + 1] = position;
    keep[k * STATES + 2] = motion.heightCorrelationS > 0 ? Math.exp(-dt / motion.heightCorrelationS) : 0;
    const apart = Math.max(1e-6 * survey.reachM, Math.hypot(blocks.x[i]! - blocks.x[before]!, blocks.y[i]! - blocks.y[before]!));
    keep[k * STATES + 3] = blocks.pass[i] === blocks.pass[before] ? Math.exp(-apart / noise.correlationM) : 0;
  }
  const z = pick(blocks.heightM);
  let x0 = 0;
  let y0 = 0;
  for (const [x, y] of places) {
    x0 += x / places.length;
    y0 += y / places.length;
  }
  let lowest = Infinity;
  for (const height of z) lowest = Math.min(lowest, height);
  return {
    count: n, index, x: pick(blocks.x), y: pick(blocks.y), z, value: Float64Array.from(index, value),
    walk: { count: n, keep, whiteVar, stateVar: [motion.positionSdM ** 2, motion.positionSdM ** 2, motion.heightSdM ** 2, noise.correlatedSdNT ** 2] },
    jitterVar: Float64Array.from(index, (i) => motion.jitterM ** 2 / blocks.size[i]!),
    field: survey.field, unit: survey.unit, fixed, centreX: x0, centreY: y0, radiusM, reachM: survey.reachM, spacingM: survey.spacingM,
    ceilingM: lowest - CEILING * survey.reachM, expectedZM: survey.expectedZM,
  };
}
/** No source is sought nearer to the lowest sensor than this share of the reach. */
const CEILING = 0.2;
