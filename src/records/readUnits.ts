import { coordinateUnit } from './coordinateUnit.js';
import { faultOf } from './faultOf.js';
import type { Slip } from './implausible.js';
import type { LocateContext, RowRepair } from './locateContext.js';
import { parseLocation } from './locationText/parseLocation.js';
import type { SectionStatement, SingleStatement } from './locationText/types.js';
import { isFault, type Fault, type RawRecord, type RawText } from './rawRecord.js';
import { recordDatum, type DatumWeights, type DatumWish } from './recordDatum.js';
import { recordError } from './recordError.js';
import { sourceCrs } from './recordSource.js';
import { rangeRepair, sectionUnit, type SectionUnit } from './sectionUnit.js';
import type { Solution } from './solution.js';
import { metres } from './sourceError.js';
import { statementCandidates, type StatedCandidates } from './statementCandidates.js';

/** What the statements of a row lead to. */
export interface Units {
  /** Places within reach: one list a statement that stands by itself. */
  readonly units: Array<readonly Solution[]>;
  readonly faults: Fault[];
  readonly repairs: RowRepair[];
  readonly notes: string[];
  readonly readAs: string[];
  slip: Slip | null;
  /** Whether the row names a section in full, whether within reach, and whether its mirror image is still to be looked at. */
  section: { readonly named: boolean; readonly near: boolean; readonly mirror: boolean };
}

/** Reads and solves every statement of a row; the section first, since it is evidence for the others. */
export function readUnits(raw: RawRecord, context: LocateContext, rangeByFile: boolean): Units {
  const { source, settings } = context;
  const where = `${source.name}, row ${raw.row}`;
  const units: Units = { units: [], faults: [], repairs: [], notes: [], readAs: [], slip: null, section: { named: false, near: false, mirror: false } };
  const texts = raw.location === null ? [] : parsed(raw, units, context);
  const statement = texts.find((each) => each.kind === 'section');
  let section: SectionUnit | null = null;
  if (statement) {
    section = sectionUnit(withMeridian(statement, raw, context), raw.location!, { where, groupSdM: settings.sharedSdM }, context);
    units.readAs.push(`section "${raw.location!.value}"`);
  }
  const named = section?.solutions.find((each) => each.parts[0]!.kind === 'area') ?? null;

  const solveCoordinates = (text: RawText, kind: Solution['kind'], wish: DatumWish, candidatesOf: (datums: DatumWeights) => StatedCandidates): void => {
    const datum = recordDatum(raw, source, wish);
    if ('problem' in datum) return void units.faults.push(datum);
    const error = recordError(raw, context);
    if ('problem' in error) return void units.faults.push(error);
    if (datum.note !== '') units.notes.push(datum.note);
    try {
      const { candidates, extraSdM } = candidatesOf(datum.weights);
      const on = datum.weights.map((each) => each.datum).join(' or ');
      units.readAs.push(`${kind} "${text.value}" on ${on}`);
      const unit = coordinateUnit(candidates, {
        kind, text, said: `${kind} ${text.value}`, groupSdM: settings.sharedSdM, named,
        error: extraSdM > 0 ? { sdM: Math.hypot(error.sdM, extraSdM), words: `${error.words}; way of laying off ${metres(extraSdM)}` } : error,
      }, context);
      if (unit.solution) units.units.push([unit.solution]);
      if (unit.fault) units.faults.push(unit.fault);
      units.repairs.push(...unit.repairs);
      units.slip ??= unit.slip;
    } catch (failure) {
      units.faults.push(faultOf(failure, text));
    }
  };

  const { place } = raw;
  if (place !== null && isFault(place)) units.faults.push(place);
  else if (place !== null) {
    const crs = sourceCrs(source);
    solveCoordinates(raw.coordinates, 'coordinates', { crs }, (datums) => ({ candidates: datums.map((each) => ({ ...each, place, crs: crs?.kind === 'projected' ? crs : null })), extraSdM: 0 }));
  }
  for (const each of texts) {
    if (each.kind === 'section') continue;
    const fileCrs = settings.crs ?? null;
    const crs = each.kind === 'projected' && each.system === null ? fileCrs : fileCrs?.kind === 'geographic' ? fileCrs : null;
    solveCoordinates(raw.location!, each.kind === 'mapCorner' ? 'map corner' : 'coordinates', { crs, ...(each.datum === undefined ? {} : { stated: each.datum }) },
      (datums) => {
        const western = inAmerica(each, datums);
        if (western !== each) units.notes.push(`longitude of "${raw.location!.value}" without a side taken as west, since ${datums.map(({ datum }) => datum).join(' and ')} hold${datums.length === 1 ? 's' : ''} in North America only`);
        return statementCandidates(western, datums, { fileCrs, where });
      });
  }
  if (statement && section) addSection(units, section, { raw, statement: withMeridian(statement, raw, context), where, rangeByFile, context });
  return units;
}

/** A text's longitude that says nothing of its side, west of Greenwich where every datum it may be on holds in North America only. */
function inAmerica<T extends SingleStatement>(statement: T, datums: DatumWeights): T {
  if (statement.kind !== 'geographic' && statement.kind !== 'mapCorner') return statement;
  return statement.lonSide === 'unsaid' && datums.every(({ datum }) => datum !== 'WGS 84') ? { ...statement, lonDeg: -statement.lonDeg } : statement;
}

function addSection(units: Units, section: SectionUnit, about: { readonly raw: RawRecord; readonly statement: SectionStatement; readonly where: string; readonly rangeByFile: boolean; readonly context: LocateContext }): void {
  const { raw, statement, where, rangeByFile, context } = about;
  const groupSdM = context.settings.sharedSdM;
  const coordinates = units.units.flat();
  const found = section.named && !section.near ? rangeRepair(statement, raw.location!, { where, groupSdM, coordinates, byFile: rangeByFile }, context) : null;
  if (found) {
    units.repairs.push(found.repair);
    if (found.repair.applied) {
      units.units.push(found.unit.solutions);
      units.section = { named: true, near: true, mirror: false };
      return;
    }
  }
  units.units.push(section.solutions);
  if (section.near) {
    // The statement is used, but for what could not be found of it.
    units.notes.push(...section.faults.map(({ column, value, problem }) => `${column} "${value}" used in part: ${problem}`));
    units.section = { named: section.named, near: true, mirror: false };
    return;
  }
  const [fault, ...others] = section.faults;
  if (fault) units.faults.push(found ? { ...fault, advice: `with ${found.repair.what} ${found.repair.evidence}; correct the row` } : fault, ...others);
  units.section = { named: section.named, near: section.near, mirror: section.named && !section.near && !found && coordinates.length === 0 };
}

function parsed(raw: RawRecord, units: Units, { source, settings }: LocateContext): readonly SingleStatement[] {
  const { westPositive, pairOrder, lengthUnit } = settings;
  try {
    const statement = parseLocation(raw.location!.value, `${source.name}, row ${raw.row}, column ${raw.location!.columns}`, {
      westPositive, ...(pairOrder ? { pairOrder } : {}), ...(lengthUnit ? { bareLengthUnit: lengthUnit } : {}),
    });
    return statement.kind === 'combined' ? statement.parts : [statement];
  } catch (error) {
    units.faults.push(faultOf(error, raw.location!));
    return [];
  }
}

/** A reference without a meridian takes that of the row's column, else the file's. */
function withMeridian(statement: SectionStatement, raw: RawRecord, { source }: LocateContext): SectionStatement {
  const meridian = raw.meridian || source.settings.meridian || undefined;
  return statement.reference.meridian !== undefined || meridian === undefined ? statement : { ...statement, reference: { ...statement.reference, meridian } };
}
