import { drawnEllipse } from '../density/drawnEllipse.js';
import type { DensityPart } from '../density/types.js';
import { coordinateUnit } from './coordinateUnit.js';
import { faultOf } from './faultOf.js';
import type { Slip } from './implausible.js';
import type { LocateContext, RowRepair } from './locateContext.js';
import { parseLocation } from './locationText/parseLocation.js';
import type { SectionStatement, SingleStatement } from './locationText/types.js';
import { percent, type Candidate } from './placeRecord.js';
import { isFault, type Fault, type RawRecord, type RawText } from './rawRecord.js';
import { recordDatum, type DatumWeights } from './recordDatum.js';
import { recordError } from './recordError.js';
import { groupColumns } from './recordHead.js';
import { sourceCrs } from './recordSource.js';
import { rangeRepair, sectionUnit, type SectionUnit } from './sectionUnit.js';
import type { Solution } from './solution.js';
import { metres } from './sourceError.js';
import { statementCandidates } from './statementCandidates.js';
import type { Disagreement, WellRecord } from './types.js';
import { weighStatements } from './weighStatements.js';

/** A row that became a record, or did not, with everything that has to be listed of it. */
export type Outcome = ({ readonly record: WellRecord } | { readonly fault: Fault; readonly slip: Slip | null }) & {
  readonly repairs: readonly RowRepair[];
  readonly disagreements: readonly Omit<Disagreement, 'recordId' | 'source' | 'row'>[];
  readonly readAs: string;
  /** Whether the row names a section in full, whether within reach, and whether its mirror image is still to be looked at. */
  readonly section: { readonly named: boolean; readonly near: boolean; readonly mirror: boolean };
};

/** Solves one row. `rangeByFile`: the file's other rows name sections within reach nearly all, which is evidence for a slip of side. */
export function solveRecord(raw: RawRecord, context: LocateContext, { rangeByFile }: { readonly rangeByFile: boolean }): Outcome {
  const rest = { repairs: [], disagreements: [], readAs: '', section: { named: false, near: false, mirror: false } };
  if (raw.fault) return { ...rest, fault: raw.fault, slip: null };
  const read = readUnits(raw, context, rangeByFile);
  const units = read.units.filter((unit) => unit.length > 0);
  const faults = read.faults.filter((fault) => !fault.absent);
  const common = { repairs: read.repairs, readAs: read.readAs.join('; '), section: read.section };
  if (units.length === 0) {
    const fault = faults[0] ?? read.faults[0] ?? { column: '', value: '', problem: 'the location is not given', advice: 'fill it in from the permit, or place the well by hand' };
    return { ...rest, ...common, fault, slip: read.slip };
  }
  const notes = [
    raw.note, ...read.notes,
    ...read.repairs.map((repair) => (repair.applied ? `repaired: ${repair.what} (${repair.before} read as ${repair.after}; ${repair.evidence})` : '')),
    ...faults.map((fault) => `${fault.column} "${fault.value}" not used: ${fault.problem}`),
  ];
  return { ...common, ...recordOf(raw, units, { context, notes }) };
}

interface Units {
  readonly units: Array<readonly Solution[]>;
  readonly faults: Fault[];
  readonly repairs: RowRepair[];
  readonly notes: string[];
  readonly readAs: string[];
  slip: Slip | null;
  section: Outcome['section'];
}

/** Reads and solves every statement of a row; the section first, since it is evidence for the others. */
function readUnits(raw: RawRecord, context: LocateContext, rangeByFile: boolean): Units {
  const { source, settings } = context;
  const where = `${source.name}, row ${raw.row}`;
  const units: Units = { units: [], faults: [], repairs: [], notes: [], readAs: [], slip: null, section: { named: false, near: false, mirror: false } };
  const texts = raw.location === null ? [] : parsed(raw, units, context);
  const statement = texts.find((each) => each.kind === 'section');
  let section: SectionUnit | null = null;
  if (statement) {
    section = sectionUnit(withMeridian(statement, raw, context), raw.location!, { where, groupSdM: settings.sharedSdM }, context);
    units.readAs.push(`section "${raw.location!.value}"`);
    for (const { notes } of section.solutions) units.notes.push(...notes);
  }
  const named = section?.solutions.find((each) => each.parts[0]!.kind === 'area') ?? null;

  const solveCoordinates = (text: RawText, kind: Solution['kind'], wish: Parameters<typeof recordDatum>[2], candidatesOf: (datums: DatumWeights) => { candidates: readonly Candidate[]; extraSdM: number }): void => {
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
    } catch (error_) {
      units.faults.push(faultOf(error_, text));
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

/** The record of a row from its solved statements: one list a statement that stands by itself. */
function recordOf(raw: RawRecord, units: readonly (readonly Solution[])[], { context, notes }: { readonly context: LocateContext; readonly notes: readonly string[] }): { record: WellRecord; disagreements: Outcome['disagreements'] } {
  const { source, blunderRadiusM } = context;
  const { blunderShare, sharedSdM: groupSdM, pCasing, columns = {} } = context.settings;
  const { best, others, disagreements } = weighStatements(units, { blunderShare, disagreeBelow: context.disagreeBelow });
  const { x, y } = best;
  const left = others.reduce((sum, other) => sum + other.share, 0);
  const scaled = (parts: readonly DensityPart[], by: number, role: 'place' | 'blunder') => parts.map((part) => ({ ...part, role, weight: part.weight * by }));
  const section = units.flat().find((each) => each.section !== null)?.section ?? best.section;
  const blunder: DensityPart = section ? { kind: 'area', weight: blunderShare, area: section } : { kind: 'disc', weight: blunderShare, x, y, radiusM: blunderRadiusM };
  const density = {
    parts: [
      ...scaled(best.parts, (1 - blunderShare) * (1 - left), 'place'),
      ...others.flatMap((other) => scaled(other.solution.parts, (1 - blunderShare) * other.share, 'blunder')),
      ...(blunderShare > 0 ? [{ role: 'blunder' as const, ...blunder }] : []),
    ],
  };
  const { ellipse: { semiMajM, semiMinM, azimDeg }, excess } = drawnEllipse({ parts: scaled(best.parts, 1, 'place') }, context.shapes);
  const point = best.parts.every((part) => part.kind === 'gaussian');
  // A row without anything under the group's columns is not known to share what a group shares.
  const ownGroup = groupColumns(columns).length > 0 && raw.group === '' ? 0 : groupSdM;
  // A record that contradicts itself tells nothing of its group's shift.
  const sharedSdM = point && best.parts.length === 1 && others.length === 0 ? Math.hypot(best.sharedSdM, ownGroup) : 0;
  return {
    disagreements,
    record: {
      recordId: raw.recordId, source: source.name, row: raw.row, x, y, density, semiMajM, semiMinM, azimDeg, excess,
      posSdM: best.sdM, datum: best.datum, shift: best.shift,
      basis: [...best.basis, ...(blunderShare > 0 ? [`${percent(blunderShare)} blunders ${section ? 'within the section' : `within ${metres(blunderRadiusM)}`}`] : [])].join('; '),
      note: [...notes, ...best.notes, ...disagreements.map((each) => `disagrees with its ${each.other}, ${metres(each.distanceM)} away, where it has a chance of ${percent(each.otherShare)}`)].filter((text) => text !== '').join('; '),
      group: sharedSdM > 0 ? { id: [source.name, best.datum, ...(raw.group === '' ? [] : [raw.group])].join(' / '), sharedSdM } : null,
      pCasing,
    },
  };
}
