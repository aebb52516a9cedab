import KDBush from 'kdbush';
import { madSd, median } from '../numerics/robust.js';
import { blocksNear, type Survey } from './survey.js';

/** Where the residual stands out along a pass. */
export interface Peak {
  readonly block: number;
  readonly x: number;
  readonly y: number;
  /** Above (or below) the running median of its pass, nT. */
  readonly heightNT: number;
  /** In units of the local noise. */
  readonly snr: number;
}

/** The running median looks this many reaches, or line spacings, to either side: a source at half a spacing is still narrower. */
const MEDIAN_REACHES = 3;
const MEDIAN_SPACINGS = 1.2;
/** Values that the running median is taken of, at most. */
const MEDIAN_VALUES = 41;

/** Values less their running median along the pass, nT. */
export function aboveMedian(survey: Survey, value: Float64Array): Float64Array {
  const { blocks, reachM, spacingM } = survey;
  const half = Math.max(MEDIAN_REACHES * reachM, MEDIAN_SPACINGS * spacingM);
  const out = new Float64Array(blocks.count);
  for (let from = 0; from < blocks.count;) {
    let to = from + 1;
    while (to < blocks.count && blocks.pass[to] === blocks.pass[from]) to++;
    const length = Math.hypot(blocks.x[to - 1]! - blocks.x[from]!, blocks.y[to - 1]! - blocks.y[from]!);
    const reach = Math.max(1, Math.round((half / Math.max(half / 10, length)) * (to - from)));
    const stride = Math.max(1, Math.ceil((2 * reach) / MEDIAN_VALUES));
    const knot = Math.max(1, Math.floor(reach / 8));
    const base: number[] = [];
    const last = to - from - 1;
    const knots = Math.max(1, Math.ceil(last / knot));
    for (let k = 0; k <= knots; k++) {
      const middle = from + Math.round((k * last) / knots);
      const values: number[] = [];
      for (let i = Math.max(from, middle - reach); i < Math.min(to, middle + reach + 1); i += stride) values.push(value[i]!);
      base.push(median(values));
    }
    for (let i = from; i < to; i++) {
      const t = last === 0 ? 0 : ((i - from) * knots) / last;
      const k = Math.min(knots - 1, Math.floor(t));
      out[i] = value[i]! - base[k]! - (t - k) * (base[k + 1]! - base[k]!);
    }
    from = to;
  }
  return out;
}

/** Robust standard deviation of `value` within `radiusM`, on a net of places half a radius apart; looked up at a block. */
export function localNoise(survey: Survey, value: Float64Array, radiusM: number): Float64Array {
  const { blocks } = survey;
  const cells = new Map<string, number>();
  const out = new Float64Array(blocks.count);
  const step = radiusM / 2;
  for (let i = 0; i < blocks.count; i++) {
    const cx = Math.round(blocks.x[i]! / step);
    const cy = Math.round(blocks.y[i]! / step);
    const key = `${cx},${cy}`;
    let sd = cells.get(key);
    if (sd === undefined) {
      sd = madSd(Float64Array.from(blocksNear(survey, [[cx * step, cy * step]], radiusM), (j) => value[j]!));
      cells.set(key, sd);
    }
    out[i] = sd;
  }
  return out;
}

/**
 * Largest deflections along each pass, one within a reach, each more than `threshold` times `noise` of its block.
 * Strongest first; equal ones in walking order.
 */
export function findPeaks(survey: Survey, high: Float64Array, { noise, threshold }: { readonly noise: Float64Array; readonly threshold: number }): Peak[] {
  const { blocks, reachM } = survey;
  const peaks: Peak[] = [];
  for (let i = 0; i < blocks.count; i++) {
    const size = Math.abs(high[i]!);
    if (!(size > threshold * noise[i]!)) continue;
    let largest = true;
    for (const direction of [-1, 1]) {
      for (let j = i + direction; largest && j >= 0 && j < blocks.count && blocks.pass[j] === blocks.pass[i]; j += direction) {
        if (Math.hypot(blocks.x[j]! - blocks.x[i]!, blocks.y[j]! - blocks.y[i]!) > reachM) break;
        const other = Math.abs(high[j]!);
        if (other > size || (other === size && j < i)) largest = false;
      }
    }
    if (largest) peaks.push({ block: i, x: blocks.x[i]!, y: blocks.y[i]!, heightNT: high[i]!, snr: size / noise[i]! });
  }
  return peaks.toSorted((a, b) => b.snr - a.snr || a.block - b.block);
}

/** The strongest peaks of which none lies within `apartM` of a stronger one. */
export function thinPeaks(peaks: readonly Peak[], apartM: number): Peak[] {
  if (peaks.length === 0) return [];
  const tree = new KDBush(peaks.length);
  for (const peak of peaks) tree.add(peak.x, peak.y);
  tree.finish();
  const gone = new Uint8Array(peaks.length);
  return peaks.filter((peak, k) => {
    if (gone[k]) return false;
    for (const other of tree.within(peak.x, peak.y, apartM)) if (other > k) gone[other] = 1;
    return true;
  });
}
