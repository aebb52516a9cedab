import type { Vector3 } from './pole.js';

/**
 * Total-field anomaly |F + B| − |F|, exact, nT. Written as (2 F·B + B²)/(|F + B| + |F|), which keeps its digits where
 * B is a billionth of F.
 *
 * @param b Field of the source, nT.
 * @param f Main field, nT, same axes.
 *
 * Source: Blakely (1995), eq. 8.33 and its neighbours, without the approximation.
 */
export function totalFieldAnomaly(b: Vector3, f: Vector3 | readonly number[]): number {
  const dot = b[0]! * f[0]! + b[1]! * f[1]! + b[2]! * f[2]!;
  const b2 = b[0]! * b[0]! + b[1]! * b[1]! + b[2]! * b[2]!;
  const f2 = f[0]! * f[0]! + f[1]! * f[1]! + f[2]! * f[2]!;
  return (2 * dot + b2) / (Math.sqrt(f2 + 2 * dot + b2) + Math.sqrt(f2));
}

/** Part of B along the main field, nT: the total-field anomaly as long as |B| ≪ |F| (it is low by about B⊥²/2F). */
export function projectedAnomaly(b: Vector3, unit: Vector3 | readonly number[]): number {
  return b[0]! * unit[0]! + b[1]! * unit[1]! + b[2]! * unit[2]!;
}
