import { UserError } from '../errors.js';
import type { RowSource } from '../raster/types.js';
import { bucketSamples, samplesWithin, type Buckets } from './buckets.js';
import { cellMeans } from './cellMeans.js';
import { coarseSurface, surfaceAt, type CoarseSurface } from './coarseSurface.js';
import { anyGap, gapsOf, type Gaps } from './gaps.js';
import { gridLayout, noneInside, type GridLayout } from './gridLayout.js';
import { GRID_DEFAULTS, type GridOptions } from './gridOptions.js';
import { gridRemarks } from './gridRemarks.js';
import { rimNodes } from './pins.js';
import { robustRange } from './robustRange.js';
import { sampleWeights } from './sampleErrors.js';
import { solveTile, type SolveTile, type TileTask } from './solveTile.js';
import { fitTrend } from './trend.js';
import type { GridFrame, GridRemarks, GridResult, Samples } from './types.js';

export interface TiledOptions extends GridOptions {
  /** Cells across a tile that are kept, a multiple of 512 for whole tiles of a COG; more where the overlap asks for it. */
  readonly tileCells?: number;
  /** Overlap on each side, in line spacings. */
  readonly overlapSpacings?: number;
  /** The same for a tile with ground beyond the reach in or around it. */
  readonly gapOverlapSpacings?: number;
  /** Solves a tile of several, here or on another thread. A grid of one tile is solved here. */
  readonly solve?: SolveTile;
  /** A larger grid is refused. */
  readonly maxCells?: number;
}

/** Room for any survey; beyond it the cell size is a mistake. */
const MAX_TILED_CELLS = 4e9;

export const TILED_DEFAULTS = Object.freeze({
  ...GRID_DEFAULTS,
  tileCells: 1024,
  /** What lies beyond a line changes the surface on this side of it about a quarter as much (cubic spline: 2 − √3). */
  overlapSpacings: 10,
  /** Across a gap nothing dies out by itself (measured: a hole 15 spacings wide on a seam leaves 5e-6 of the range at 10, 5e-7 at 20). */
  gapOverlapSpacings: 24,
  solve: solveTile as SolveTile,
  maxCells: MAX_TILED_CELLS,
});

/** Readings on one line leave a plate free to tilt about it; a membrane is not. */
const TENSION_ON_LINE = 0.25;
const BUCKET_CELLS = 128;
/** Cells of the surface that the tiles' rims rest on: so many to one, and never more than this many in all. */
const COARSE_STEP = 8;
const COARSE_CELLS = 2_000_000;
/** Fewer coarse cells across than this do not show the trend. */
const COARSE_ACROSS = 64;
/** Overlap beyond the reach: a reading that fills a cell lies in the tile, off the rim. */
const SPARE_CELLS = 4;

/** What was done, complete once all rows have been read. */
export type TiledSummary = Pick<GridResult, 'filled' | 'pinned' | 'iterations' | 'remaining' | 'remainingShare' | 'converged'>;

/** A grid that is made as its rows are read; feed it to `writeCog`. */
export interface TiledGrid extends RowSource, Pick<GridLayout, 'spacingM' | 'reachM'> {
  readonly tension: number;
  /** Range of the readings that the tolerance is a share of. */
  readonly range: number;
  readonly tileCells: number;
  readonly overlapCells: number;
  readRows(first: number, count: number): Promise<Float32Array>;
  summary(): TiledSummary;
  /** The same in words, and what is to be said of the cells, which is known before. */
  remarks(): GridRemarks;
}

/**
 * The surface of `gridReadings`, tile by tile, so that neither the grid nor its solver has to be in memory as a whole.
 * Each tile is solved with an overlap; its rim rests on a surface of wide cells through all readings, which carries what
 * ground without readings passes on from far away. What is wrong at the rim falls to about a quarter from line to line.
 * Tiles do not depend on the order in which they are solved, so threads change nothing. Rows are kept a row of tiles at a
 * time; the next one is begun before it is asked for.
 */
export function gridTiled(samples: Samples, options: TiledOptions = {}): TiledGrid {
  const { tension: wanted, tolerance, maxSteps, bounds, tileCells: least, overlapSpacings, gapOverlapSpacings, solve, maxCells, ...sizes } = { ...TILED_DEFAULTS, ...options };
  if (!(wanted >= 0 && wanted <= 1)) {
    throw new UserError({ code: 'value_invalid', where: 'grid, tension', found: String(wanted), wanted: 'a number from 0 to 1' });
  }
  const layout = gridLayout(samples, { ...sizes, bounds, maxCells });
  const { frame, solved, spacingM, reachM, cellM } = layout;
  const coarseFrame = coarseOf(solved);
  const weight = sampleWeights(samples);
  const means = cellMeans(samples, weight, coarseFrame);
  if (means.cell.length === 0) throw noneInside();
  const trend = fitTrend(means, cellM);
  const tension = trend.onLine ? Math.max(wanted, TENSION_ON_LINE) : wanted;
  const range = robustRange(samples.value);
  const cellsOf = (spacings: number): number => Math.max(Math.ceil((spacings * spacingM) / cellM), Math.ceil(reachM / cellM) + SPARE_CELLS);
  const overlapCells = cellsOf(overlapSpacings);
  const tileCells = Math.max(least, Math.ceil((2 * overlapCells) / least) * least);
  const single = tileCells >= frame.width && tileCells >= frame.height;
  let wide: Promise<CoarseSurface> | null = null;
  const surface = (): Promise<CoarseSurface> | null => {
    if (single || wide) return wide;
    wide = coarseSurface(means, { frame: coarseFrame, trend, tension, spacingM, range, solve });
    // A failure is thrown where a tile waits for it; a row without readings has none.
    wide.catch(() => {});
    return wide;
  };
  const tiler: Tiler = {
    layout, tileCells: single ? Infinity : tileCells, overlapCells, gapOverlapCells: Math.max(overlapCells, cellsOf(gapOverlapSpacings)),
    gaps: gapsOf(means, coarseFrame, reachM), surface,
    buckets: bucketSamples(samples, weight, widened(solved, BUCKET_CELLS)),
    common: { trend, tension, spacingM, reachM, tolerance: tolerance * Math.max(range, Math.abs(trend.level) * 1e-12, 1e-300), maxSteps },
  };
  const totals = { filled: 0, pinned: 0, iterations: 0, remaining: 0, converged: true };
  const rowsOfTiles = new Map<number, Promise<Float32Array>>();
  const perRow = single ? frame.height : tileCells;
  const rowOfTiles = (r: number): Promise<Float32Array> => {
    const begun = rowsOfTiles.get(r) ?? solveRow(tiler, r, { solve: single ? solveTile : solve, totals });
    // A failure is thrown where the row is asked for; until then it is nobody's unhandled rejection.
    begun.catch(() => {});
    rowsOfTiles.set(r, begun);
    return begun;
  };
  const summary = (): TiledSummary => ({ ...totals, remainingShare: range > 0 ? totals.remaining / range : 0 });

  return {
    ...frame, spacingM, reachM, tension, range, tileCells, overlapCells, summary,
    remarks: () => gridRemarks({ ...frame, spacingM, reachM, tension, ...summary() }, tolerance),
    async readRows(first, count) {
      const rows: Float32Array[] = [];
      for (let j = first; j < first + count;) {
        const r = Math.floor(j / perRow);
        for (const done of rowsOfTiles.keys()) if (done < r) rowsOfTiles.delete(done);
        const begun = rowOfTiles(r);
        // So that no thread waits for the last tile of a row.
        if ((r + 1) * perRow < frame.height) void rowOfTiles(r + 1);
        const until = Math.min(first + count, (r + 1) * perRow);
        rows.push((await begun).subarray((j - r * perRow) * frame.width, (until - r * perRow) * frame.width));
        j = until;
      }
      return rows.length === 1 ? rows[0]! : joined(rows, count * frame.width);
    },
  };
}

function joined(parts: readonly Float32Array[], length: number): Float32Array {
  const whole = new Float32Array(length);
  let at = 0;
  for (const part of parts) {
    whole.set(part, at);
    at += part.length;
  }
  return whole;
}

interface Tiler {
  readonly layout: GridLayout;
  /** Infinity: the grid is one tile. */
  readonly tileCells: number;
  readonly overlapCells: number;
  readonly gapOverlapCells: number;
  readonly gaps: Gaps;
  /** The wide surface, solved when the first tile is; null where there is but one tile. */
  readonly surface: () => Promise<CoarseSurface> | null;
  readonly buckets: Buckets;
  readonly common: Pick<TileTask, 'trend' | 'tension' | 'spacingM' | 'reachM' | 'tolerance' | 'maxSteps'>;
}

async function solveRow(tiler: Tiler, r: number, { solve, totals }: {
  solve: SolveTile; totals: { filled: number; pinned: number; iterations: number; remaining: number; converged: boolean };
}): Promise<Float32Array> {
  const { layout: { frame }, tileCells } = tiler;
  const side = Math.min(tileCells, Math.max(frame.width, frame.height));
  const top = r * side;
  const height = Math.min(side, frame.height - top);
  const values = new Float32Array(frame.width * height).fill(NaN);
  const tiles = Array.from({ length: Math.ceil(frame.width / side) }, (_, c) => c * side);
  await Promise.all(tiles.map(async (left) => {
    const width = Math.min(side, frame.width - left);
    const surface = tiler.surface();
    // The readings are gathered while the wide surface is being solved.
    const tile = cutTile(tiler, { left, top, width, height });
    if (tile === null) return;
    const solution = await solve({ ...tile.task, ...rimOf(tile, await surface) });
    for (let j = 0; j < height; j++) values.set(solution.values.subarray(j * width, (j + 1) * width), j * frame.width + left);
    totals.filled += solution.filled;
    totals.pinned += solution.pinned;
    totals.iterations = Math.max(totals.iterations, solution.iterations);
    totals.remaining = Math.max(totals.remaining, solution.remaining);
    totals.converged &&= solution.converged;
  }));
  return values;
}

/** A tile with its readings, but for its rim; null where no reading is near. */
function cutTile({ layout: { frame, solved, cellM }, buckets, common, ...tiler }: Tiler, kept: TileTask['own']): CutTile | null {
  // Of the frame that is solved, in whose cells all that follows counts.
  const left = kept.left + Math.round((frame.west - solved.west) / cellM);
  const top = kept.top + Math.round((solved.north - frame.north) / cellM);
  const wide = tiler.gapOverlapCells;
  const hasGap = anyGap(tiler.gaps, [left - wide, top - wide, left + kept.width + wide, top + kept.height + wide], cellM);
  // The only tile takes all there is.
  const overlapCells = tiler.tileCells === Infinity ? Infinity : hasGap ? wide : tiler.overlapCells;
  const from = Math.max(0, left - overlapCells);
  const until = Math.min(solved.width, left + kept.width + overlapCells);
  const above = Math.max(0, top - overlapCells);
  const below = Math.min(solved.height, top + kept.height + overlapCells);
  const tile: GridFrame = { width: until - from, height: below - above, west: solved.west + from * cellM, north: solved.north - above * cellM, cellM };
  const taken = samplesWithin(buckets, tile);
  if (taken.x.length === 0) return null;
  const open = { west: from > 0, east: until < solved.width, north: above > 0, south: below < solved.height };
  return { task: { ...common, ...taken, frame: tile, own: { ...kept, left: left - from, top: top - above } }, open };
}

interface CutTile {
  readonly task: Omit<TileTask, 'rimNode' | 'rimValue'>;
  /** Sides where the ground goes on. */
  readonly open: Parameters<typeof rimNodes>[1];
}

/** Nodes along the sides where the ground goes on, with the value of the wide surface there. */
function rimOf({ task: { frame }, open }: CutTile, surface: CoarseSurface | null): Pick<TileTask, 'rimNode' | 'rimValue'> {
  const { width, west, north, cellM } = frame;
  const rimNode = surface ? rimNodes(frame, open) : new Int32Array(0);
  const rimValue = Float64Array.from(rimNode, (node) => {
    const j = Math.floor(node / width);
    return surfaceAt(surface!, west + (node - j * width + 0.5) * cellM, north - (j + 0.5) * cellM);
  });
  return { rimNode, rimValue };
}

function coarseOf(solved: GridFrame): GridFrame {
  let step = COARSE_STEP;
  while (step > 1 && Math.min(solved.width, solved.height) < COARSE_ACROSS * step) step /= 2;
  while ((solved.width * solved.height) / step ** 2 > COARSE_CELLS) step *= 2;
  return widened(solved, step);
}

/** The same ground in cells `step` times as wide, from the same north-western corner. */
function widened({ width, height, west, north, cellM }: GridFrame, step: number): GridFrame {
  return { width: Math.ceil(width / step), height: Math.ceil(height / step), west, north, cellM: cellM * step };
}
