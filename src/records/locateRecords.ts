import { noShapes, type KnownShapes } from '../density/drawnEllipse.js';
import { UserError, type ComplaintCode } from '../errors.js';
import type { Site } from '../site/types.js';
import { US_SURVEY_FOOT_M } from '../units.js';
import { farFromParcel } from './farFromParcel.js';
import type { Slip } from './implausible.js';
import { placeRecord } from './placeRecord.js';
import { isFault, type Fault, type RawPlace, type RawRecord } from './rawRecord.js';
import { readRawRecords } from './readRawRecords.js';
import { recordDatum } from './recordDatum.js';
import type { RecordSource } from './recordSource.js';
import type { Records, UnplacedRecord, WellRecord } from './types.js';

export const LOCATE_DEFAULTS = Object.freeze({
  /** A record farther than this from the parcel is a mistake in its row, not a place; blunders of a mile stay inside. */
  maxDistanceM: 10_000,
  /** Blunders are spread over a disc of a mile: a section off, a wrong quarter. */
  blunderRadiusM: 5280 * US_SURVEY_FOOT_M,
  /** Rows that are held at a time while records are located; it changes no result. */
  batchRows: 10_000,
});
export type LocateOptions = { readonly [K in keyof typeof LOCATE_DEFAULTS]?: number };

/** Rows with the same id closer than this are the same entry twice: below any digit that a permit gives. */
const SAME_PLACE_M = 0.05;
/** One row alone may be off by any slip; from two on a slip that they all share is the file's. */
const SHARED_SLIP_FROM = 2;

type Outcome = { readonly record: WellRecord } | { readonly fault: Fault; readonly slip: Slip | null };

/** What is remembered of a record that was placed: enough to tell its like again. */
type Remembered = Pick<WellRecord, 'source' | 'row' | 'x' | 'y'>;

/**
 * Historic records as places with error in the survey's frame (metres).
 *
 * A row that cannot be placed (no coordinates, no number, far from the parcel) is returned in `unplaced` with its column, its
 * value and what to do; a mistake in a file as a whole is a UserError. Records of all files together have distinct ids: a
 * repeated id becomes `…#2`, `…#3` with a note; a row that repeats both id and place of an earlier one is unplaced.
 */
export function locateRecords(sources: Iterable<RecordSource>, site: Site, options: LocateOptions = {}): Records {
  const placed: WellRecord[] = [];
  const unplaced: UnplacedRecord[] = [];
  for (const batch of locateInBatches(sources, site, options)) {
    for (const record of batch.placed) placed.push(record);
    for (const record of batch.unplaced) unplaced.push(record);
  }
  return { placed, unplaced };
}

/**
 * The same in batches of `batchRows` rows, in their order: what is held at a time grows with the batch. Of earlier rows only
 * id and place are remembered. A slip that a whole file shares is known, and thrown, at the file's end.
 */
export function* locateInBatches(sources: Iterable<RecordSource>, site: Site, options: LocateOptions = {}): Generator<Records> {
  const settings = { ...LOCATE_DEFAULTS, ...options };
  const byId = new Map<string, Remembered[]>();
  for (const source of sources) {
    const slips = new SharedSlip();
    const shapes = noShapes();
    let batch = emptyBatch();
    let rows = 0;
    for (const raw of readRawRecords(source)) {
      const outcome = outcomeOf(raw, { source, site, shapes, ...settings });
      slips.count(outcome);
      const same = byId.get(raw.recordId);
      const fault = 'fault' in outcome ? outcome.fault : repeatFault(outcome.record, same, raw);
      if (fault) {
        const { column, value, problem, advice } = fault;
        batch.unplaced.push({ recordId: raw.recordId, source: source.name, row: raw.row, column, value, problem, advice });
      } else if ('record' in outcome) {
        const { x, y, row } = outcome.record;
        batch.placed.push(numbered(outcome.record, same));
        const remembered = { source: source.name, row, x, y };
        if (same) same.push(remembered); else byId.set(raw.recordId, [remembered]);
      }
      if (++rows % settings.batchRows === 0) {
        yield batch;
        batch = emptyBatch();
      }
    }
    slips.refuse(source);
    if (batch.placed.length + batch.unplaced.length > 0) yield batch;
  }
}

function emptyBatch(): { placed: WellRecord[]; unplaced: UnplacedRecord[] } {
  return { placed: [], unplaced: [] };
}

function outcomeOf(raw: RawRecord, options: { source: RecordSource; site: Site; shapes: KnownShapes } & Required<LocateOptions>): Outcome {
  const { place } = raw;
  if (isFault(place)) return { fault: place, slip: null };
  if (raw.fault) return { fault: raw.fault, slip: null };
  const datums = recordDatum(raw, options.source);
  if ('problem' in datums) return { fault: datums, slip: null };
  const readable: RawRecord & { place: RawPlace } = { ...raw, place };
  return farFromParcel(readable, datums, options) ?? { record: placeRecord(readable, datums, options) };
}

/** A file in which every row with coordinates has the same slip is described wrongly as a whole. */
class SharedSlip {
  #placed = false;
  #far = 0;
  readonly #kinds = new Map<Slip['kind'], Slip>();

  count(outcome: Outcome): void {
    if ('record' in outcome) this.#placed = true;
    else if (outcome.slip !== null) {
      this.#far++;
      this.#kinds.set(outcome.slip.kind, outcome.slip);
    }
  }

  refuse(source: RecordSource): void {
    if (this.#placed || this.#far < SHARED_SLIP_FROM || this.#kinds.size !== 1) return;
    const [{ kind, words }] = [...this.#kinds.values()] as [Slip];
    throw sharedSlip(source, { kind, words, rows: this.#far });
  }
}

function sharedSlip(source: RecordSource, { kind, words, rows }: Pick<Slip, 'kind' | 'words'> & { rows: number }): UserError {
  const swapped = kind === 'swapped' || kind === 'swapped_sign';
  const code: ComplaintCode = swapped ? 'coordinates_swapped' : 'position_invalid';
  const advice = {
    swapped: 'exchange the two column names in the survey file',
    swapped_sign: 'exchange the two column names in the survey file and correct the sign of the longitudes in the file',
    longitude_sign: 'write west longitudes with a minus sign or a W, or state "west_positive": true for the file',
    latitude_sign: 'write north latitudes without a minus sign',
    metres: 'state a CRS whose unit is the metre',
    feet: 'state a CRS whose unit is the foot',
  }[kind];
  return new UserError({
    code, where: source.name, found: `no row within reach of the parcel, though ${rows} would be with ${words}`,
    wanted: 'positions near the parcel', advice,
  });
}

function repeatFault(record: WellRecord, same: readonly Remembered[] | undefined, raw: RawRecord): Fault | null {
  const twin = same?.find((other) => Math.hypot(other.x - record.x, other.y - record.y) < SAME_PLACE_M);
  if (!twin) return null;
  return {
    column: raw.coordinates.columns, value: raw.coordinates.value,
    problem: `repeats the id and the place of ${twin.source}, row ${twin.row}`, advice: 'remove one of the two rows',
  };
}

function numbered(record: WellRecord, same: readonly Remembered[] | undefined): WellRecord {
  if (!same) return record;
  const others = same.map(({ source, row }) => `${source}, row ${row}`).join('; ');
  const note = `id also in ${others}, elsewhere: taken as a well of its own; if it is the same well, keep the better row`;
  return { ...record, recordId: `${record.recordId}#${same.length + 1}`, note: [record.note, note].filter((text) => text !== '').join('; ') };
}
