import { UserError } from '../errors.js';
import { median } from '../numerics/robust.js';
import type { Grid } from '../raster/types.js';
import { gridByTriangles } from './gridByTriangles.js';
import { MAX_CELLS } from './gridFrame.js';
import { gridLayout } from './gridLayout.js';
import { GRID_DEFAULTS } from './gridOptions.js';
import { gridReadings } from './gridReadings.js';
import { range, short } from './gridRemarks.js';
import type { TiledOptions } from './gridTiled.js';
import { reachedCells, unsolvedGrid } from './reachedCells.js';
import { sdRange } from './sampleErrors.js';
import { gridBySources, type SourcesGrid } from './sources/gridBySources.js';
import { layerDepthM } from './sources/layerDepth.js';
import { lineNoise } from './sources/lineNoise.js';
import type { HighSamples } from './sources/placedReadings.js';
import type { GridResult } from './types.js';

export type GridMethod = 'auto' | 'tension' | 'sources' | 'linear';
export const GRID_METHODS: readonly GridMethod[] = Object.freeze(['auto', 'tension', 'sources', 'linear']);

/** Readings in the order in which they were taken, with the sensor's height and the line of each where known. */
export interface WalkedSamples extends HighSamples {
  readonly line?: ArrayLike<number>;
}

export interface MethodOptions extends TiledOptions {
  readonly method?: GridMethod;
  /** Whether the standard error of each cell is wanted. */
  readonly error?: boolean;
  /** Standard deviation of a reading's error, nT; NaN: from the readings themselves. Not with samples that state their own. */
  readonly noiseNt?: number;
}

export const METHOD_DEFAULTS = Object.freeze({ method: 'auto' as GridMethod, error: false, noiseNt: NaN });

export interface MethodResult {
  readonly grid: GridResult;
  /** Standard error of each cell, nT; NaN where the field is not known. Null where it was not asked for. */
  readonly error: Grid | null;
  readonly method: Exclude<GridMethod, 'auto'>;
}

/**
 * Lines no further apart than this share of the sources' depth show the whole field, and a plate bridges it as well as
 * cubic triangles do; wider ones leave a choice that the plate makes badly (measured: beyond the depth it may stray from
 * the field by half as much again as linear triangles, equivalent sources never by more than a twentieth).
 */
const RESOLVED_SHARE = 0.8;
/** Heights that vary by more than this share of the sources' depth (standard deviation) do not count as one level. */
const LEVEL_SHARE = 0.01;
/** Errors of readings further apart than this ratio are not alike: a plate passes through poor readings as through good ones, save where they share a cell. */
const ALIKE_RATIO = 3;

/**
 * Grids readings by the method asked for. `tension` is gridReadings and `linear` gridByTriangles; both take no notice of
 * heights. `sources` gives the field on the readings' median height. `auto` takes tension where the lines are no further
 * apart than 0.8 times the depth of the likeliest layer of sources, the sensor kept its height and no reading's error is
 * more than three times another's, else sources. Frame, reach and cells are the same for all. The error is that of the
 * grid it comes with: where that is not the sources' own, its distance from their field is added.
 *
 * Throws UserError `value_invalid` for an unknown method, for a standard error of a reading that is no positive number,
 * and for `noiseNt` where readings state their errors; and what gridReadings and gridByTriangles throw.
 */
export async function gridByMethod(samples: WalkedSamples, options: MethodOptions = {}): Promise<MethodResult> {
  const { method, error, noiseNt, ...sizes } = { ...METHOD_DEFAULTS, ...options };
  checkMethod(method);
  checkNoise(samples, noiseNt);
  const surface = async (used: 'tension' | 'linear'): Promise<GridResult> => (used === 'linear' ? gridByTriangles(samples, sizes) : gridReadings(samples, sizes));
  if ((method === 'tension' || method === 'linear') && !error) return { grid: await surface(method), error: null, method };
  const layout = gridLayout(samples, { ...GRID_DEFAULTS, maxCells: MAX_CELLS, ...sizes });
  const { frame, spacingM } = layout;
  const [noiseNT, mostNT] = sdRange(samples) ?? plainNoise(samples, noiseNt);
  const { heights, levelM, spreadM } = levelled(samples);
  const depthM = layerDepthM(heights, { spacingM, noiseNT });
  const plain = spacingM <= RESOLVED_SHARE * depthM && spreadM <= LEVEL_SHARE * depthM && mostNT <= ALIKE_RATIO * noiseNT;
  const used = method !== 'auto' ? method : plain ? 'tension' : 'sources';
  const why = `Sources lie most likely ${short(depthM)} m below the sensor; lines are ${short(spacingM)} m apart.`;
  const fieldAt = (wanted: Uint8Array): SourcesGrid => gridBySources(heights, frame, { spacingM, noiseNT, depthM, wanted, error });

  if (used === 'sources') {
    const { reached, occupied } = reachedCells(samples, layout);
    const field = fieldAt(reached);
    const how = `Grid of ${frame.width} × ${frame.height} cells of ${short(frame.cellM)} m, by equivalent sources, on the level of the sensor's median height${samples.up ? ` (${short(levelM)} m)` : ''}; noise of a reading ${range([noiseNT, mostNT])} nT.`;
    return noted(unsolvedGrid(field.values, { layout, occupied, how }), { why, error: field.error, method: used });
  }
  const grid = await surface(used);
  if (!error) return noted(grid, { why, error: null, method: used });
  const field = fieldAt(Uint8Array.from(grid.values, (value) => (Number.isNaN(value) ? 0 : 1)));
  return noted(grid, { why, error: field.error!.map((sd, k) => Math.hypot(sd, grid.values[k]! - field.values[k]!)), method: used });
}

/** One noise for all readings, as stated or as they show it. */
function plainNoise({ value, line }: WalkedSamples, stated: number): readonly [number, number] {
  const noiseNT = stated >= 0 ? stated : lineNoise(value, line) || 0;
  return [noiseNT, noiseNT];
}

/** The grid with what is to be said of its sources and its error. */
function noted(grid: GridResult, { why, error, method }: { why: string; error: Float32Array | null; method: MethodResult['method'] }): MethodResult {
  if (!error) return { grid: { ...grid, notes: [...grid.notes, why] }, error, method };
  const { width, height, west, north, cellM } = grid;
  return { grid: { ...grid, notes: [...grid.notes, why, unknownNote(error, grid)] }, error: { width, height, west, north, cellM, values: error }, method };
}

export function checkMethod(method: GridMethod): void {
  if (GRID_METHODS.includes(method)) return;
  throw new UserError({ code: 'value_invalid', where: 'grid, method', found: JSON.stringify(method), wanted: `one of ${GRID_METHODS.join(', ')}` });
}

export function checkNoise({ sd }: WalkedSamples, noiseNt: number): void {
  if (!sd || !(noiseNt >= 0)) return;
  throw new UserError({ code: 'value_invalid', where: 'grid, noise_nt', found: `${noiseNt} and an error of each reading`, wanted: 'one of the two', advice: 'leave noise_nt out, or let all readings count alike' });
}

/** Heights above their median; readings without one lie on it. */
function levelled(samples: WalkedSamples): { heights: HighSamples; levelM: number; spreadM: number } {
  const { up } = samples;
  if (!up) return { heights: samples, levelM: NaN, spreadM: 0 };
  const levelM = median(up);
  const above = Float64Array.from(up, (each) => (Number.isFinite(each) ? each - levelM : 0));
  const spreadM = Math.sqrt(above.reduce((sum, each) => sum + each * each, 0) / above.length);
  return { heights: { ...samples, up: above }, levelM, spreadM };
}

function unknownNote(error: Float32Array, { values, filled }: GridResult): string {
  let unknown = 0;
  for (let k = 0; k < values.length; k++) if (Number.isNaN(error[k]!) && !Number.isNaN(values[k]!)) unknown++;
  return `In ${short((100 * unknown) / Math.max(1, filled))} % of the filled cells the readings leave the field unknown; the error grid is empty there.`;
}
