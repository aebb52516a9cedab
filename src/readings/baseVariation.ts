import { UserError } from '../errors.js';
import { median } from '../numerics/robust.js';
import { formatUtc } from '../table/calendar.js';
import { numberColumn } from '../table/numberColumn.js';
import { inOtherUnit } from './faults.js';
import { despike } from './despike.js';
import { readTimes } from './rawReadings.js';
import type { BaseFile } from './readingSource.js';

export interface BaseLog {
  /** Ascending, UTC seconds. */
  readonly timeS: Float64Array;
  readonly field: Float64Array;
  readonly spikes: number;
  readonly source: string;
}

/** A time that a reading may differ from the base's first or last one, as from a gap: see `maxGapS`. */
export interface BaseOptions {
  readonly maxGapS: number;
  readonly maxFillS: number;
  readonly baseGaps: 'interpolate' | 'leave_out';
}

export interface BaseVariation {
  /** Field of the base less its datum at each reading; NaN where the base cannot tell. */
  readonly variation: Float64Array;
  /** Median of the base over the survey, nT: what the variation is counted from. */
  readonly datumNT: number;
  /** Readings in a gap that was interpolated across. */
  readonly filled: number;
  readonly longestFilledS: number;
  /** Readings that the base does not cover. */
  readonly uncovered: number;
}

/** A base station stands still, so its log holds no source that could look like a spike. */
const STATION = { stepM: 0, sourceM: Infinity } as const;
/** What a base sensor writes when it has no field. */
const LEAST_FIELD_NT = 1;

/**
 * Reads a base log: times in order, false readings and doubles left out. A log may count from any zero, but one in
 * another unit than nT is a UserError `field_out_of_range`: its variation would be too small by that factor.
 */
export function readBase(base: BaseFile, mainNT: number): BaseLog {
  const { table, columns } = base;
  const times = readTimes(table, columns, base);
  const field = numberColumn(table, columns.field, { allowEmpty: true });
  const order = [...times.keys()].filter((i) => Number.isFinite(times[i]!) && Math.abs(field[i]!) >= LEAST_FIELD_NT).toSorted((a, b) => times[a]! - times[b]! || a - b);
  const single = order.filter((i, k) => k === 0 || times[i]! > times[order[k - 1]!]!);
  if (single.length < 2) {
    throw new UserError({ code: 'no_data', where: table.source, found: `${single.length} base readings with time and field`, wanted: 'two or more' });
  }
  const values = Float64Array.from(single, (i) => field[i]!);
  const middle = median(values);
  if (inOtherUnit(middle, mainNT)) {
    throw new UserError({
      code: 'field_out_of_range', where: `${table.source}, column ${columns.field}`, found: `a field of ${middle.toFixed(3)} in the middle of the base log`,
      wanted: `values in nT, as the main field there, ${Math.round(mainNT)} nT`, advice: 'the values seem to be in another unit',
    });
  }
  const spike = despike(values, [{ start: 0, end: values.length }], STATION);
  return {
    source: table.source, spikes: spike.reduce((sum, one) => sum + one, 0),
    timeS: Float64Array.from(single, (i) => times[i]!).filter((_, k) => !spike[k]), field: values.filter((_, k) => !spike[k]),
  };
}

/**
 * The base's variation at each reading's time, by linear interpolation. Between two base readings more than `maxGapS`
 * apart lies a gap; it is interpolated across up to `maxFillS`, or left out (NaN). Before the first and after the last
 * base reading its value holds for `maxGapS`. No overlap at all is a UserError `base_no_overlap` with both spans.
 *
 * Source: field = rover − base(t) + datum (common practice).
 */
export function baseVariation(timeS: Float64Array, base: BaseLog, { maxGapS, maxFillS, baseGaps }: BaseOptions): BaseVariation {
  const first = base.timeS[0]!;
  const last = base.timeS[base.timeS.length - 1]!;
  let from = Infinity;
  let to = -Infinity;
  for (const time of timeS) {
    if (time < from) from = time;
    if (time > to) to = time;
  }
  if (!(from <= last && to >= first)) throw noOverlap({ from, to, first, last }, base.source);
  const used = base.field.filter((_, k) => base.timeS[k]! >= from - maxGapS && base.timeS[k]! <= to + maxGapS);
  const datumNT = median(used.length > 0 ? used : base.field);
  const variation = new Float64Array(timeS.length).fill(NaN);
  const longest = baseGaps === 'interpolate' ? Math.max(maxGapS, maxFillS) : maxGapS;
  let filled = 0;
  let longestFilledS = 0;
  let uncovered = 0;
  let k = 0;
  for (let i = 0; i < timeS.length; i++) {
    const time = timeS[i]!;
    while (k < base.timeS.length - 2 && base.timeS[k + 1]! <= time) k++;
    while (k > 0 && base.timeS[k]! > time) k--;
    const gapS = base.timeS[k + 1]! - base.timeS[k]!;
    const inside = time >= first && time <= last;
    const covered = inside ? gapS <= longest : time >= first - maxGapS && time <= last + maxGapS;
    if (!covered) {
      uncovered += 1;
      continue;
    }
    const share = Math.min(1, Math.max(0, (time - base.timeS[k]!) / gapS));
    variation[i] = base.field[k]! + share * (base.field[k + 1]! - base.field[k]!) - datumNT;
    if (inside && gapS > maxGapS) {
      filled += 1;
      longestFilledS = Math.max(longestFilledS, gapS);
    }
  }
  return { variation, datumNT, filled, longestFilledS, uncovered };
}

function noOverlap({ from, to, first, last }: { from: number; to: number; first: number; last: number }, source: string): UserError {
  const shiftH = Math.round(((first + last) / 2 - (from + to) / 2) / 3600);
  const zoned = shiftH !== 0 && Math.abs(shiftH) <= 14 && from + shiftH * 3600 <= last && to + shiftH * 3600 >= first;
  return new UserError({
    code: 'base_no_overlap', where: source, found: `a base log from ${formatUtc(first)} to ${formatUtc(last)}`, wanted: `one that covers the readings, ${formatUtc(from)} to ${formatUtc(to)}`,
    advice: zoned ? `the two lie ${Math.abs(shiftH)} h apart: check the time zones` : 'check the dates and the time zones of both files',
  });
}
