import { densityCovariance, densityMean } from '../density/moments.js';
import type { Area, Covariance, Density } from '../density/types.js';
import { UserError } from '../errors.js';
import { aliquotPolygon } from '../geodesy/sections/aliquotPolygon.js';
import { areaSpread } from '../geodesy/sections/areaSpread.js';
import { placeFromCalls } from '../geodesy/sections/placeFromCalls.js';
import { sectionGeometry } from '../geodesy/sections/sectionGeometry.js';
import type { SectionLayer } from '../geodesy/sections/sectionLayer.js';
import type { AliquotPart, CalledPlace, FootageCalls, Section, SectionReference } from '../geodesy/sections/types.js';
import type { Crs } from '../geodesy/types.js';
import { faultOf } from './faultOf.js';
import { aliquot, formatLocation } from './locationText/formatLocation.js';
import type { MeasuredFrom, SectionStatement } from './locationText/types.js';
import { groupWords } from './placeCoordinates.js';
import type { Fault, RawText } from './rawRecord.js';
import { tieAsCalls } from './tieAsCalls.js';
import type { Solution, StatementKind } from './solution.js';
import { metres } from './sourceError.js';

/** What a section statement is solved with. */
export interface SectionWays {
  readonly layer: SectionLayer;
  readonly frame: Crs;
  /** Standard error of the layer's corners per axis. */
  readonly sectionSdM: number;
  /** Standard error of measuring a call: this, and this share of its length. */
  readonly callSdM: number;
  readonly callSdShare: number;
  readonly groupSdM: number;
  /** File and row, for messages. */
  readonly where: string;
  /** Areas that were solved before, by name: many records name the same ones. */
  readonly areas: Map<string, Solution>;
}

export interface SolvedSection {
  readonly solutions: readonly Solution[];
  readonly faults: readonly Fault[];
}

const WHOLE: AliquotPart = { steps: [] };

/**
 * Everything that a section statement says as places with error: calls and ties as points, the centre of a part, and the
 * smallest of part, lot and section as an area. Calls that are not said to be the section's are measured from the smallest
 * part named, where they fit into it, else from the section. What cannot be solved is a fault; the rest still counts.
 */
export function solveSection(statement: SectionStatement, text: RawText, ways: SectionWays): SolvedSection {
  const solutions: Solution[] = [];
  const faults: Fault[] = [];
  const attempt = (run: () => Solution): boolean => {
    try {
      solutions.push(run());
      return true;
    } catch (error) {
      faults.push(faultOf(error, text));
      return false;
    }
  };
  let section: Section;
  const reference = wholeReference(statement.reference);
  if (reference === null) {
    return { solutions, faults: [{ column: text.columns, value: text.value, problem: 'names a part of a section, but not its township, range and section', advice: 'write all three, or map their columns' }] };
  }
  try {
    section = ways.layer.section(reference, ways.where);
  } catch (error) {
    return { solutions, faults: [faultOf(error, text)] };
  }
  const { part, footage, tie, centre } = statement;
  const ground: Ground = { section, reference, part, ways, area: [[[...section.frameVertices, section.frameVertices[0]!]]] };
  if (footage) attempt(() => footagePlace(ground, footage));
  if (tie) {
    const { steps, calls } = tieAsCalls(tie);
    attempt(() => pointOf(ground, { kind: 'corner tie', said: `tie ${formatLocation({ ...statement, reference: {}, part: null, centre: false, footage: null, tie: { ...tie, of: 'unsaid' } })} of ${partName(ground, tie.of === 'unsaid' ? part ?? WHOLE : tie.of)}`, found: callsFrom(ground, tie.of, calls, steps) }));
  }
  if (centre) {
    const within = part ?? (reference.lot === undefined ? WHOLE : 'lot');
    attempt(() => pointOf(ground, { kind: 'centre', said: `centre of ${partName(ground, within)}`, found: callsFrom(ground, within, tieAsCalls({ corner: 'C', offsets: [] }).calls, ['NE']) }));
  }
  const area = part !== null ? attempt(() => areaOf(ground, 'part')) : reference.lot !== undefined ? attempt(() => areaOf(ground, 'lot')) : false;
  if (!area) attempt(() => areaOf(ground, 'section'));
  return { solutions, faults };
}

/** A reference with all that a section is looked up by, else null. */
export function wholeReference(reference: Partial<SectionReference>): SectionReference | null {
  const { township, townshipDir, range, rangeDir, section } = reference;
  return township === undefined || townshipDir === undefined || range === undefined || rangeDir === undefined || section === undefined
    ? null : { ...reference, township, townshipDir, range, rangeDir, section };
}

interface Ground {
  readonly section: Section;
  readonly reference: SectionReference;
  readonly part: AliquotPart | null;
  readonly ways: SectionWays;
  readonly area: Area;
}

type Found = { readonly at: CalledPlace; readonly from: string };

function footagePlace(ground: Ground, { calls, of }: NonNullable<SectionStatement['footage']>): Solution {
  const words = formatLocation({ kind: 'section', reference: {}, part: null, centre: false, footage: { calls, of: 'unsaid' }, tie: null });
  const found = of === 'unsaid' ? smallestThatFits(ground, calls) : callsFrom(ground, of, calls, []);
  return pointOf(ground, { kind: 'footage calls', said: `footage calls ${words} of ${found.from}`, found });
}

/** From the smallest part named; where it is too small for the calls, from the section. */
function smallestThatFits(ground: Ground, calls: FootageCalls): Found {
  try {
    return callsFrom(ground, ground.part ?? 'lot', calls, []);
  } catch (error) {
    if (!(error instanceof UserError)) throw error;
    return callsFrom(ground, WHOLE, calls, []);
  }
}

function callsFrom(ground: Ground, of: MeasuredFrom, calls: FootageCalls, inner: AliquotPart['steps']): Found {
  const { ways } = ground;
  const options = { where: ways.where, measureSdM: ways.callSdM, measureSdShare: ways.callSdShare, vertexSdM: ways.sectionSdM };
  const base = of === 'unsaid' ? ground.part ?? (ground.reference.lot === undefined ? WHOLE : 'lot') : of;
  const from = partName(ground, base);
  if (base === 'lot') {
    const lot = sectionGeometry({ type: 'Polygon', coordinates: [ways.layer.lotPolygon(ground.reference, ways.where).map(([x, y]) => [x, y])] }, ways.frame, { where: ways.where, name: from });
    return { at: placeFromCalls(lot, calls, { steps: inner }, options), from };
  }
  return { at: placeFromCalls(ground.section, calls, { steps: [...base.steps, ...inner] }, options), from };
}

function partName({ section, reference }: Ground, of: AliquotPart | 'lot'): string {
  if (of === 'lot') return `lot ${reference.lot ?? ''} of ${section.name}`;
  return of.steps.length === 0 ? section.name : `${aliquot(of.steps)} of ${section.name}`;
}

function pointOf({ ways, area }: Ground, { kind, said, found: { at } }: { readonly kind: StatementKind; readonly said: string; readonly found: Found }): Solution {
  const shared = ways.groupSdM ** 2;
  const cov: Covariance = [at.cov[0] + shared, at.cov[1], at.cov[2] + shared];
  const rms = (c: Covariance): number => Math.sqrt((c[0] + c[2]) / 2);
  return {
    kind, said, parts: [{ kind: 'gaussian', weight: 1, x: at.x, y: at.y, cov }], x: at.x, y: at.y, cov, sdM: rms(cov),
    datum: ways.frame.datum, shift: FROM_LAYER, sharedSdM: 0,
    basis: [`${said}: measured ${metres(rms(at.measurementCov))}`, `section corners ${metres(rms(at.layerCov))}`, ...(rms(at.roundingCov) >= SAID_FROM_M ? [`digits ${metres(rms(at.roundingCov))}`] : []), ...groupWords(ways.groupSdM)],
    notes: [], section: area,
  };
}

/** What is smaller is left out of the words, not of the sum. */
const SAID_FROM_M = 0.05;
/** A place measured from the layer's lines needs no datum of its own: the layer has been moved to the frame. */
const FROM_LAYER = 'none (measured in the section layer)';

function partArea({ section }: Ground, part: AliquotPart): Area {
  return [[aliquotPolygon(section, part)]];
}

/** Covariance of the edge of a polygon for corners off by 1 m on each axis: a line moves by two thirds of its ends' variance. */
const LOT_SPREAD: Covariance = [2 / 3, 0, 2 / 3];

function areaOf(ground: Ground, kind: 'part' | 'lot' | 'section'): Solution {
  const { ways, section, part, reference } = ground;
  const of = kind === 'part' ? part! : kind === 'lot' ? 'lot' : WHOLE;
  const key = `${section.where} ${ways.groupSdM} ${partName(ground, of)}`;
  const known = ways.areas.get(key);
  if (known) return known;
  const area: Area = kind === 'part' ? partArea(ground, part!) : kind === 'lot' ? [[ways.layer.lotPolygon(reference, ways.where)]] : ground.area;
  const variance = ways.sectionSdM ** 2 + ways.groupSdM ** 2;
  const spread = kind === 'lot' ? LOT_SPREAD : areaSpread(section, kind === 'part' ? part! : WHOLE);
  const edgeCov = spread.map((value, k) => ways.sectionSdM ** 2 * value + (k === 1 ? 0 : ways.groupSdM ** 2)) as unknown as Covariance;
  const density: Density = { parts: [{ role: 'place', kind: 'area', weight: 1, area, ...(variance > 0 ? { cov: edgeCov } : {}) }] };
  const cov = densityCovariance(density);
  const solution: Solution = {
    kind, said: partName(ground, of), parts: density.parts, ...densityMean(density), cov, sdM: Math.sqrt((cov[0] + cov[2]) / 2),
    datum: ways.frame.datum, shift: FROM_LAYER, sharedSdM: 0,
    basis: [`anywhere in ${partName(ground, of)}`, ...(variance > 0 ? [`section corners ${metres(ways.sectionSdM)}`, ...groupWords(ways.groupSdM)] : [])],
    // Who knows no more than the section may have the wrong one, so its blunders go beyond it.
    notes: [], section: kind === 'section' ? null : ground.area,
  };
  ways.areas.set(key, solution);
  return solution;
}
