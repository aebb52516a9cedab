import { areaBounds, pointInArea } from '../../src/density/area.js';
import { coreCovariance, roundingCovariance } from '../../src/density/localFrame.js';
import type { Area, Covariance, Density, DensityPart, HalfAxes } from '../../src/density/types.js';
import type { Random } from '../../src/numerics/random.js';

export type Part = DensityPart & { role: 'place' | 'blunder' };

export const box = (w: number, s: number, e: number, n: number): Area => [[[[w, s], [e, s], [e, n], [w, n], [w, s]]]];

export const one = (...parts: Part[]): Density => ({ parts });

/** `cov` is the Gaussian's own; the rounding's is added. */
export function gaussian(x: number, y: number, cov: Covariance, { weight = 1, rounding }: { weight?: number; rounding?: HalfAxes } = {}): Part {
  if (!rounding) return { kind: 'gaussian', role: 'place', weight, x, y, cov };
  const more = roundingCovariance(rounding);
  return { kind: 'gaussian', role: 'place', weight, x, y, cov: [cov[0] + more[0], cov[1] + more[1], cov[2] + more[2]], rounding };
}

export function area(of: Area, { weight = 1, cov }: { weight?: number; cov?: Covariance } = {}): Part {
  return { kind: 'area', role: 'place', weight, area: of, ...(cov ? { cov } : {}) };
}

/** A point of a density, blunders included. */
export function draw({ parts }: Density, random: Random): [number, number] {
  let left = random.uniform();
  const part = parts.find(({ weight }) => (left -= weight) < 0) ?? parts.at(-1)!;
  if (part.kind === 'gaussian') {
    const [dx, dy] = normalPair(part.rounding ? coreCovariance(part.cov, part.rounding) : part.cov, random);
    const [first, second] = part.rounding ?? [[0, 0], [0, 0]];
    const [u, v] = [2 * random.uniform() - 1, 2 * random.uniform() - 1];
    return [part.x + dx + u * first[0] + v * second[0], part.y + dy + u * first[1] + v * second[1]];
  }
  if (part.kind === 'disc') {
    const [radius, angle] = [part.radiusM * Math.sqrt(random.uniform()), 2 * Math.PI * random.uniform()];
    return [part.x + radius * Math.cos(angle), part.y + radius * Math.sin(angle)];
  }
  const { west, south, east, north } = areaBounds(part.area);
  let [x, y] = [NaN, NaN];
  do [x, y] = [west + (east - west) * random.uniform(), south + (north - south) * random.uniform()];
  while (!pointInArea(part.area, x, y));
  const [dx, dy] = part.cov ? normalPair(part.cov, random) : [0, 0];
  return [x + dx, y + dy];
}

function normalPair([ee, en, nn]: Covariance, random: Random): [number, number] {
  const [u, v] = [random.normal(), random.normal()];
  const sd = Math.sqrt(ee);
  return [sd * u, (en / sd) * u + Math.sqrt(Math.max(0, nn - (en * en) / ee)) * v];
}
