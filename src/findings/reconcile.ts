import type { Anomalies, Anomaly } from '../anomalies/types.js';
import { CASING_SHARE } from '../detection/sourcePrior.js';
import { expectation } from '../density/expectation.js';
import type { Grid } from '../raster/types.js';
import type { Records, UnplacedRecord, WellRecord } from '../records/types.js';
import { digOrder } from './digOrder.js';
import { intensities, type Intensities } from './intensities.js';
import { matchPosterior, type GroupShift, type Posterior } from './posterior.js';
import { remainsAfterEmptySearch } from './remains.js';
import type { Finding, Findings, PairChance } from './types.js';

const M2_PER_HA = 10_000;

export interface ReconcileOptions {
  /** A record is located where one anomaly is its well with at least this chance. */
  readonly locatedAt: number;
  /** It is ambiguous where no single anomaly reaches that, but all together reach this. */
  readonly ambiguousAt: number;
  /** It is not searched for where its well lies in ground searched with less than this chance. */
  readonly notSearchedBelow: number;
  /** A casing is unrecorded where no record tells of it with at least this chance. */
  readonly unrecordedAt: number;
  /** An anomaly is worth a row of its own where it is classed as a casing or is one with at least this chance. */
  readonly casingAt: number;
  /** Casings that no record tells of, per hectare; unsaid, see `intensities`. */
  readonly unrecordedPerHa?: number;
  /** Sources that are no casings, per hectare; unsaid, see `intensities`. */
  readonly othersPerHa?: number;
}

export const RECONCILE_DEFAULTS: Readonly<Omit<ReconcileOptions, 'unrecordedPerHa' | 'othersPerHa'>> = Object.freeze({
  locatedAt: 0.9, ambiguousAt: 0.5, notSearchedBelow: 0.05, unrecordedAt: 0.5, casingAt: 0.5,
});

export interface SearchedGround {
  /** Chance of detection, cell by cell; NaN outside the open ground. */
  readonly detection: Grid;
  /** 1 where searched, 0 where not; NaN outside the open ground. */
  readonly covered: Grid;
}

/** Pairs less likely than this are not listed. */
const LEAST_PAIR = 1e-3;
/** A group's shift is told where the matches have narrowed it to less than this share of its prior. */
const TOLD_SHIFT = 0.8;

/**
 * Records against anomalies: which record is which casing, what stays open, what to dig first.
 *
 * One row per placed record, then one per casing that no record tells of, then one per record without a place.
 * `pRemains` is the posterior chance that the record's casing exists: that of being matched, plus, for the rest,
 * p(1 − q)/(1 − pq), the chance after an empty search; without any candidate it is just that. For an unrecorded row it is
 * the chance that the source is a casing; its `pCovered` and `pDetect` are NaN, for it has been found. A not found or not
 * searched row has no anomaly, and NaN for `pMatch`, `distM` and `azimDeg`.
 */
export function reconcile(records: Records, anomalies: Anomalies, ground: SearchedGround, options: Partial<ReconcileOptions> = {}): Findings {
  const settings: ReconcileOptions = { ...RECONCILE_DEFAULTS, ...options };
  const list = anomalies.list;
  const covered = records.placed.map(({ density }) => share(expectation(density, ground.covered)));
  const detect = records.placed.map(({ density }, i) => Math.min(covered[i]!, share(expectation(density, ground.detection))));
  const perHa = intensities(list, {
    hectares: openM2(ground.covered) / M2_PER_HA, expected: records.placed.reduce((sum, { pCasing }, i) => sum + pCasing * detect[i]!, 0), stated: settings,
  });
  const posterior = matchPosterior({
    records: records.placed, detect, anomalies: list,
    prior: { unrecordedPerM2: perHa.unrecorded / M2_PER_HA, othersPerM2: perHa.others / M2_PER_HA, casingOdds: CASING_SHARE / (1 - CASING_SHARE) },
  });

  const sharedOut = list.map((_, j) => isSharedOut(posterior.pairs.map((row) => row[j]!), settings));
  const recordRows = records.placed.map((record, i) => {
    const sharing = list.findIndex((_, j) => sharedOut[j]!(posterior.pairs[i]![j]!)) >= 0;
    return recordRow(record, { list, chances: posterior.pairs[i]!, pCovered: covered[i]!, pDetect: detect[i]!, sharing }, settings);
  });
  const named = new Set(recordRows.map(({ anomalyId }) => anomalyId));
  const rows: Finding[] = [...recordRows, ...unrecordedRows({ list, posterior, named }, settings), ...records.unplaced.map(unplacedRow)];
  const pairs: PairChance[] = records.placed.flatMap((record, i) =>
    list.map((anomaly, j) => ({ recordId: record.recordId, anomalyId: anomaly.anomalyId, p: posterior.pairs[i]![j]! }))
      .filter(({ p }) => p >= LEAST_PAIR).toSorted((a, b) => b.p - a.p));
  return { list: digOrder(rows, list, posterior.casing), pairs, notes: notes(perHa, posterior.shifts) };
}

interface RecordChances {
  readonly list: readonly Anomaly[];
  readonly chances: Float64Array;
  readonly pCovered: number;
  readonly pDetect: number;
  /** It shares a casing with other records (see `isSharedOut`). */
  readonly sharing: boolean;
}

/**
 * Two permits of one well halve its casing between them, and neither would reach `ambiguousAt`. So where an anomaly
 * belongs to the records taken together, but to none of them for certain, those with this chance of it are ambiguous,
 * and the likeliest one in any case.
 */
const SHARING = 0.25;

/** Says of a record's chance of the anomaly whether the record is one of those that share it. */
function isSharedOut(column: readonly number[], settings: ReconcileOptions): (p: number) => boolean {
  const most = Math.max(0, ...column);
  const open = most < settings.locatedAt && column.reduce((a, b) => a + b, 0) >= settings.ambiguousAt;
  return (p) => open && (p >= SHARING || p === most);
}

function recordRow(record: WellRecord, { list, chances, pCovered, pDetect, sharing }: RecordChances, settings: ReconcileOptions): Finding {
  const matched = share(chances.reduce((sum, p) => sum + p, 0));
  const order = list.map((_, j) => j).toSorted((a, b) => chances[b]! - chances[a]!);
  const best = order[0];
  const pRemains = share(matched + (1 - matched) * remainsAfterEmptySearch(record.pCasing, pDetect));
  const own = { recordId: record.recordId, pCovered, pDetect, pRemains, digOrder: 0 };
  if (best !== undefined && (chances[best]! >= settings.locatedAt || matched >= settings.ambiguousAt || sharing)) {
    const anomaly = list[best]!;
    const located = chances[best]! >= settings.locatedAt;
    const to = { anomalyId: anomaly.anomalyId, pMatch: share(chances[best]!), ...bearing(record, anomaly) };
    if (located) return { ...own, ...to, finding: 'located', x: anomaly.x, y: anomaly.y, note: record.note };
    const named = order.filter((j) => chances[j]! >= settings.notSearchedBelow).map((j) => `${list[j]!.anomalyId} ${chances[j]!.toFixed(2)}`);
    return { ...own, ...to, finding: 'ambiguous', x: record.x, y: record.y, note: joined(`candidates ${named.join(', ')}`, record.note) };
  }
  const searched = pCovered >= settings.notSearchedBelow;
  return {
    ...own, anomalyId: '', finding: searched ? 'not_found' : 'not_searched', pMatch: NaN, distM: NaN, azimDeg: NaN, x: record.x, y: record.y,
    note: joined(best !== undefined && matched >= settings.notSearchedBelow ? `weak candidate ${list[best]!.anomalyId} ${chances[best]!.toFixed(2)}` : '', record.note),
  };
}

interface Unclaimed {
  readonly list: readonly Anomaly[];
  readonly posterior: Posterior;
  /** Anomalies that a record's row names. */
  readonly named: ReadonlySet<string>;
}

/** A casing that no row names gets one of its own even where many records have a little of it each: none drops out. */
function unrecordedRows({ list, posterior: { pairs, casing }, named }: Unclaimed, settings: ReconcileOptions): Finding[] {
  return list.flatMap((anomaly, j) => {
    const pMatch = share(1 - pairs.reduce((sum, row) => sum + row[j]!, 0));
    if (!(anomaly.class === 'casing' || anomaly.pCasing >= settings.casingAt)) return [];
    if (pMatch < settings.unrecordedAt && named.has(anomaly.anomalyId)) return [];
    return [{
      recordId: '', anomalyId: anomaly.anomalyId, finding: 'unrecorded' as const, pMatch, distM: NaN, azimDeg: NaN,
      pCovered: NaN, pDetect: NaN, pRemains: share(casing[j]!), digOrder: 0, x: anomaly.x, y: anomaly.y, note: '',
    }];
  });
}

function unplacedRow({ recordId, source, row, column, value, problem, advice }: UnplacedRecord): Finding {
  return {
    recordId, anomalyId: '', finding: 'not_searched', pMatch: NaN, distM: NaN, azimDeg: NaN, pCovered: NaN, pDetect: NaN, pRemains: NaN,
    digOrder: 0, x: NaN, y: NaN, note: `no place: ${source}, row ${row}, ${column} "${value}": ${problem}; ${advice}`,
  };
}

/** From the record's best position to the casing; azimuth clockwise from grid north. */
function bearing(record: WellRecord, anomaly: Anomaly): { distM: number; azimDeg: number } {
  const dx = anomaly.x - record.x;
  const dy = anomaly.y - record.y;
  return { distM: Math.hypot(dx, dy), azimDeg: ((Math.atan2(dx, dy) * 180) / Math.PI + 360) % 360 };
}

function notes(perHa: Intensities, shifts: readonly GroupShift[]): string[] {
  return [
    'Magnetics cannot see a well whose casing was pulled, cut off below reach, or never of steel.',
    `Taken as likely for each hectare: ${perHa.unrecorded.toPrecision(2)} casings that no record tells of and ${perHa.others.toPrecision(2)} other sources.`,
    ...shifts.filter(({ sdM, priorSdM }) => sdM < TOLD_SHIFT * priorSdM).map(({ id, eastM, northM, sdM }) =>
      `Records of the group ${id} lie off the casings by a common ${Math.hypot(eastM, northM).toFixed(1)} m (${eastM.toFixed(1)} m east, ${northM.toFixed(1)} m north of where the records say, each ± ${sdM.toFixed(1)} m).`),
  ];
}

/** Ground that the grid knows of, m². */
function openM2({ values, cellM }: Grid): number {
  let cells = 0;
  for (let i = 0; i < values.length; i++) if (!Number.isNaN(values[i]!)) cells++;
  return cells * cellM * cellM;
}

function joined(...parts: string[]): string {
  return parts.filter((part) => part !== '').join('; ');
}

/** Rounding may carry a chance past its ends. */
function share(p: number): number {
  return Math.min(1, Math.max(0, p));
}
