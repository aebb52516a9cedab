import { agreement } from './agreement.js';
import { kilometres, solutionFarM } from './farFromParcel.js';
import { formatLocation } from './locationText/formatLocation.js';
import type { SectionStatement } from './locationText/types.js';
import type { LocateContext, RowRepair } from './locateContext.js';
import type { Fault, RawText } from './rawRecord.js';
import type { Solution } from './solution.js';
import { solveSection, wholeReference } from './solveSection.js';
import { metres } from './sourceError.js';

/** A section statement solved within reach of the parcel, or why it is not. */
export interface SectionUnit {
  /** The smallest error first. */
  readonly solutions: readonly Solution[];
  readonly faults: readonly Fault[];
  /** Whether it names a township and section in full, and whether that lies within reach. */
  readonly named: boolean;
  readonly near: boolean;
}

/** Solves what a row says of a section; what lies too far from the parcel is a fault. */
export function sectionUnit(statement: SectionStatement, text: RawText, about: { readonly where: string; readonly groupSdM: number }, context: LocateContext): SectionUnit {
  const named = wholeReference(statement.reference) !== null;
  if (context.layer === null) {
    return {
      solutions: [], named, near: false,
      faults: [{ column: text.columns, value: text.value, problem: 'names a section, but the survey has no layer of sections', advice: 'give the layer under "sections"' }],
    };
  }
  const { solutions, faults } = solveSection(statement, text, { ...context.ways, ...about, layer: context.layer, frame: context.site.frame });
  const near: Solution[] = [];
  const far: Fault[] = [];
  for (const solution of solutions) {
    const distanceM = solutionFarM(solution, context.reach);
    if (distanceM === null) near.push(solution);
    else far.push({
      column: text.columns, value: text.value,
      problem: `${solution.said} lies ${kilometres(distanceM)} from the parcel, more than the ${kilometres(context.reach.maxDistanceM)} that max_distance_m allows`,
      advice: 'compare the row with the permit and correct it; if it is right, raise max_distance_m',
    });
  }
  return { solutions: near.toSorted((a, b) => a.sdM - b.sdM), faults: [...faults, ...far], named, near: near.length > 0 };
}

/** A statement with its range on the other side of the meridian, solved, and what speaks for it. */
export interface RangeRepair {
  readonly unit: SectionUnit;
  readonly repair: RowRepair;
}

/**
 * Looks whether a section that is not within reach would be with its range on the other side of the principal meridian.
 * Every township has a mirror image there, so being near is no evidence: either the row's own coordinates have to lie in
 * that section, or the layer must not have the section as written, while the file's other rows name sections within reach
 * nearly all (`byFile`).
 */
export function rangeRepair(statement: SectionStatement, text: RawText, about: {
  readonly where: string; readonly groupSdM: number; readonly coordinates: readonly Solution[]; readonly byFile: boolean;
}, context: LocateContext): RangeRepair | null {
  const { reference } = statement;
  if (context.layer === null || reference.rangeDir === undefined) return null;
  const other: SectionStatement = { ...statement, reference: { ...reference, rangeDir: reference.rangeDir === 'E' ? 'W' : 'E' } };
  const unit = sectionUnit(other, text, about, context);
  const [best] = unit.solutions;
  if (!best || unit.faults.length > 0) return null;
  const area = unit.solutions.at(-1)!;
  const agreeing = about.coordinates.filter((each) => agreement(each, area).p >= context.disagreeBelow);
  if (about.coordinates.length > 0 ? agreeing.length === 0 : !about.byFile || context.layer.count(wholeReference(reference)!) > 0) return null;
  const middleM = ({ x, y }: { readonly x: number; readonly y: number }): number => Math.hypot(x - context.reach.x, y - context.reach.y);
  const asWritten = solveSection(statement, text, { ...context.ways, ...about, layer: context.layer, frame: context.site.frame }).solutions;
  const allowed = (context.settings.repairs ?? []).includes('range_side');
  return {
    unit,
    repair: {
      kind: 'range_side', column: text.columns, what: `the range on the ${other.reference.rangeDir === 'E' ? 'east' : 'west'} side of the meridian`,
      before: text.value, after: formatLocation(other), distanceBeforeM: Math.min(Infinity, ...asWritten.map(middleM)), distanceAfterM: middleM(best), applied: allowed,
      evidence: agreeing.length > 0 ? `the row's ${agreeing[0]!.kind} lie there` : `the layer has no such section, and the file's other rows name sections there; ${metres(middleM(best))} from the parcel's middle`,
    },
  };
}
