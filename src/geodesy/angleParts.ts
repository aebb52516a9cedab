import type { Axis, ParsedAngle } from './parseAngle.js';

export const LIMIT_DEG: Readonly<Record<Axis, number>> = { longitude: 180, latitude: 90 };
const PART_DEG = [1, 1 / 60, 1 / 3600] as const;
const PART_NAMES = ['degrees', 'minutes', 'seconds'] as const;

const POWERS = Array.from({ length: 20 }, (_, decimals) => Number(`1e-${decimals}`));

/** What is wrong with the parts of an angle, and which of them; null where nothing is. */
export interface PartFault {
  readonly part: number;
  readonly wanted: string;
}

/**
 * Degrees, minutes and seconds as they are written, with a point for the decimals, to degrees without sign. At most three
 * parts; decimals in the last only, minutes and seconds below 60, and not beyond the axis's limit (180 where it is null).
 */
export function angleFromParts(parts: readonly string[], axis: Axis | null): ParsedAngle | PartFault {
  for (let i = 0; i < parts.length; i++) {
    if (i < parts.length - 1 && parts[i]!.includes('.')) return { part: i, wanted: `a decimal point in the last part only; ${PART_NAMES[i]!} are ${parts[i]!}` };
    if (i > 0 && !(Number(parts[i]) < 60)) return { part: i, wanted: `${PART_NAMES[i]!} below 60` };
  }
  const last = parts.length - 1;
  let deg = 0;
  for (let i = 0; i <= last; i++) deg += Number(parts[i]) * PART_DEG[i]!;
  const limit = axis === null ? LIMIT_DEG.longitude : LIMIT_DEG[axis];
  if (!(deg <= limit)) return { part: 0, wanted: `${axis === null ? 'an angle' : `a ${axis}`} of at most ${limit} degrees` };
  const point = parts[last]!.indexOf('.');
  const decimals = point < 0 ? 0 : parts[last]!.length - point - 1;
  return { deg, resolutionDeg: PART_DEG[last]! * (POWERS[decimals] ?? Number(`1e-${decimals}`)) };
}

/**
 * The parts of an angle whose digits run together, DDMMSS or DDDMMSS with or without decimals of the seconds; null where
 * the digits cannot be that. Seven digits are a longitude's; a latitude has six.
 */
export function packedParts(digits: string, axis: Axis | null): [string, string, string] | null {
  const match = /^(\d{2,3})(\d\d)(\d\d(?:\.\d*)?)$/.exec(digits);
  if (!match || (match[1]!.length === 3 && axis === 'latitude')) return null;
  return [match[1]!, match[2]!, match[3]!];
}
