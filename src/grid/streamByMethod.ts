import { UserError } from '../errors.js';
import { checkMethod, checkNoise, METHOD_DEFAULTS, type MethodOptions, type WalkedSamples } from './gridByMethod.js';
import { MAX_CELLS } from './gridFrame.js';
import { GRID_DEFAULTS } from './gridOptions.js';
import { gridLayout } from './gridLayout.js';
import { gridTiled, TILED_DEFAULTS, type TiledGrid } from './gridTiled.js';
import type { GridRemarks } from './types.js';

/**
 * What `gridByMethod` is for grids that are too large to be held: the grid in tension, made as its rows are read; null
 * where it has no more than MAX_CELLS, and `gridByMethod` is the way. Equivalent sources, triangles and the error of each
 * cell need the whole grid: asked for by name they are refused (UserError `value_invalid`), and `auto` takes tension.
 */
export function streamByMethod(samples: WalkedSamples, options: MethodOptions = {}): TiledGrid | null {
  const { method, error, noiseNt, ...plain } = { ...METHOD_DEFAULTS, ...options };
  checkMethod(method);
  checkNoise(samples, noiseNt);
  const { frame: { width, height } } = gridLayout(samples, { ...GRID_DEFAULTS, maxCells: TILED_DEFAULTS.maxCells, ...plain });
  if (width * height <= MAX_CELLS) return null;
  const refusal = (key: string, found: string, other: string): UserError => new UserError({
    code: 'value_invalid', where: `grid, ${key}`, found: `${found} for a grid of ${width} × ${height} cells`, wanted: `at most ${MAX_CELLS / 1e6} million cells with it`,
    advice: `state a larger cell_m, look for readings with a wrong position, or ${other}`,
  });
  if (method === 'sources' || method === 'linear') throw refusal('method', JSON.stringify(method), 'take "tension"');
  if (error) throw refusal('error', 'true', 'leave it out');
  const tiled = gridTiled(samples, plain);
  if (method === 'tension') return tiled;
  const why = `With more than ${MAX_CELLS / 1e6} million cells the grid is made in tension, tile by tile, whatever the depth of the sources.`;
  const remarks = (): GridRemarks => {
    const { notes, warnings } = tiled.remarks();
    return { notes, warnings: [...warnings, why] };
  };
  return { ...tiled, remarks };
}
