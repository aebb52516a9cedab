import { UserError } from '../errors.js';
import type { Crs, Datum } from '../geodesy/types.js';
import { datumByDate, type DatedDatum } from './datumByDate.js';
import { datumWord } from './datumWord.js';
import type { Fault, RawRecord } from './rawRecord.js';
import type { RecordFileSettings, RecordSource } from './recordSource.js';

/** Datums that a record may be in with their weights, which sum to 1; a single one where it is known. */
export type DatumWeights = ReadonlyArray<{ readonly datum: Datum; readonly weight: number }>;

const WANTED = 'NAD27, NAD83, NAD83(2011) or WGS 84, or blank where nobody knows';

/** The datums of a row, and what has to be said of how they were found. */
export interface RowDatum {
  readonly weights: DatumWeights;
  readonly note: string;
}

/** What the datum is wanted for, where it is not the row's coordinates. */
export interface DatumWish {
  /** CRS that the coordinates are in; null for angles whose file names none. */
  readonly crs: Crs | null;
  /** Datum that stands beside the coordinates in a text. */
  readonly stated?: Datum;
}

/**
 * The datum of a row: its own, else by the date of its map, else the file's, else the CRS's, else the stated weights of an
 * unknown one. A row that has none of these is a UserError, since a datum taken for granted is off by up to 100 m in the
 * lower 48.
 */
export function recordDatum(raw: RawRecord, source: RecordSource, { crs, stated }: DatumWish): RowDatum | Fault {
  if (stated !== undefined) return { weights: [{ datum: stated, weight: 1 }], note: '' };
  const dated = datumByDate(raw.mapDate, source.settings.datumByDate ?? [], `${source.name}, datum_by_date`);
  const found = weightsOf(raw, source, { crs, dated });
  return 'problem' in found ? found : { weights: found, note: dated.note };
}

function weightsOf(raw: RawRecord, source: RecordSource, { crs, dated }: { readonly crs: Crs | null; readonly dated: DatedDatum }): DatumWeights | Fault {
  const { settings, name } = source;
  const column = settings.columns?.datum ?? 'datum';
  const row = raw.datumText === null ? 'unknown' : datumWord(raw.datumText);
  if (row === null) {
    throw new UserError({ code: 'datum_unknown', where: `${name}, row ${raw.row}, column ${column}`, found: `"${raw.datumText}"`, wanted: WANTED });
  }
  if (crs?.kind === 'projected') {
    const clash = row !== 'unknown' && family(row) !== family(crs.datum);
    if (!clash) return [{ datum: crs.datum, weight: 1 }];
    return {
      column, value: raw.datumText ?? '', problem: `the row says ${row} but its coordinates are in ${crs.code} (${crs.datum})`,
      advice: 'put rows of another datum in a file of their own with its CRS',
    };
  }
  if (row !== 'unknown') return [{ datum: row, weight: 1 }];
  // "unknown" in so many words overrides the file's datum; a blank cell does not.
  const saysUnknown = raw.datumText !== null && raw.datumText.trim() !== '';
  if (!saysUnknown && dated.datum !== null && dated.datum !== 'unknown') return [{ datum: dated.datum, weight: 1 }];
  const byRule = dated.datum === 'unknown';
  const file = byRule ? null : fileDatum(settings, name);
  if (!saysUnknown && file !== null) return [{ datum: file, weight: 1 }];
  if (!saysUnknown && !byRule && crs !== null) return [{ datum: crs.datum, weight: 1 }];
  const weights = unknownWeights(settings, name);
  if (weights !== null) return weights;
  throw new UserError({
    code: 'datum_unknown', where: `${name}, row ${raw.row}`,
    found: raw.datumText === null ? 'no datum for the file and no column of datums' : `"${raw.datumText}" in column ${column}`,
    wanted: WANTED.replace(', or blank where nobody knows', ''),
    advice: 'add "datum": "NAD27" (or another) for the whole file, a column of datums, or weights such as "unknown_datum": { "NAD27": 0.7, "NAD83": 0.3 }',
  });
}

/** The realisations of NAD83 lie within centimetres to decimetres of each other; a file that mixes their names is no clash. */
function family(datum: Datum): string {
  return datum === 'NAD83(2011)' ? 'NAD83' : datum;
}

/** The datum stated for the whole file; null where none is, or where it says `unknown`. */
function fileDatum(settings: RecordFileSettings, name: string): Datum | null {
  const word = datumWord(settings.datum ?? '');
  if (word === null) {
    throw new UserError({ code: 'datum_unknown', where: `${name}, datum`, found: `"${settings.datum}"`, wanted: WANTED });
  }
  return word === 'unknown' ? null : word;
}

function unknownWeights(settings: RecordFileSettings, name: string): DatumWeights | null {
  if (settings.unknownDatum === undefined) return null;
  const where = `${name}, unknown_datum`;
  const weights = new Map<Datum, number>();
  for (const [text, weight] of Object.entries(settings.unknownDatum)) {
    const datum = datumWord(text);
    if (datum === null || datum === 'unknown') {
      throw new UserError({ code: 'datum_unknown', where, found: `"${text}"`, wanted: 'NAD27, NAD83, NAD83(2011) or WGS 84' });
    }
    if (!(Number.isFinite(weight) && weight! >= 0)) {
      throw new UserError({ code: 'key_invalid', where: `${where}.${text}`, found: String(weight), wanted: 'a weight of 0 or more' });
    }
    weights.set(datum, (weights.get(datum) ?? 0) + weight!);
  }
  const sum = [...weights.values()].reduce((total, weight) => total + weight, 0);
  if (!(sum > 0)) throw new UserError({ code: 'key_invalid', where, found: 'no weight above 0', wanted: 'at least one datum with a weight' });
  return [...weights].filter(([, weight]) => weight > 0).map(([datum, weight]) => ({ datum, weight: weight / sum }));
}
