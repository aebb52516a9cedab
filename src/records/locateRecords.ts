import { noShapes } from '../density/drawnEllipse.js';
import { CALL_DEFAULTS } from '../geodesy/sections/placeFromCalls.js';
import type { SectionLayer } from '../geodesy/sections/sectionLayer.js';
import type { Datum, DatumShift } from '../geodesy/types.js';
import type { Site } from '../site/types.js';
import { US_SURVEY_FOOT_M } from '../units.js';
import { apiRemarks } from './apiRemarks.js';
import { reachOf } from './farFromParcel.js';
import { joinDuplicates } from './joinDuplicates.js';
import type { LocateContext } from './locateContext.js';
import type { Fault, RawRecord } from './rawRecord.js';
import { readRawRecords } from './readRawRecords.js';
import { decisionOf } from './decisionOf.js';
import { fullSettings, RECORD_FILE_DEFAULTS, type RecordSource } from './recordSource.js';
import { SharedSlip } from './sharedSlip.js';
import { solveRecord, type Outcome } from './solveRecord.js';
import type { Decision, JoinedRow, Records, WellRecord } from './types.js';

export const LOCATE_DEFAULTS = Object.freeze({
  /** A record farther than this from the parcel is a mistake in its row, not a place; blunders of a mile stay inside. */
  maxDistanceM: 10_000,
  /** Blunders are spread over a disc of a mile: a section off, a wrong quarter. Where the section is known, over it. */
  blunderRadiusM: 5280 * US_SURVEY_FOOT_M,
  /** Standard error of a corner of the section layer per axis: as read off a map at 1:24,000. */
  sectionSdM: CALL_DEFAULTS.vertexSdM,
  /** Standard error of measuring a call on the ground: this, and this share of its length. */
  callSdM: CALL_DEFAULTS.measureSdM,
  callSdShare: CALL_DEFAULTS.measureSdShare,
  /** Statements of a well that lie as far apart as right ones do with less than this chance disagree: 1 in 1,000. */
  disagreeBelow: 0.001,
  /** Rows that are held at a time while records are located; it changes no result. */
  batchRows: 10_000,
});
export type LocateOptions = { readonly [K in keyof typeof LOCATE_DEFAULTS]?: number } & {
  /** Sections in the survey's frame, for records that name them. */
  readonly sections?: SectionLayer;
};

/** Rows with the same id closer than this are the same entry twice: below any digit that a permit gives. */
const SAME_PLACE_M = 0.05;
/** Share of a file's rows that name sections within reach from which one beyond the meridian is a slip of side. */
const MOSTLY_NEAR = 0.9;

/** What is remembered of a record that was placed: enough to tell its like again. */
type Remembered = Pick<WellRecord, 'source' | 'row' | 'x' | 'y'>;

/** A batch of rows, with what is needed to look at them once more when all rows are known. */
interface Batch extends Lists {
  /** Rows of `placed`, one for one. */
  readonly raws: RawRecord[];
  /** What is noted of rows that repeat an id, should they not turn out to be rows of one well. */
  readonly idNotes: Array<{ readonly key: string; readonly note: string }>;
}
type Lists = { readonly [K in 'placed' | 'unplaced' | 'disagreements' | 'repairs' | 'apiRemarks' | 'log']: NonNullable<Records[K]>[number][] };

/**
 * Historic records as places with error in the survey's frame (metres).
 *
 * A row that cannot be placed (no coordinates, no number, far from the parcel) is returned in `unplaced` with its column, its
 * value and what to do; a mistake in a file as a whole is a UserError. Records of all files together have distinct ids: a
 * repeated id becomes `…#2`, `…#3` with a note; a row that repeats both id and place of an earlier one is unplaced. Rows
 * that tell of one well (the same API number, or places and attributes that agree) are joined into one record.
 */
export function locateRecords(sources: Iterable<RecordSource>, site: Site, options: LocateOptions = {}): Records {
  const all = emptyBatch();
  const shares = new Map<string, number>();
  const seen = function* (): Generator<RecordSource> {
    for (const source of sources) {
      shares.set(source.name, source.settings.blunderShare ?? RECORD_FILE_DEFAULTS.blunderShare);
      yield source;
    }
  };
  for (const batch of batches(seen(), site, options)) {
    for (const key of Object.keys(all) as Array<keyof Batch>) for (const each of batch[key]) (all[key] as unknown[]).push(each);
  }
  const { raws, idNotes, ...lists } = all;
  const { placed, joined, disagreements } = joinDuplicates(lists.placed, raws, {
    disagreeBelow: options.disagreeBelow ?? LOCATE_DEFAULTS.disagreeBelow, shareOf: (record) => shares.get(record.source)!,
  });
  return { ...lists, placed: withNotes(placed, idNotes), joined, disagreements: [...lists.disagreements, ...disagreements], log: withJoins(lists.log, joined) };
}

/**
 * The same in batches of `batchRows` rows, in their order: what is held at a time grows with the batch. Of earlier rows only
 * id and place are remembered, so rows that tell of one well are not joined. A slip that a whole file shares is known, and
 * thrown, at the file's end.
 */
export function* locateInBatches(sources: Iterable<RecordSource>, site: Site, options: LocateOptions = {}): Generator<Records> {
  for (const { raws: _, idNotes, ...lists } of batches(sources, site, options)) yield { ...lists, placed: withNotes(lists.placed, idNotes) };
}

function* batches(sources: Iterable<RecordSource>, site: Site, options: LocateOptions): Generator<Batch> {
  const settings = { ...LOCATE_DEFAULTS, ...options };
  const { sectionSdM, callSdM, callSdShare, disagreeBelow, blunderRadiusM, batchRows } = settings;
  const byId = new Map<string, Remembered[]>();
  const shared = withSharedShifts(site);
  const common = {
    site: shared, reach: reachOf(shared, settings.maxDistanceM), layer: settings.sections ?? null, disagreeBelow, blunderRadiusM,
    ways: { sectionSdM, callSdM, callSdShare, areas: new Map() },
  };
  for (const source of sources) {
    const slips = new SharedSlip();
    const context: LocateContext = { ...common, source, settings: fullSettings(source), shapes: noShapes() };
    let batch = emptyBatch();
    let rows = 0;
    let mostlyNear: boolean | null = null;
    for (const raw of readRawRecords(source)) {
      const first = solveRecord(raw, context, { rangeByFile: false });
      const outcome = first.section.mirror && (mostlyNear ??= sectionsMostlyNear(context)) ? solveRecord(raw, context, { rangeByFile: true }) : first;
      slips.count(outcome);
      enter(batch, outcome, { raw, source, byId });
      if (++rows % batchRows === 0) {
        yield batch;
        batch = emptyBatch();
      }
    }
    slips.refuse(source);
    if (batch.log.length > 0) yield batch;
  }
}

/** Enters what became of a row into the lists of its batch. */
function enter(batch: Batch, outcome: Outcome, { raw, source, byId }: { readonly raw: RawRecord; readonly source: RecordSource; readonly byId: Map<string, Remembered[]> }): void {
  const about = { recordId: raw.recordId, source: source.name, row: raw.row };
  const same = byId.get(raw.recordId);
  const fault = 'fault' in outcome ? outcome.fault : repeatFault(outcome.record, same, raw);
  for (const repair of outcome.repairs) batch.repairs.push({ ...about, ...repair });
  const { apiNumber, remarks } = apiRemarks(raw, source);
  for (const remark of remarks) batch.apiRemarks.push({ ...about, value: raw.apiNumber, remark });
  if (fault) {
    const { column, value, problem, advice } = fault;
    batch.unplaced.push({ ...about, column, value, problem, advice });
    batch.log.push(decisionOf(about, { outcome, fault, record: null }));
  } else if ('record' in outcome) {
    const { recordId } = outcome.record;
    const record: WellRecord = { ...outcome.record, recordId: same ? `${recordId}#${same.length + 1}` : recordId, ...(apiNumber === null ? {} : { apiNumber }) };
    if (same) batch.idNotes.push({ key: rowKey(about), note: repeatedId(same) });
    batch.placed.push(record);
    batch.raws.push(raw);
    const remembered = { source: source.name, row: raw.row, x: record.x, y: record.y };
    if (same) same.push(remembered); else byId.set(raw.recordId, [remembered]);
    for (const each of outcome.disagreements) batch.disagreements.push({ ...about, recordId: record.recordId, ...each });
    batch.log.push(decisionOf({ ...about, recordId: record.recordId }, { outcome, fault: null, record }));
  }
}

function emptyBatch(): Batch {
  return { placed: [], raws: [], idNotes: [], unplaced: [], disagreements: [], repairs: [], apiRemarks: [], log: [] };
}

function repeatFault(record: WellRecord, same: readonly Remembered[] | undefined, raw: RawRecord): Fault | null {
  const twin = same?.find((other) => Math.hypot(other.x - record.x, other.y - record.y) < SAME_PLACE_M);
  if (!twin) return null;
  return {
    column: raw.coordinates.columns, value: raw.coordinates.value,
    problem: `repeats the id and the place of ${twin.source}, row ${twin.row}`, advice: 'remove one of the two rows',
  };
}

function repeatedId(same: readonly Remembered[]): string {
  const others = same.map(({ source, row }) => `${source}, row ${row}`).join('; ');
  return `id also in ${others}, elsewhere: taken as a well of its own; if it is the same well, keep the better row`;
}

const rowKey = ({ source, row }: Pick<WellRecord, 'source' | 'row'>): string => `${source} ${row}`;

function withNotes(placed: readonly WellRecord[], idNotes: Batch['idNotes']): readonly WellRecord[] {
  if (idNotes.length === 0) return placed;
  const notes = new Map(idNotes.map(({ key, note }) => [key, note]));
  return placed.map((record) => {
    const note = notes.get(rowKey(record));
    return note === undefined ? record : { ...record, note: [record.note, note].filter((text) => text !== '').join('; ') };
  });
}

/** The site with each way between datums built once. */
function withSharedShifts(site: Site): Site {
  const ways = new Map<Datum, DatumShift>();
  return {
    ...site,
    shiftFrom: (datum) => {
      const known = ways.get(datum);
      if (known) return known;
      const way = site.shiftFrom(datum);
      ways.set(datum, way);
      return way;
    },
  };
}

/** The log with what became of the rows that were joined. */
function withJoins(log: readonly Decision[], joined: readonly JoinedRow[]): readonly Decision[] {
  if (joined.length === 0) return log;
  const into = new Map(joined.map((each) => [rowKey(each), each]));
  return log.map((line) => {
    const join = into.get(rowKey(line));
    return join ? { ...line, sureTo: `${line.sureTo}; joined into ${join.into}: ${join.why}` } : line;
  });
}

/** Whether the rows of a file that name a section in full name one within reach nearly all. Asked of a file only where a row gives cause. */
function sectionsMostlyNear(context: LocateContext): boolean {
  let [named, near] = [0, 0];
  for (const raw of readRawRecords(context.source)) {
    if (raw.location === null) continue;
    const { section } = solveRecord(raw, context, { rangeByFile: false });
    if (section.named) named++;
    if (section.near) near++;
  }
  return near >= MOSTLY_NEAR * named;
}
