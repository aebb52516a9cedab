/**
 * A source as the fit moves it. `values` holds its parameters; lengths in metres, z up with the ground at 0.
 * - pole: x, y, z, a (A·m, −m: positive where it attracts), then the poles at the collars below it, same sign.
 * - dipole: x, y, z, moment east, north, up (A·m²).
 * - line: offset across, azimuth (radians), z, moment per metre across and up (A·m); endless, through its anchor.
 */
export interface Source {
  readonly kind: 'pole' | 'dipole' | 'line';
  readonly values: Float64Array;
  /** Where it was first suspected; for a line also the point that its parameters count from. */
  readonly anchorX: number;
  readonly anchorY: number;
  /** Standard deviation of the loose prior on each strength or moment, in its own unit. */
  readonly strengthSd: number;
}

/**
 * Where collars are looked for, metres below the top: joints are 7.6 to 10.4 m long as a rule (25 to 34 ft, API Spec
 * 5CT) and the top may have been cut anywhere, so half a joint is the step. What lies deeper is heard as part of the plane.
 */
export const COLLAR_DEPTHS_M = [4.5, 9, 13.5, 18] as const;

export type Triple = readonly [number, number, number];

export interface Suspicion {
  readonly anchorX: number;
  readonly anchorY: number;
  readonly strengthSd: number;
}

export function pole(at: Triple, a: number, suspicion: Suspicion): Source {
  return { kind: 'pole', values: Float64Array.of(...at, a, ...COLLAR_DEPTHS_M.map(() => 0)), ...suspicion };
}
export function dipole(at: Triple, moment: Triple, suspicion: Suspicion): Source {
  return { kind: 'dipole', values: Float64Array.of(...at, ...moment), ...suspicion };
}
export function line(shape: Triple, momentPerM: readonly [number, number], suspicion: Suspicion): Source {
  return { kind: 'line', values: Float64Array.of(...shape, ...momentPerM), ...suspicion };
}
export function withValues(source: Source, values: Float64Array): Source {
  return { ...source, values };
}
/** The point of the source nearest to its anchor, or the source itself. */
export function placeOf(source: Source): [number, number] {
  const v = source.values;
  if (source.kind !== 'line') return [v[0]!, v[1]!];
  return [source.anchorX + v[0]! * Math.cos(v[1]!), source.anchorY - v[0]! * Math.sin(v[1]!)];
}
