import { choleskySolve, tryCholesky } from '../numerics/cholesky.js';
import type { Window } from './fitSources.js';
import { dipole, pole, type Source } from './sources.js';
import { dipoleRow, orthonormalPlane, poleRow } from './startingPoints.js';

/** Places that are tried lie this share of the reach apart, out to so many reaches from either source. */
const STEP_REACHES = 0.55;
const OUT_REACHES = 1.9;
/** Distances below the sensor that are tried, in reaches. */
const POLE_DISTANCES = [0.85, 1.2] as const;
const DIPOLE_DISTANCES = [0.8] as const;
const PAIR_BLOCKS = 110;
/** Two sources of a pair are at least this far apart, in reaches. */
const APART_REACHES = 0.8;
/** Starts of each combination, each from elsewhere. */
const STARTS = 2;
const RIDGE = 1e-6;

/** Unit fields of one possible source at the chosen blocks, the plane taken out. */
interface Possible {
  readonly kind: 'pole' | 'dipole';
  readonly x: number;
  readonly y: number;
  readonly z: number;
  readonly first: number;
  readonly count: number;
}

/**
 * Where a fit of two sources that overlap begins: every pair of places on a net around both, as pole and pole, pole and
 * dipole, dipole and dipole, strengths by plain least squares; the pairs that leave least. One source at a time would
 * begin between the two and stay there.
 */
export function pairStarts(window: Window, strengthSd: number, places: ReadonlyArray<readonly [number, number]>): Array<[Source, Source]> {
  const { reachM, unit } = window;
  const stride = Math.max(1, Math.ceil(window.count / PAIR_BLOCKS));
  const rows: number[] = [];
  for (let i = 0; i < window.count; i += stride) rows.push(i);
  const m = rows.length;
  const plane = orthonormalPlane(window, rows);
  const values = Float64Array.from(rows, (i) => window.value[i]!);
  withoutPlane(values, plane);
  let height = 0;
  for (const i of rows) height += window.z[i]! / m;

  const possible: Possible[] = [];
  const columns: Float64Array[] = [];
  const row = new Float64Array(3);
  const r = new Float64Array(3);
  const add = (kind: Possible['kind'], x: number, y: number, z: number) => {
    const count = kind === 'pole' ? 1 : 3;
    const own = Array.from({ length: count }, () => new Float64Array(m));
    rows.forEach((i, j) => {
      r[0] = window.x[i]! - x;
      r[1] = window.y[i]! - y;
      r[2] = window.z[i]! - z;
      if (kind === 'pole') poleRow(row, r, unit);
      else dipoleRow(row, r, unit);
      for (let k = 0; k < count; k++) own[k]![j] = row[k]!;
    });
    for (const column of own) withoutPlane(column, plane);
    possible.push({ kind, x, y, z, first: columns.length, count });
    columns.push(...own);
  };
  for (const [x, y] of net(places, reachM)) {
    for (const distance of POLE_DISTANCES) add('pole', x, y, Math.min(window.ceilingM, height - distance * reachM));
    for (const distance of DIPOLE_DISTANCES) add('dipole', x, y, Math.min(window.ceilingM, height - distance * reachM));
  }
  const n = columns.length;
  const gram = new Float64Array(n * n);
  const right = new Float64Array(n);
  for (let a = 0; a < n; a++) {
    right[a] = dot(columns[a]!, values);
    for (let b = 0; b <= a; b++) gram[a * n + b] = dot(columns[a]!, columns[b]!);
  }
  const trials: Array<{ a: Possible; b: Possible; gain: number }> = [];
  for (const a of possible) {
    for (const b of possible) {
      if (b.first >= a.first || Math.hypot(a.x - b.x, a.y - b.y) < APART_REACHES * reachM) continue;
      const solved = solve(gram, right, { n, a, b });
      if (solved) trials.push({ a, b, gain: solved.gain });
    }
  }
  trials.sort((p, q) => q.gain - p.gain || p.a.first - q.a.first || p.b.first - q.b.first);
  const chosen: typeof trials = [];
  for (const trial of trials) {
    const alike = chosen.filter((other) => kinds(other) === kinds(trial));
    if (alike.length >= STARTS || alike.some((other) => near(other, trial, APART_REACHES * reachM))) continue;
    chosen.push(trial);
    if (chosen.length >= 3 * STARTS) break;
  }
  return chosen.map(({ a, b }) => {
    const { strengths } = solve(gram, right, { n, a, b })!;
    return [sourceOf(a, strengths.subarray(0, a.count), strengthSd), sourceOf(b, strengths.subarray(a.count), strengthSd)];
  });
}

function sourceOf({ kind, x, y, z }: Possible, strengths: Float64Array, strengthSd: number): Source {
  const suspicion = { anchorX: x, anchorY: y, strengthSd };
  return kind === 'pole' ? pole([x, y, z], strengths[0]!, suspicion) : dipole([x, y, z], [strengths[0]!, strengths[1]!, strengths[2]!], suspicion);
}

interface Pair {
  readonly a: Possible;
  readonly b: Possible;
}
const kinds = ({ a, b }: Pair): string => [a.kind, b.kind].toSorted().join(' ');

function near(one: Pair, other: Pair, withinM: number): boolean {
  const close = (p: Possible, q: Possible) => Math.hypot(p.x - q.x, p.y - q.y) < withinM;
  return (close(one.a, other.a) && close(one.b, other.b)) || (close(one.a, other.b) && close(one.b, other.a));
}

function solve(gram: Float64Array, right: Float64Array, { n, a, b }: Pair & { readonly n: number }): { gain: number; strengths: Float64Array } | null {
  const size = a.count + b.count;
  const index = (k: number) => (k < a.count ? a.first + k : b.first + k - a.count);
  const normal = new Float64Array(size * size);
  const own = new Float64Array(size);
  for (let p = 0; p < size; p++) {
    const i = index(p);
    own[p] = right[i]!;
    for (let q = 0; q <= p; q++) {
      const j = index(q);
      normal[p * size + q] = i >= j ? gram[i * n + j]! : gram[j * n + i]!;
    }
    normal[p * size + p]! *= 1 + RIDGE;
  }
  if (!tryCholesky(normal, size)) return null;
  const strengths = choleskySolve(normal, size, own);
  return { gain: dot(strengths, own), strengths };
}

/** Places on one net, each within reach of a source. */
function net(places: ReadonlyArray<readonly [number, number]>, reachM: number): Array<[number, number]> {
  const step = STEP_REACHES * reachM;
  const out = OUT_REACHES * reachM;
  const [x0, y0] = places[0]!;
  const half = Math.ceil((out + Math.max(...places.map(([x, y]) => Math.hypot(x - x0, y - y0)))) / step);
  const found: Array<[number, number]> = [];
  for (let a = -half; a <= half; a++) {
    for (let b = -half; b <= half; b++) {
      const x = x0 + a * step;
      const y = y0 + b * step;
      if (places.some(([px, py]) => Math.hypot(px - x, py - y) <= out)) found.push([x, y]);
    }
  }
  return found;
}

function withoutPlane(column: Float64Array, plane: Float64Array): void {
  const m = column.length;
  for (let p = 0; p < 3; p++) {
    let share = 0;
    for (let j = 0; j < m; j++) share += plane[3 * j + p]! * column[j]!;
    for (let j = 0; j < m; j++) column[j]! -= share * plane[3 * j + p]!;
  }
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k]! * b[k]!;
  return sum;
}
