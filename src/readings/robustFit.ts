import { choleskyInverse, choleskySolve, tryCholesky } from '../numerics/cholesky.js';
import { madSd, median } from '../numerics/robust.js';

export interface RobustFit {
  readonly parameters: Float64Array;
  /** Standard error of each parameter, rows taken as independent. */
  readonly sd: Float64Array;
  /** Robust spread of the misfit. */
  readonly scale: number;
}

export interface RobustRows {
  readonly count: number;
  readonly width: number;
  /** `count` × `width`, row by row. */
  readonly design: Float64Array;
  readonly target: Float64Array;
  /** Weight of each row before its misfit is looked at; 1 where absent. */
  readonly weight?: Float64Array;
  /** Added to the diagonal of the normal equations, per unit of weight: holds what the rows do not tell at zero. */
  readonly ridge?: readonly number[];
}

/** Misfits beyond this many deviations count nothing: 95 % as efficient as least squares where noise is Gaussian. */
const BIWEIGHT_SD = 4.685;
const ROUNDS = 12;
/** Rounds of least absolute deviations before; a misfit below this share of the spread weighs no more than it. */
const ABSOLUTE_ROUNDS = 4;
const ABSOLUTE_FLOOR = 0.1;
/** Smaller changes of every parameter, against the spread, end the rounds. */
const SETTLED = 1e-4;

/**
 * Linear fit by iteratively reweighted least squares with Tukey's biweight, from a start by least absolute deviations.
 * Null where the rows cannot tell the parameters.
 *
 * Source: Beaton & Tukey (1974), Technometrics 16; Holland & Welsch (1977), Comm. Statist. A6, 813–827 (constant 4.685).
 */
export function robustFit(rows: RobustRows): RobustFit | null {
  const { count, width, target } = rows;
  if (count < width) return null;
  // The start weighs by distance from the median: a least-squares start would lean on the very rows to be left out.
  const middle = median(target);
  const misfit = Float64Array.from(target, (value) => value - middle);
  let scale = madSd(misfit);
  let fit: { parameters: Float64Array; normal: Float64Array } | null = null;
  for (let round = 0; round < ROUNDS; round++) {
    const next = solve(rows, (i) => {
      // Half of the rows agree to the last digit: they alone decide.
      if (scale === 0) return misfit[i] === 0 ? 1 : 1e-12;
      if (round < ABSOLUTE_ROUNDS) return 1 / Math.max(Math.abs(misfit[i]!) / scale, ABSOLUTE_FLOOR);
      const u = misfit[i]! / (BIWEIGHT_SD * scale);
      return Math.abs(u) < 1 ? (1 - u * u) ** 2 : 0;
    });
    if (!next) return null;
    let change = 0;
    for (let k = 0; k < width; k++) change = Math.max(change, Math.abs(next.parameters[k]! - (fit?.parameters[k] ?? Infinity)));
    fit = next;
    for (let i = 0; i < count; i++) {
      let value = target[i]!;
      for (let k = 0; k < width; k++) value -= rows.design[i * width + k]! * fit.parameters[k]!;
      misfit[i] = value;
    }
    scale = madSd(misfit);
    if (round > ABSOLUTE_ROUNDS && change <= SETTLED * scale) break;
  }
  const inverse = choleskyInverse(fit!.normal, width);
  return { parameters: fit!.parameters, scale, sd: Float64Array.from({ length: width }, (_, k) => scale * Math.sqrt(inverse[k * width + k]!)) };
}

function solve({ count, width, design, target, weight, ridge }: RobustRows, robust: (i: number) => number): { parameters: Float64Array; normal: Float64Array } | null {
  const normal = new Float64Array(width * width);
  const right = new Float64Array(width);
  let total = 0;
  for (let i = 0; i < count; i++) {
    const w = robust(i) * (weight ? weight[i]! : 1);
    if (w === 0) continue;
    total += w;
    for (let a = 0; a < width; a++) {
      const wa = w * design[i * width + a]!;
      right[a]! += wa * target[i]!;
      for (let b = 0; b <= a; b++) normal[a * width + b]! += wa * design[i * width + b]!;
    }
  }
  for (let a = 0; a < width; a++) {
    normal[a * width + a]! += (ridge?.[a] ?? 0) * total;
    for (let b = 0; b < a; b++) normal[b * width + a] = normal[a * width + b]!;
  }
  if (!tryCholesky(normal, width)) return null;
  return { parameters: choleskySolve(normal, width, right), normal };
}
