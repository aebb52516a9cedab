import { drawnEllipse } from '../density/drawnEllipse.js';
import type { DensityPart } from '../density/types.js';
import type { Slip } from './implausible.js';
import type { LocateContext, RowRepair } from './locateContext.js';
import { percent } from './placeCoordinates.js';
import type { Fault, RawRecord } from './rawRecord.js';
import { readUnits, type Units } from './readUnits.js';
import { groupColumns } from './recordHead.js';
import type { Solution } from './solution.js';
import { metres } from './sourceError.js';
import type { Disagreement, WellRecord } from './types.js';
import { weighStatements } from './weighStatements.js';

/** A row that became a record, or did not, with everything that has to be listed of it. */
export type Outcome = ({ readonly record: WellRecord } | { readonly fault: Fault; readonly slip: Slip | null }) & {
  readonly repairs: readonly RowRepair[];
  readonly disagreements: readonly Omit<Disagreement, 'recordId' | 'source' | 'row'>[];
  readonly readAs: string;
  readonly section: Units['section'];
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
