import type { AliquotStep, SectionReference, Side } from '../../../src/geodesy/sections/types.js';
import type { CornerName, GeographicStatement, LengthUnitName, MapCornerStatement, MeasuredFrom, ProjectedStatement, SectionStatement } from '../../../src/records/locationText/types.js';

/** Metres per unit, written out here from their definitions: 1200/3937 m a survey foot, 16.5, 66 and 0.66 ft a rod, chain and link. */
const UNIT_M: Readonly<Record<LengthUnitName | 'mi' | 'in', number>> = {
  ft: 1200 / 3937, rod: (16.5 * 1200) / 3937, chain: (66 * 1200) / 3937, link: (0.66 * 1200) / 3937, m: 1, mi: (5280 * 1200) / 3937, in: 100 / 3937,
};

export type LengthText = number | readonly [value: number, unit: keyof typeof UNIT_M, digit?: number];

function metres(length: LengthText): { distanceM: number; resolutionM: number } {
  const [value, unit, digit = 1] = typeof length === 'number' ? [length, 'ft' as const] : length;
  return { distanceM: value * UNIT_M[unit], resolutionM: digit * UNIT_M[unit] };
}

type CallText = readonly [length: LengthText, from: Side];

export function section(rest: Partial<SectionStatement>): SectionStatement {
  return { kind: 'section', reference: {}, part: null, centre: false, footage: null, tie: null, ...rest };
}

/** `NE SW`: as written, smallest first. */
export function part(written: string): { steps: AliquotStep[] } {
  return { steps: written.split(' ').filter((step) => step !== '').toReversed() as AliquotStep[] };
}

export function calls(one: CallText, two: CallText, { of = part(''), ...rest }: Partial<SectionStatement> & { of?: MeasuredFrom } = {}): SectionStatement {
  return section({ ...rest, footage: { calls: [{ ...metres(one[0]), from: one[1] }, { ...metres(two[0]), from: two[1] }], of } });
}

export function tie(corner: CornerName, offsets: readonly CallText[], { of = part(''), ...rest }: Partial<SectionStatement> & { of?: MeasuredFrom } = {}): SectionStatement {
  return section({ ...rest, tie: { corner, offsets: offsets.map(([length, toward]) => ({ ...metres(length), toward })), of } });
}

/** `12-5N-3W`, with ½ where it belongs; `-5N-3W` has no section. */
export function trs(text: string, rest: Partial<SectionReference> = {}): Partial<SectionReference> {
  const [, sectionText, township, half, dir, range, rangeHalf, rangeDir] = /^(\d*)-(\d+)(½?)([NS])-(\d+)(½?)([EW])$/.exec(text)!;
  return {
    ...(sectionText === '' ? {} : { section: Number(sectionText) }),
    township: Number(township), ...(half === '' ? {} : { townshipHalf: true }), townshipDir: dir as 'N' | 'S',
    range: Number(range), ...(rangeHalf === '' ? {} : { rangeHalf: true }), rangeDir: rangeDir as 'E' | 'W', ...rest,
  };
}

/** Degrees of degrees, minutes and seconds. */
export const dms = (d: number, m = 0, s = 0): number => d + m / 60 + s / 3600;
export const SECOND = 1 / 3600;
export const MINUTE = 1 / 60;

export function geo(latDeg: number, lonDeg: number, digitDeg: number | readonly [lat: number, lon: number], rest: Partial<GeographicStatement> = {}): GeographicStatement {
  const [latResolutionDeg, lonResolutionDeg] = typeof digitDeg === 'number' ? [digitDeg, digitDeg] : digitDeg;
  return { kind: 'geographic', latDeg, lonDeg, latResolutionDeg, lonResolutionDeg, lonSide: 'stated', ...rest };
}

export function mapCorner(latDeg: number, lonDeg: number, offsets: { north: LengthText; east: LengthText }, rest: Partial<MapCornerStatement> = {}): MapCornerStatement {
  const [north, east] = [metres(offsets.north), metres(offsets.east)];
  return {
    kind: 'mapCorner', latDeg, lonDeg, latResolutionDeg: SECOND, lonResolutionDeg: SECOND, lonSide: 'unsaid',
    northM: north.distanceM, eastM: east.distanceM, northResolutionM: north.resolutionM, eastResolutionM: east.resolutionM, ...rest,
  };
}

export function projected(easting: number, northing: number, rest: Partial<ProjectedStatement> = {}): ProjectedStatement {
  return { kind: 'projected', system: null, unit: null, easting, northing, eastingResolution: 1, northingResolution: 1, ...rest };
}

export const UTM17 = { system: { kind: 'UTM', zone: 17 }, unit: 'metre' } as const;
export const PA_SOUTH = { kind: 'State Plane', zone: 3702, name: 'Pennsylvania South' } as const;

/** Equal but for rounding of numbers (1e-12 of themselves); order of keys does not count. Returns the path of the first difference. */
export function difference(a: unknown, b: unknown, path = ''): string | null {
  if (typeof a === 'number' && typeof b === 'number') return Math.abs(a - b) <= 1e-12 * Math.max(1, Math.abs(b)) ? null : `${path}: ${a} is not ${b}`;
  if (typeof a !== 'object' || typeof b !== 'object' || a === null || b === null) return a === b ? null : `${path}: ${JSON.stringify(a)} is not ${JSON.stringify(b)}`;
  const keys = new Set([...Object.keys(a), ...Object.keys(b)]);
  for (const key of keys) {
    const found = difference((a as Record<string, unknown>)[key], (b as Record<string, unknown>)[key], `${path}.${key}`);
    if (found !== null) return found;
  }
  return null;
}
