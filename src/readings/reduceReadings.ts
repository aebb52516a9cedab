import { UserError } from '../errors.js';
import { median } from '../numerics/robust.js';
import type { Site } from '../site/types.js';
import { baseVariation, readBase } from './baseVariation.js';
import { makeChunks, type Chunks } from './chunks.js';
import { spreadCoarseTimes } from './coarseTimes.js';
import { courses } from './courses.js';
import { despike, fourthDifferenceNoise } from './despike.js';
import { FLAG, flagFaults } from './faults.js';
import { findLines } from './findLines.js';
import { headingEffect } from './headingEffect.js';
import { decimalYearOf, mainFieldAlong } from './mainFieldAlong.js';
import { advancePositions } from './positionLag.js';
import { rawReadings, type RawReadings } from './rawReadings.js';
import type { ReadingsSource } from './readingSource.js';
import { REDUCE_DEFAULTS, type ReduceOptions } from './reduceOptions.js';
import { regionalField } from './regionalField.js';
import { sensorPlaces } from './sensorPlaces.js';
import { findRuns, type Run } from './runs.js';
import { timeDrift } from './timeDrift.js';
import { FLAGS, type Readings, type ReductionStep } from './types.js';

/** The regional field is as wide as this many sensor heights, and never narrower than the metres beside it. */
const REGIONAL_HEIGHTS = 30;
const REGIONAL_LEAST_M = 100;
/** The drift's window holds this many lines: one in its middle has a third of the weight, so a source along it is no drift. */
const DRIFT_LINES = 5;
const DRIFT_LEAST_S = 300;
/** Stretches that slow things are estimated from, as a share of the regional width. */
const CHUNK_SHARE = 1 / 40;
/** Readings from another month than the survey's date are more likely a wrong date than a late visit. */
const DATE_YEARS = 31 / 365;
/** An error of the datum shift above this is worth a word, metres: a null shift between NAD83 and WGS 84 has more. */
const SHIFT_SD_M = 1;
/** More bad readings than this are worth a word. */
const FLAGGED_SHARE = 0.05;
/** Least distance to a source that a spike is judged by, where a height is written as next to nothing, metres. */
const LEAST_SOURCE_M = 0.3;

/** The state of the work: columns that steps read, and the field that they hand on. */
interface Work {
  readonly raw: RawReadings;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly timeS: Float64Array;
  readonly line: Int32Array;
  readonly flag: Uint8Array;
  readonly runs: readonly Run[];
  readonly courseDeg: Float64Array;
  readonly regionalM: number;
  readonly steps: ReductionStep[];
  readonly warnings: string[];
  field: Float64Array;
}

/**
 * Raw readings to the residual: clock and position set right, false readings flagged, and one after the other the
 * base station's variation, the heading effect, the main field, drift where no base tells it, and the regional field
 * taken off. Every step keeps the field after it in a column and says in one sentence what it removed.
 *
 * @returns Readings in time order; the residual is NaN where a reading is flagged.
 */
export function reduceReadings(source: ReadingsSource, site: Site, options: Partial<ReduceOptions> = {}): Readings {
  const settings = { ...REDUCE_DEFAULTS, ...options };
  const name = source.files.map((file) => file.table.source).join(', ');
  if (settings.kind === 'anomaly' && source.base) {
    throw new UserError({ code: 'key_invalid', where: source.base.table.source, found: 'a base log beside readings of kind "anomaly"', wanted: 'none, since their variation is taken off already' });
  }
  const drifts = settings.kind === 'total_field' && (settings.drift === 'always' || (settings.drift === 'auto' && !source.base));
  const raw = rawReadings(source.files, site, { timesNeeded: settings.speedMS === null && (source.base !== undefined || drifts) });
  const work = prepare(raw, settings, site, name);
  cleanStep(work, settings);
  if (source.base) baseStep(work, source.base, { ...settings, mainNT: site.mainField.totalNT });
  if (settings.kind === 'total_field') {
    const main = mainFieldAlong({ ...work, timeS: work.timeS }, site, settings.groundHeightM);
    if (settings.heading) headStep(work, main);
    mainStep(work, main);
    if (drifts) driftStep(work, settings);
  }
  if (work.regionalM > 0) regionalStep(work);
  const flagged = work.flag.reduce((sum, code) => sum + (code > 0 ? 1 : 0), 0);
  if (flagged > FLAGGED_SHARE * raw.count) work.warnings.push(`${percent(flagged, raw.count)} of the readings are flagged and not used.`);
  return {
    count: raw.count, x: work.x, y: work.y, heightM: raw.heightM, timeS: work.timeS, line: work.line,
    lineNames: work.raw.lineNames, raw: raw.field, steps: work.steps, residual: work.field.map((value, i) => (work.flag[i] === 0 ? value : NaN)), flag: work.flag,
    positionSdM: settings.positionSdM, positionCorrelationS: settings.positionCorrS, warnings: work.warnings,
  };
}

function prepare(raw: RawReadings, settings: ReduceOptions, site: Site, source: string): Work {
  const warnings = [...raw.notes];
  let timeS = raw.timeS;
  const spread = spreadCoarseTimes(timeS);
  if (spread) {
    timeS = spread;
    warnings.push('Several readings share each written time; they were spread evenly up to the next one.');
  }
  const flag = flagFaults({ ...raw, timeS }, { kind: settings.kind, mainNT: site.mainField.totalNT, source });
  checkDate(timeS, site, warnings);
  if (raw.shiftSdM > SHIFT_SD_M) {
    warnings.push(`Positions were moved by ${raw.shifts.join('; ')}, with a standard error of ${raw.shiftSdM.toFixed(1)} m on each axis: state the receiver's frame and epoch, or the datum.`);
  }
  const first = findRuns({ ...raw, timeS });
  const timed = timeS.some((time) => !Number.isNaN(time));
  const antenna = settings.positionLagS !== 0 && timed ? advancePositions({ x: raw.x, y: raw.y, timeS }, first, settings.positionLagS) : raw;
  const courseDeg = courses(antenna, first);
  const { x, y } = sensorPlaces(antenna, courseDeg, settings);
  const { line, lineNames } = nameLines(raw, { x, y, courseDeg }, first);
  const runs = findRuns({ count: raw.count, x, y, timeS, line });
  if (!timed && settings.speedMS !== null) {
    timeS = walkedTimes(x, y, { speedMS: settings.speedMS, decimalYear: site.decimalYear });
    warnings.push(`No times are given; they were made from a speed of ${settings.speedMS} m/s.`);
  }
  const regionalM = settings.regionalM ?? Math.max(REGIONAL_LEAST_M, REGIONAL_HEIGHTS * median(raw.heightM));
  return { raw: { ...raw, lineNames }, x, y, timeS, line, flag, runs, courseDeg, regionalM, steps: [], warnings, field: raw.field };
}

function nameLines(raw: RawReadings, places: { x: Float64Array; y: Float64Array; courseDeg: Float64Array }, runs: readonly Run[]): { line: Int32Array; lineNames: readonly string[] } {
  if (!raw.line.includes(-1)) return raw;
  const found = findLines(places, runs);
  if (raw.lineNames.length === 0) return found;
  // Some files name their lines: the others' come after them.
  const offset = raw.lineNames.length;
  return { line: raw.line.map((line, i) => (line >= 0 ? line : offset + found.line[i]!)), lineNames: [...raw.lineNames, ...found.lineNames.map((name) => `found ${name}`)] };
}

function cleanStep(work: Work, settings: ReduceOptions): void {
  const good = work.field.map((value, i) => (work.flag[i] === 0 ? value : NaN));
  const noise = fourthDifferenceNoise(good, work.runs);
  if (settings.despike) {
    const spike = despike(good, work.runs, { stepM: stepOf(work), sourceM: Math.max(LEAST_SOURCE_M, median(work.raw.heightM)) });
    for (let i = 0; i < spike.length; i++) if (spike[i]) work.flag[i] = FLAG.spike;
  }
  const counts = FLAGS.map((_, code) => work.flag.reduce((sum, one) => sum + (one === code ? 1 : 0), 0));
  const words = FLAGS.slice(1).map((word, k) => [counts[k + 1]!, word.replaceAll('_', ' ')] as const).filter(([count]) => count > 0).map(([count, word]) => `${count} ${word}`);
  add(work, {
    column: 'clean_nt', title: 'Dropouts and spikes', values: work.field.map((value, i) => (work.flag[i] === 0 ? value : NaN)),
    summary: `Of ${work.raw.count} readings ${words.length > 0 ? `flagged: ${words.join(', ')}` : 'none is flagged'}; white noise ${noise.toFixed(2)} nT by fourth differences; positions by ${work.raw.shifts.join('; ') || 'nothing'}.`,
  });
}

function baseStep(work: Work, base: NonNullable<ReadingsSource['base']>, settings: ReduceOptions & { readonly mainNT: number }): void {
  const log = readBase(base, settings.mainNT);
  const { variation, datumNT, filled, longestFilledS, uncovered } = baseVariation(work.timeS, log, settings);
  const { low, high } = rangeOf(variation);
  for (let i = 0; i < variation.length; i++) if (Number.isNaN(variation[i]!) && work.flag[i] === 0) work.flag[i] = FLAG.base_gap;
  if (filled > 0) work.warnings.push(`${log.source}: ${filled} readings lie in gaps of the base log of up to ${Math.round(longestFilledS)} s, interpolated across; short pulsations stay in them.`);
  if (uncovered > 0) work.warnings.push(`${log.source}: ${uncovered} readings are not covered by the base log and were left out (base_gap).`);
  if (uncovered === variation.length) {
    throw new UserError({ code: 'base_no_overlap', where: log.source, found: 'a base log with gaps wherever there are readings', wanted: `base readings at most ${settings.maxFillS} s apart` });
  }
  add(work, {
    column: 'base_nt', title: 'Base-station variation', values: work.field.map((value, i) => value - variation[i]!),
    summary: `Base variation from ${low.toFixed(1)} to ${high.toFixed(1)} nT about its median of ${datumNT.toFixed(1)} nT taken off; ${log.spikes} false base readings left out.`,
  });
}

function headStep(work: Work, main: Float64Array): void {
  const effect = headingEffect(chunksOf(work, work.field.map((value, i) => value - main[i]!)));
  add(work, {
    column: 'head_nt', title: 'Heading effect', values: effect.kind === 'none' ? work.field : work.field.map((value, i) => value - effect.effectNT(work.courseDeg[i]!)),
    summary: effect.kind === 'none' ? `Heading effect left as it is: ${effect.reason}.` : effect.summary,
  });
}

function mainStep(work: Work, main: Float64Array): void {
  const { low, high } = rangeOf(main);
  add(work, {
    column: 'main_nt', title: 'Main field', values: work.field.map((value, i) => value - main[i]!),
    summary: `Main field (World Magnetic Model) from ${low.toFixed(1)} to ${high.toFixed(1)} nT taken off.`,
  });
}

function driftStep(work: Work, settings: ReduceOptions): void {
  const chunks = chunksOf(work, work.field);
  const lineS = median(work.runs.map(({ start, end }) => work.timeS[end - 1]! - work.timeS[start]!));
  const windowS = settings.driftWindowS ?? Math.max(DRIFT_LEAST_S, DRIFT_LINES * lineS);
  const drift = timeDrift(chunks, { windowS, regionalM: work.regionalM > 0 ? work.regionalM : REGIONAL_LEAST_M });
  const { low, high } = rangeOf(chunks.timeS.map(drift));
  work.warnings.push('The variation of the main field was estimated from the readings themselves; changes faster than some minutes stay in the residual.');
  add(work, {
    column: 'drift_nt', title: 'Drift', values: work.field.map((value, i) => value - drift(work.timeS[i]!)),
    summary: `Slow drift from ${low.toFixed(1)} to ${high.toFixed(1)} nT over windows of ${Math.round(windowS)} s taken off.`,
  });
}

function regionalStep(work: Work): void {
  const chunks = chunksOf(work, work.field);
  const surface = regionalField(chunks, chunks.field, work.regionalM);
  const middle = median(chunks.field);
  const removed = Float64Array.from(work.x, (x, i) => {
    if (work.flag[i] !== 0) return NaN;
    const value = surface(x, work.y[i]!);
    // A reading with too few others near has no regional field of its own; the survey's middle stands for it.
    return Number.isNaN(value) ? middle : value;
  });
  const { low, high } = rangeOf(removed);
  add(work, {
    column: 'reg_nt', title: 'Regional field', values: work.field.map((value, i) => value - removed[i]!),
    summary: `Regional field over ${Math.round(work.regionalM)} m from ${low.toFixed(1)} to ${high.toFixed(1)} nT taken off (robust local planes).`,
  });
}

function add(work: Work, step: ReductionStep): void {
  work.steps.push(step);
  work.field = step.values;
}

function chunksOf(work: Work, field: Float64Array): Chunks {
  const widthM = work.regionalM > 0 ? work.regionalM : REGIONAL_LEAST_M;
  return makeChunks(field, work, { runs: work.runs, lengthM: widthM * CHUNK_SHARE });
}

/** Usual distance between readings, metres. */
function stepOf({ x, y, runs }: Work): number {
  const steps: number[] = [];
  for (const { start, end } of runs) for (let i = start + 1; i < end; i++) steps.push(Math.hypot(x[i]! - x[i - 1]!, y[i]! - y[i - 1]!));
  const usual = median(steps);
  return Number.isNaN(usual) ? 0 : usual;
}

function checkDate(timeS: Float64Array, site: Site, warnings: string[]): void {
  const middle = median(timeS);
  if (Number.isNaN(middle) || Math.abs(decimalYearOf(middle) - site.decimalYear) <= DATE_YEARS) return;
  warnings.push(`The readings are from ${new Date(middle * 1000).toISOString().slice(0, 10)}, more than a month from the date of the survey file.`);
}

/** UTC seconds from the survey's date on, as a walker of the stated speed would have them. */
function walkedTimes(x: Float64Array, y: Float64Array, { speedMS, decimalYear }: { speedMS: number; decimalYear: number }): Float64Array {
  const year = Math.floor(decimalYear);
  let time = Date.UTC(year, 0, 1) / 1000 + Math.round((decimalYear - year) * 365) * 86_400;
  return Float64Array.from(x, (_, i) => {
    const step = i > 0 ? Math.hypot(x[i]! - x[i - 1]!, y[i]! - y[i - 1]!) : 0;
    if (!Number.isNaN(step)) time += step / speedMS;
    return time;
  });
}

/** Least and greatest of the values; NaN ignored. */
function rangeOf(values: Float64Array): { low: number; high: number } {
  let low = Infinity;
  let high = -Infinity;
  for (const value of values) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  return { low, high };
}

function percent(part: number, whole: number): string {
  return `${(100 * part / whole).toFixed(1)} %`;
}
