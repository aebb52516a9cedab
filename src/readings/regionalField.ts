import type { Chunks } from './chunks.js';
import { robustFit } from './robustFit.js';

/** Nodes of the surface stand this share of its width apart: kinks between them stay below a tenth of what it bends. */
const NODE_SHARE = 1 / 6;
/** Fewer stretches than this around a node tell nothing of it. */
const LEAST_CHUNKS = 6;
/** Holds slopes at zero where all stretches lie on one line, as a share of what a spread over the circle would weigh. */
const SLOPE_RIDGE = 1e-3;

/**
 * The slow part of a field over the ground, nT at each place: at the nodes of a lattice a plane is fitted to the
 * stretches within half of `widthM`, near ones weighing most and misfits little (robust local regression), and between
 * nodes it is linear. Steel that fills a small part of the circle leaves it where it is.
 *
 * @param field of the stretches, nT
 * @returns a function of frame metres; NaN where no stretch is near
 *
 * Source: Cleveland (1979), JASA 74, 829–836 (robust locally weighted regression, tricube weights).
 */
export function regionalField(chunks: Chunks, field: Float64Array, widthM: number): (x: number, y: number) => number {
  const radiusM = widthM / 2;
  const stepM = widthM * NODE_SHARE;
  const bins = new Map<number, number[]>();
  let west = Infinity;
  let south = Infinity;
  for (let i = 0; i < chunks.count; i++) {
    west = Math.min(west, chunks.x[i]!);
    south = Math.min(south, chunks.y[i]!);
  }
  for (let i = 0; i < chunks.count; i++) {
    const bin = key(Math.floor((chunks.x[i]! - west) / radiusM) + 1, Math.floor((chunks.y[i]! - south) / radiusM) + 1);
    const list = bins.get(bin);
    if (list) list.push(i);
    else bins.set(bin, [i]);
  }
  const nodes = new Map<number, number>();
  const node = (c: number, r: number): number => {
    const id = key(c + 8, r + 8);
    let value = nodes.get(id);
    if (value === undefined) {
      const x = west + c * stepM;
      const y = south + r * stepM;
      const near: number[] = [];
      const c0 = Math.floor((x - west) / radiusM) + 1;
      const r0 = Math.floor((y - south) / radiusM) + 1;
      for (let dc = -1; dc <= 1; dc++) for (let dr = -1; dr <= 1; dr++) near.push(...(bins.get(key(c0 + dc, r0 + dr)) ?? []));
      value = planeAt({ x, y, radiusM }, near, chunks, field);
      nodes.set(id, value);
    }
    return value;
  };
  return (x, y) => {
    const u = (x - west) / stepM;
    const v = (y - south) / stepM;
    const c = Math.floor(u);
    const r = Math.floor(v);
    let sum = 0;
    let weight = 0;
    for (const [dc, dr] of CORNERS) {
      const value = node(c + dc, r + dr);
      // A node beyond the edge of the readings may know nothing; the others speak for it.
      if (Number.isNaN(value)) continue;
      const w = (dc ? u - c : 1 - u + c) * (dr ? v - r : 1 - v + r) + 1e-9;
      sum += w * value;
      weight += w;
    }
    return weight > 0 ? sum / weight : NaN;
  };
}
const CORNERS = [[0, 0], [1, 0], [0, 1], [1, 1]] as const;

/** One number for a cell of a lattice; columns and rows stay far below the factor. */
function key(column: number, row: number): number {
  return column * 0x100000 + row;
}

function planeAt({ x, y, radiusM }: { x: number; y: number; radiusM: number }, candidates: readonly number[], chunks: Chunks, field: Float64Array): number {
  const design: number[] = [];
  const target: number[] = [];
  const weight: number[] = [];
  for (const i of candidates) {
    const dx = (chunks.x[i]! - x) / radiusM;
    const dy = (chunks.y[i]! - y) / radiusM;
    const d = Math.hypot(dx, dy);
    if (d >= 1) continue;
    design.push(1, dx, dy);
    target.push(field[i]!);
    weight.push((1 - d ** 3) ** 3);
  }
  if (target.length < LEAST_CHUNKS) return NaN;
  const fit = robustFit({
    count: target.length, width: 3, design: Float64Array.from(design), target: Float64Array.from(target), weight: Float64Array.from(weight),
    ridge: [0, SLOPE_RIDGE, SLOPE_RIDGE],
  });
  return fit ? fit.parameters[0]! : NaN;
}
