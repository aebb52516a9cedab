import { UserError } from '../errors.js';
import { median } from '../numerics/robust.js';
import { FAR_M } from './readingPlaces.js';
import type { RawReadings } from './rawReadings.js';
import { FLAGS, type FlagCode } from './types.js';

export const FLAG = Object.freeze(Object.fromEntries(FLAGS.map((word, code) => [word, code]))) as Readonly<Record<(typeof FLAGS)[number], FlagCode>>;

/**
 * A reading this far from the main field is no field of the ground: wells over steel casing reach 6,000 nT at ground
 * level (USGS Open-File Report 83-702), and strong scrap under the sensor a few times that.
 */
const READING_RANGE_NT = 20_000;
/** The middle of a whole survey lies within this of the main field; only iron ore moves it more (from memory). */
const SURVEY_RANGE_NT = 5000;
/** Anomalies of a whole survey have a middle near zero; the ground they lie over may shift it by as much as ore does. */
const ANOMALY_RANGE_NT = 5000;
/** µT, mT, gauss and slips of a decimal point; nearer than this share to the main field, that is what it was. */
const UNIT_SCALES = [0.001, 0.01, 0.1, 10, 100, 1000, 100_000, 1_000_000];
const UNIT_NEAR = 0.02;
/** Below this a total field is one that a sensor writes when it has none: no place on earth has less than 22,000 nT. */
const LEAST_FIELD_NT = 1;

export interface FieldRange {
  readonly kind: 'total_field' | 'anomaly';
  readonly mainNT: number;
  readonly source: string;
}

/**
 * Flags what is no reading at all: without a field (empty or zero), far outside the main field's range, without a
 * position or kilometres from all others, or at the same time as the one before. A survey whose middle lies outside the
 * range is a UserError `field_out_of_range`: then it is the unit or the kind that is wrong, not a reading.
 */
export function flagFaults(raw: RawReadings, range: FieldRange): Uint8Array {
  const { kind, mainNT } = range;
  const flag = new Uint8Array(raw.count);
  const blank = (value: number): boolean => Number.isNaN(value) || (kind === 'total_field' && Math.abs(value) < LEAST_FIELD_NT);
  const read = raw.field.filter((value) => !blank(value));
  if (read.length === 0) {
    throw new UserError({ code: 'no_data', where: range.source, found: `${raw.count} rows without a single field value`, wanted: 'readings in nT', advice: 'check which column holds the field' });
  }
  checkMiddle(median(read), range);
  const middleX = median(raw.x);
  const middleY = median(raw.y);
  const centreNT = kind === 'total_field' ? mainNT : 0;
  // An area is as wide as its readings: only what lies far beyond nearly all of them is a slip of the receiver.
  const reachM = FAR_M + 3 * Math.max(spread(raw.x, middleX), spread(raw.y, middleY));
  for (let i = 0; i < raw.count; i++) {
    const x = raw.x[i]!;
    const y = raw.y[i]!;
    if (blank(raw.field[i]!)) flag[i] = FLAG.dropout;
    else if (Math.abs(raw.field[i]! - centreNT) > READING_RANGE_NT) flag[i] = FLAG.out_of_range;
    else if (!(Math.hypot(x - middleX, y - middleY) <= reachM)) flag[i] = FLAG.no_position;
    else if (i > 0 && raw.timeS[i] === raw.timeS[i - 1]) flag[i] = FLAG.repeat_time;
  }
  if (!flag.includes(0)) {
    throw new UserError({ code: 'no_data', where: range.source, found: `${raw.count} rows, none with a field and a position`, wanted: 'readings with both' });
  }
  return flag;
}

/** Whether a total field would be the main field in another unit or with its decimal point elsewhere. */
export function inOtherUnit(middleNT: number, mainNT: number): boolean {
  return UNIT_SCALES.some((scale) => Math.abs(middleNT * scale - mainNT) <= UNIT_NEAR * mainNT);
}

function checkMiddle(middleNT: number, { kind, mainNT, source }: FieldRange): void {
  const total = `the main field there, ${Math.round(mainNT)} nT`;
  if (kind === 'anomaly') {
    if (Math.abs(middleNT) <= ANOMALY_RANGE_NT) return;
    throw new UserError({
      code: 'field_out_of_range', where: source, found: `anomalies with ${middleNT.toFixed(1)} nT in their middle`, wanted: `values about 0, the main field (${Math.round(mainNT)} nT) taken off`,
      ...(Math.abs(middleNT - mainNT) <= SURVEY_RANGE_NT ? { advice: 'these are total fields: state "kind": "total_field"' } : {}),
    });
  }
  if (Math.abs(middleNT - mainNT) <= SURVEY_RANGE_NT) return;
  const advice = inOtherUnit(middleNT, mainNT) ? 'the values seem to be in another unit: give them in nT'
    : Math.abs(middleNT) <= ANOMALY_RANGE_NT ? 'if the main field is already taken off, state "kind": "anomaly"'
      : 'check which column holds the field, the place and the date';
  throw new UserError({ code: 'field_out_of_range', where: source, found: `a total field of ${middleNT.toFixed(1)} nT in the middle of the readings`, wanted: `values near ${total}`, advice });
}

function spread(values: Float64Array, middle: number): number {
  return median(values.map((value) => Math.abs(value - middle)));
}
