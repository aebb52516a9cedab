import { UserError } from '../../errors.js';
import { parsePlssId } from './plssId.js';
import { meridianCode } from './principalMeridians.js';
import type { SectionFeatures } from './types.js';

/** Names of a section layer's columns; those that it does not have are not looked at. */
export interface SectionAttributes {
  /** Township, range and meridian in one word, as BLM's CadNSDI has them: `OR330350S0290E0`. Where the layer lacks it, the columns that follow serve. */
  readonly plssId: string;
  /** `35`, or `35S` and `T35S`, which need no direction column; `35.5`, `35½` for a half township. */
  readonly township: string;
  readonly townshipDir: string;
  readonly range: string;
  readonly rangeDir: string;
  /** Name or code; a layer may lack it. */
  readonly meridian: string;
  readonly section: string;
  /** Kind of first division: only `SN`, sections, count where the layer has it. */
  readonly sectionType: string;
  /** Number of a lot; empty for a section's own polygon. */
  readonly lot: string;
  /** Kind of second division: only `L`, lots, count where the layer has it. */
  readonly lotType: string;
}

/** Columns of BLM's CadNSDI. Source: FGDC Cadastral Subcommittee, PLSS CadNSDI first and second division (2015). */
export const SECTION_ATTRIBUTES: SectionAttributes = Object.freeze({
  plssId: 'PLSSID', township: 'TWNSHPNO', townshipDir: 'TWNSHPDIR', range: 'RANGENO', rangeDir: 'RANGEDIR', meridian: 'PRINMERCD',
  section: 'FRSTDIVNO', sectionType: 'FRSTDIVTYP', lot: 'SECDIVNO', lotType: 'SECDIVTYP',
});

/** One polygon of the layer that a record can name. */
export interface SectionRow {
  /** From 1. */
  readonly feature: number;
  readonly township: number;
  readonly townshipHalf: boolean;
  readonly townshipDir: 'N' | 'S';
  readonly range: number;
  readonly rangeHalf: boolean;
  readonly rangeDir: 'E' | 'W';
  readonly section: number;
  /** Code of two digits; null where the layer names none. */
  readonly meridian: string | null;
  readonly lot: string | null;
}

type Values = SectionFeatures['features'][number]['properties'];

/**
 * What each feature of a section layer is called. Features that are no section (tracts, aliquot parts, quarter townships)
 * or that cannot be read are left out and counted in the notes.
 */
export function sectionRows({ source, features }: SectionFeatures, names: SectionAttributes): { rows: SectionRow[]; notes: string[] } {
  checkColumns(source, features, names);
  const rows: SectionRow[] = [];
  const left = new Map<string, { count: number; first: number }>();
  features.forEach(({ properties }, i) => {
    const read = readRow(properties, names);
    if (typeof read !== 'string') {
      rows.push({ ...read, feature: i + 1 });
      return;
    }
    const seen = left.get(read);
    left.set(read, { count: (seen?.count ?? 0) + 1, first: seen?.first ?? i + 1 });
  });
  return { rows, notes: [...left].map(([why, { count, first }]) => `${source}: ${count} feature${count === 1 ? '' : 's'} left out, ${why} (first: feature ${first})`) };
}

/** The row, or why the feature is none. */
function readRow(values: Values, names: SectionAttributes): Omit<SectionRow, 'feature'> | string {
  const kind = text(values, names.sectionType);
  if (kind !== '' && kind !== 'SN') return 'not a section by its type';
  const number = /^0*([1-9]\d{0,2})$/.exec(text(values, names.section));
  if (!number) return 'without a section number';
  const lotKind = text(values, names.lotType);
  const lot = text(values, names.lot).replace(/^0+(?=\d)/, '') || null;
  if (lot !== null && lotKind !== '' && lotKind !== 'L') return 'an aliquot part, which is worked out from its section';
  const township = text(values, names.plssId) !== '' ? fromPlssId(text(values, names.plssId)) : fromColumns(values, names);
  return typeof township === 'string' ? township : { ...township, section: Number(number[1]), lot };
}

type Township = Omit<SectionRow, 'feature' | 'section' | 'lot'>;

function fromPlssId(value: string): Township | string {
  const id = parsePlssId(value);
  if (!id) return 'with a township identifier that cannot be read';
  if (id.townshipQuarters % 2 === 1 || id.rangeQuarters % 2 === 1) return 'in a quarter or three-quarter township, which no record is read as';
  const { township, townshipDir, range, rangeDir, meridian } = id;
  return { township, townshipHalf: id.townshipQuarters === 2, townshipDir, range, rangeHalf: id.rangeQuarters === 2, rangeDir, meridian };
}

function fromColumns(values: Values, names: SectionAttributes): Township | string {
  const township = numbered(text(values, names.township) + text(values, names.townshipDir), 'NS');
  const range = numbered(text(values, names.range) + text(values, names.rangeDir), 'EW');
  if (!township || !range) return 'with a township or range that cannot be read';
  const named = text(values, names.meridian);
  const meridian = named === '' ? null : meridianCode(named);
  if (named !== '' && meridian === null) return 'with a principal meridian that is not known';
  return {
    township: township.number, townshipHalf: township.half, townshipDir: township.direction as 'N' | 'S',
    range: range.number, rangeHalf: range.half, rangeDir: range.direction as 'E' | 'W', meridian,
  };
}

function numbered(value: string, directions: string): { number: number; half: boolean; direction: string } | null {
  const match = /^[TR]?\.?\s*0*(\d{1,3})(\.0|\.5|½| ?1\/2)?\s*([NSEW])\.?$/.exec(value);
  if (!match || !directions.includes(match[3]!)) return null;
  return { number: Number(match[1]), half: match[2] !== undefined && match[2] !== '.0', direction: match[3]! };
}

function text(values: Values, name: string): string {
  const value = values[name];
  return value === undefined || value === null ? '' : String(value).trim().toUpperCase();
}

function checkColumns(source: string, features: SectionFeatures['features'], names: SectionAttributes): void {
  const has = (name: string): boolean => features.some(({ properties }) => name in properties);
  const missing = [names.section, ...(has(names.plssId) ? [] : [names.township, names.range])].filter((name) => !has(name));
  if (features.length === 0) throw new UserError({ code: 'no_data', where: source, found: 'no features', wanted: 'polygons of sections' });
  if (missing.length === 0) return;
  throw new UserError({
    code: 'column_missing', where: source, found: `no column ${missing.join(' and no column ')}`,
    wanted: `the section's number, and ${names.plssId} or a township and a range`, advice: "name the layer's own columns in the survey file",
  });
}
