import { symmetricEigen2 } from '../numerics/eigen2.js';
import { coreCovariance, roundingCovariance } from './localFrame.js';
import type { Density, GaussianPart, HalfAxes } from './types.js';

/** Steps that shapes are told apart by, to the narrowest standard deviation of a density's Gaussians. */
const STEPS_PER_SD = 100;
/** Steps of that deviation itself, to a factor of e. */
const STEPS_PER_E = 500;

/** A mixture of Gaussians in round numbers, and its size. */
export interface Shape {
  /** Densities with the same key have the same `standard`. */
  readonly key: string;
  /** The density in units of `unitM`, its first part at the origin, every number rounded to a hundredth of the narrowest σ. */
  standard(): Density;
  readonly unitM: number;
}

/**
 * Records of one file are alike but for where they lie: their datums shift by hardly different amounts, their digits reach
 * hardly less far. In round numbers they are the same.
 */
export function shapeOf(parts: readonly GaussianPart[]): Shape {
  const cores = parts.map(({ cov, rounding }) => coreCovariance(cov, rounding));
  const narrowest = Math.sqrt(Math.min(...cores.map((core) => symmetricEigen2(core).minorVariance)));
  const unitM = Math.exp(Math.round(Math.log(narrowest) * STEPS_PER_E) / STEPS_PER_E);
  const steps = (lengthM: number): number => Math.round((lengthM / unitM) * STEPS_PER_SD);
  const [first] = parts as [GaussianPart, ...GaussianPart[]];
  const numbers = parts.map((part, i) => {
    const [ee, en, nn] = cores[i]!;
    return [
      Math.round(part.weight * 1e4), steps(part.x - first.x), steps(part.y - first.y),
      steps(Math.sqrt(ee)), steps(Math.sqrt(nn)), Math.round((en / Math.sqrt(ee * nn)) * STEPS_PER_SD),
      ...(part.rounding ?? []).flat().map(steps),
    ];
  });
  return { key: numbers.map((each) => each.join(' ')).join(';'), unitM, standard: () => ({ parts: numbers.map(standardPart) }) };
}

function standardPart([weight, x, y, sdE, sdN, lean, ...half]: readonly number[]): Density['parts'][number] {
  const [east, north] = [sdE! / STEPS_PER_SD, sdN! / STEPS_PER_SD];
  // A correlation of ±1 that rounding made is no covariance.
  const rho = Math.min(Math.max(lean!, 1 - STEPS_PER_SD), STEPS_PER_SD - 1) / STEPS_PER_SD;
  const [ax, ay, bx, by] = half.map((value) => value / STEPS_PER_SD);
  const rounding: HalfAxes | undefined = half.length > 0 ? [[ax!, ay!], [bx!, by!]] : undefined;
  const more = rounding ? roundingCovariance(rounding) : [0, 0, 0] as const;
  return {
    kind: 'gaussian', role: 'place', weight: weight! / 1e4, x: x! / STEPS_PER_SD, y: y! / STEPS_PER_SD,
    cov: [east * east + more[0], rho * east * north + more[1], north * north + more[2]], ...(rounding ? { rounding } : {}),
  };
}
