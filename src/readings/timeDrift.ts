import type { Chunks } from './chunks.js';
import { regionalField } from './regionalField.js';
import { robustFit } from './robustFit.js';

/** Surface and drift are estimated in turn; each turn leaves a small part of the miss before it. */
const TURNS = 4;
/** Nodes of the drift stand this share of its window apart. */
const NODE_SHARE = 1 / 8;
const LEAST_CHUNKS = 6;

/**
 * Slow drift of the field in time, nT, where no base station tells it: what is left over the regional surface, followed
 * through time in a window longer than a line takes, so that a source along one line does not pass for drift. It is
 * counted from its own mean, and neighbouring lines walked at other times tell it from the ground.
 *
 * Source: Cleveland (1979), JASA 74, 829–836 (robust locally weighted regression, here in time).
 */
export function timeDrift(chunks: Chunks, { windowS, regionalM }: { windowS: number; regionalM: number }): (timeS: number) => number {
  let drift = none;
  for (let turn = 0; turn < TURNS; turn++) {
    const known = drift;
    const surface = regionalField(chunks, chunks.field.map((value, i) => value - known(chunks.timeS[i]!)), regionalM);
    const left = chunks.field.map((value, i) => value - surface(chunks.x[i]!, chunks.y[i]!));
    drift = smoothInTime(chunks.timeS, left, windowS);
  }
  return drift;
}

function none(_timeS: number): number {
  return 0;
}

function smoothInTime(timeS: Float64Array, values: Float64Array, windowS: number): (timeS: number) => number {
  const stepS = windowS * NODE_SHARE;
  const start = timeS[0]!;
  const count = Math.ceil((timeS[timeS.length - 1]! - start) / stepS) + 1;
  const nodes = Float64Array.from({ length: count }, (_, k) => lineAt(start + k * stepS, timeS, values, windowS / 2));
  const known = nodes.filter((value) => !Number.isNaN(value));
  const mean = known.reduce((sum, value) => sum + value, 0) / Math.max(1, known.length);
  for (let k = 0; k < count; k++) if (Number.isNaN(nodes[k]!)) nodes[k] = mean;
  return (time) => {
    const u = Math.min(count - 1, Math.max(0, (time - start) / stepS));
    const k = Math.min(count - 2, Math.floor(u));
    return k < 0 ? nodes[0]! - mean : nodes[k]! + (u - k) * (nodes[k + 1]! - nodes[k]!) - mean;
  };
}

function lineAt(time: number, timeS: Float64Array, values: Float64Array, halfS: number): number {
  const design: number[] = [];
  const target: number[] = [];
  const weight: number[] = [];
  for (let i = lowerBound(timeS, time - halfS); i < timeS.length && timeS[i]! < time + halfS; i++) {
    const d = (timeS[i]! - time) / halfS;
    if (Math.abs(d) >= 1 || Number.isNaN(values[i]!)) continue;
    design.push(1, d);
    target.push(values[i]!);
    weight.push((1 - Math.abs(d) ** 3) ** 3);
  }
  if (target.length < LEAST_CHUNKS) return NaN;
  const fit = robustFit({ count: target.length, width: 2, design: Float64Array.from(design), target: Float64Array.from(target), weight: Float64Array.from(weight), ridge: [0, 1e-6] });
  return fit ? fit.parameters[0]! : NaN;
}

function lowerBound(sorted: Float64Array, value: number): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle]! < value) low = middle + 1;
    else high = middle;
  }
  return low;
}
