import { NT_PER_POLE, addPole } from '../field/pole.js';
import { addDipole } from '../field/dipole.js';
import { totalFieldAnomaly } from '../field/totalField.js';
import { COLLAR_DEPTHS_M, type Source } from './sources.js';

/** Sensors at which a field is wanted, metres. */
export interface Sensors {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
}

/** Total-field anomaly of sources at sensors, with its slope along each axis and its derivative by each parameter. */
export interface FieldOfSources {
  readonly value: Float64Array;
  readonly slopeX: Float64Array;
  readonly slopeY: Float64Array;
  readonly slopeZ: Float64Array;
  /** Column by column, one for each parameter, source after source. */
  readonly columns: Float64Array;
}

type Vector = [number, number, number];

/** Field vector of one source, nT, added to `b`. */
export function addSource(b: Vector, source: Source, at: readonly [number, number, number]): void {
  const v = source.values;
  const [x, y, z] = at;
  switch (source.kind) {
    case 'pole': {
      const rx = x - v[0]!;
      const ry = y - v[1]!;
      const rz = z - v[2]!;
      addPole(b, -v[3]!, rx, ry, rz);
      for (let k = 0; k < COLLAR_DEPTHS_M.length; k++) if (v[4 + k] !== 0) addPole(b, -v[4 + k]!, rx, ry, rz + COLLAR_DEPTHS_M[k]!);
      return;
    }
    case 'dipole':
      addDipole(b, v[3]!, v[4]!, v[5]!, x - v[0]!, y - v[1]!, z - v[2]!);
      return;
    case 'line': {
      const c = Math.cos(v[1]!);
      const s = Math.sin(v[1]!);
      const q = (x - source.anchorX) * c - (y - source.anchorY) * s - v[0]!;
      const w = z - v[2]!;
      const p2 = q * q + w * w;
      const k = (2 * NT_PER_POLE) / p2;
      const along = (2 * (v[3]! * q + v[4]! * w)) / p2;
      const across = k * (along * q - v[3]!);
      b[0] += across * c;
      b[1] -= across * s;
      b[2] += k * (along * w - v[4]!);
    }
  }
}

/** Total-field anomaly |F + B| − |F| of all sources together, nT, exact. */
export function anomalyAt(sources: readonly Source[], f: readonly number[], at: readonly [number, number, number]): number {
  const b: Vector = [0, 0, 0];
  for (const source of sources) addSource(b, source, at);
  return totalFieldAnomaly(b, f);
}

/**
 * Field of all sources together and its exact derivatives: with û the direction of F + B, the derivative of |F + B| by
 * anything is û·∂B. Fixed sources add field and slope but no columns.
 */
export function fieldOfSources(
  sources: readonly Source[], { field: f, fixed }: { readonly field: readonly number[]; readonly fixed: readonly Source[] }, sensors: Sensors,
): FieldOfSources {
  const n = sensors.x.length;
  const parameters = sources.reduce((sum, source) => sum + source.values.length, 0);
  const out: FieldOfSources = {
    value: new Float64Array(n), slopeX: new Float64Array(n), slopeY: new Float64Array(n), slopeZ: new Float64Array(n),
    columns: new Float64Array(n * parameters),
  };
  const b: Vector = [0, 0, 0];
  for (let i = 0; i < n; i++) {
    const at: Vector = [sensors.x[i]!, sensors.y[i]!, sensors.z[i]!];
    b[0] = 0; b[1] = 0; b[2] = 0;
    for (const source of sources) addSource(b, source, at);
    for (const source of fixed) addSource(b, source, at);
    out.value[i] = totalFieldAnomaly(b, f);
    const tx = f[0]! + b[0];
    const ty = f[1]! + b[1];
    const tz = f[2]! + b[2];
    const total = Math.sqrt(tx * tx + ty * ty + tz * tz);
    const u: Vector = [tx / total, ty / total, tz / total];
    let column = 0;
    for (const source of sources) {
      derivatives(out, source, { i, n, column, at, u });
      column += source.values.length;
    }
    for (const source of fixed) derivatives(out, source, { i, n, column: -1, at, u });
  }
  return out;
}

interface Spot {
  readonly i: number;
  readonly n: number;
  /** First column of the source; −1 for a fixed one. */
  readonly column: number;
  readonly at: Vector;
  readonly u: Vector;
}

function derivatives(out: FieldOfSources, source: Source, spot: Spot): void {
  const { i, n, column, at, u } = spot;
  const v = source.values;
  const { columns } = out;
  const put = (k: number, value: number) => { if (column >= 0) columns[(column + k) * n + i] = value; };
  switch (source.kind) {
    case 'pole': {
      const rx = at[0] - v[0]!;
      const ry = at[1] - v[1]!;
      let sx = 0;
      let sy = 0;
      let sz = 0;
      for (let k = 0; k <= COLLAR_DEPTHS_M.length; k++) {
        const rz = at[2] - v[2]! + (k === 0 ? 0 : COLLAR_DEPTHS_M[k - 1]!);
        const r2 = rx * rx + ry * ry + rz * rz;
        const inv3 = NT_PER_POLE / (r2 * Math.sqrt(r2));
        const ur = u[0] * rx + u[1] * ry + u[2] * rz;
        put(3 + k, -inv3 * ur);
        const a = v[3 + k]! * inv3;
        const three = (3 * ur) / r2;
        sx -= a * (u[0] - three * rx);
        sy -= a * (u[1] - three * ry);
        sz -= a * (u[2] - three * rz);
      }
      put(0, -sx); put(1, -sy); put(2, -sz);
      out.slopeX[i]! += sx; out.slopeY[i]! += sy; out.slopeZ[i]! += sz;
      return;
    }
    case 'dipole': {
      const slope = dipoleSlope([v[3]!, v[4]!, v[5]!], at[0] - v[0]!, at[1] - v[1]!, at[2] - v[2]!, u);
      for (let k = 0; k < 3; k++) {
        put(k, -slope[k]!);
        put(3 + k, slope[3 + k]!);
      }
      out.slopeX[i]! += slope[0]!; out.slopeY[i]! += slope[1]!; out.slopeZ[i]! += slope[2]!;
      return;
    }
    case 'line': {
      const c = Math.cos(v[1]!);
      const s = Math.sin(v[1]!);
      const dx = at[0] - source.anchorX;
      const dy = at[1] - source.anchorY;
      const q = dx * c - dy * s - v[0]!;
      const w = at[2] - v[2]!;
      const uq = u[0] * c - u[1] * s;
      const p2 = q * q + w * w;
      const k2 = (2 * NT_PER_POLE) / p2;
      const up = uq * q + u[2] * w;
      const mp = v[3]! * q + v[4]! * w;
      const mu = v[3]! * uq + v[4]! * u[2];
      const slope = (mj: number, uj: number, pj: number) => (k2 / p2) * (2 * (mj * up + mp * uj) - (8 * mp * up * pj) / p2 + 2 * mu * pj);
      const gq = slope(v[3]!, uq, q);
      const gw = slope(v[4]!, u[2], w);
      put(0, -gq);
      // Turning the line moves it across by the distance along, and turns the axes that moment and field are read on.
      put(1, -gq * (dx * s + dy * c) - k2 * ((2 * mp * q) / p2 - v[3]!) * (u[0] * s + u[1] * c));
      put(2, -gw);
      put(3, k2 * ((2 * q * up) / p2 - uq));
      put(4, k2 * ((2 * w * up) / p2 - u[2]));
      out.slopeX[i]! += gq * c; out.slopeY[i]! -= gq * s; out.slopeZ[i]! += gw;
    }
  }
}

const SLOPE = new Float64Array(6);
/** Derivative of û·B of a dipole by the sensor's place (3) and by its moment (3). The array is used again by the next call. */
function dipoleSlope(m: Vector, rx: number, ry: number, rz: number, u: Vector): Float64Array {
  const r2 = rx * rx + ry * ry + rz * rz;
  const inv3 = NT_PER_POLE / (r2 * Math.sqrt(r2));
  const inv5 = inv3 / r2;
  const ur = u[0] * rx + u[1] * ry + u[2] * rz;
  const mr = m[0] * rx + m[1] * ry + m[2] * rz;
  const mu = m[0] * u[0] + m[1] * u[1] + m[2] * u[2];
  const radial = 3 * mu - (15 * mr * ur) / r2;
  SLOPE[0] = inv5 * (3 * (m[0] * ur + mr * u[0]) + radial * rx);
  SLOPE[1] = inv5 * (3 * (m[1] * ur + mr * u[1]) + radial * ry);
  SLOPE[2] = inv5 * (3 * (m[2] * ur + mr * u[2]) + radial * rz);
  SLOPE[3] = 3 * inv5 * rx * ur - inv3 * u[0];
  SLOPE[4] = 3 * inv5 * ry * ur - inv3 * u[1];
  SLOPE[5] = 3 * inv5 * rz * ur - inv3 * u[2];
  return SLOPE;
}
