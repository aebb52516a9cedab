import type { AliquotStep } from '../../geodesy/sections/types.js';
import { formatAngle } from './formatAngle.js';
import { formatLength } from './formatLength.js';
import type {
  CornerTie, GeographicStatement, LocationStatement, MapCornerStatement, MeasuredFrom, ProjectedStatement, ProjectedUnit, SectionStatement, SingleStatement,
} from './types.js';

/**
 * A statement as a location text in one spelling. `parseLocation` with the options that the statement was read with reads
 * it back to the same statement; lengths and angles agree to rounding.
 */
export function formatLocation(statement: LocationStatement): string {
  return statement.kind === 'combined' ? statement.parts.map(formatSingle).join('; ') : formatSingle(statement);
}

function formatSingle(statement: SingleStatement): string {
  if (statement.kind === 'section') return formatSection(statement);
  const text = statement.kind === 'geographic' ? `${latitude(statement)}, ${longitude(statement)}`
    : statement.kind === 'mapCorner' ? formatMapCorner(statement) : formatProjected(statement);
  return statement.datum === undefined ? text : `${text} ${statement.datum}`;
}

type Pair = Pick<GeographicStatement, 'latDeg' | 'lonDeg' | 'latResolutionDeg' | 'lonResolutionDeg' | 'lonSide'>;

function latitude({ latDeg, latResolutionDeg }: Pair): string {
  return `Lat ${formatAngle(Math.abs(latDeg), latResolutionDeg)} ${latDeg < 0 ? 'S' : 'N'}`;
}

function longitude({ lonDeg, lonResolutionDeg, lonSide }: Pair): string {
  const side = lonSide === 'stated' ? (lonDeg < 0 ? ' W' : ' E') : '';
  return `Long ${formatAngle(Math.abs(lonDeg), lonResolutionDeg)}${side}`;
}

function formatMapCorner(statement: MapCornerStatement): string {
  const { northM, eastM, northResolutionM, eastResolutionM } = statement;
  const north = formatLength({ m: Math.abs(northM), resolutionM: northResolutionM });
  const east = formatLength({ m: Math.abs(eastM), resolutionM: eastResolutionM });
  return `${north} ${northM < 0 ? 'S' : 'N'} of ${latitude(statement)}, ${east} ${eastM < 0 ? 'W' : 'E'} of ${longitude(statement)}`;
}

const UNIT_WORDS: Readonly<Record<ProjectedUnit, string>> = {
  metre: 'm', 'US survey foot': 'US survey feet', 'international foot': 'international feet', foot: 'feet',
};

function formatProjected({ system, unit, easting, northing, eastingResolution, northingResolution }: ProjectedStatement): string {
  const named = system === null ? '' : system.kind === 'UTM' ? `UTM zone ${system.zone} ` : `State Plane zone ${system.zone} `;
  const behind = unit === null ? '' : ` ${UNIT_WORDS[unit]}`;
  return `${named}Easting ${coordinate(easting, eastingResolution)}${behind}, Northing ${coordinate(northing, northingResolution)}${behind}`;
}

function coordinate(value: number, resolution: number): string {
  return value.toFixed(Math.max(0, Math.round(-Math.log10(resolution))));
}

function formatSection(statement: SectionStatement): string {
  const { reference, part, centre, footage, tie } = statement;
  const words: string[] = [];
  let partSaid = false;
  let lotSaid = false;
  const link = (of: MeasuredFrom): string => {
    if (of === 'unsaid') return '';
    if (of === 'lot') {
      lotSaid = true;
      return ` of Lot ${reference.lot!}`;
    }
    if (of.steps.length === 0) return part === null && reference.lot === undefined ? '' : ' of the section';
    partSaid ||= part !== null && part.steps.join() === of.steps.join();
    return ` of ${aliquot(of.steps)}`;
  };
  if (footage !== null) words.push(footage.calls.map((call) => `${formatLength({ m: call.distanceM, resolutionM: call.resolutionM })} F${call.from}L`).join(' ') + link(footage.of));
  if (tie !== null) words.push(formatTie(tie) + link(tie.of));
  if (centre && part === null) words.push(reference.lot === undefined ? '(center of' : `(C Lot ${reference.lot})`);
  else if (part !== null && (centre || !partSaid)) words.push(`(${centre ? 'C ' : ''}${aliquot(part.steps)})`);
  if (reference.lot !== undefined && !lotSaid && !(centre && part === null)) words.push(`(Lot ${reference.lot})`);
  if (reference.section !== undefined) words.push(`Sec ${reference.section}${centre && part === null && reference.lot === undefined ? ')' : ''}`);
  if (reference.township !== undefined) words.push(`T${reference.township}${reference.townshipHalf ? '½' : ''}${reference.townshipDir!}`);
  if (reference.range !== undefined) words.push(`R${reference.range}${reference.rangeHalf ? '½' : ''}${reference.rangeDir!}`);
  if (reference.meridian !== undefined) words.push(`${reference.meridian} Meridian`);
  return words.join(' ');
}

function formatTie({ corner, offsets }: CornerTie): string {
  const name = corner === 'C' ? 'center' : corner.endsWith('4') ? `${corner[0]!}/4 cor` : `${corner} cor`;
  return `${offsets.map((offset) => `${formatLength({ m: offset.distanceM, resolutionM: offset.resolutionM })} ${offset.toward}`).join(' and ')} of ${name}`;
}

/** Steps as they are written, the smallest part first: `['NW', 'S2']` is `S/2 NW/4`. */
export function aliquot(steps: readonly AliquotStep[]): string {
  return steps.toReversed().map((step) => (step.endsWith('2') ? `${step[0]!}/2` : `${step}/4`)).join(' ');
}
