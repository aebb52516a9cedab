import { UserError } from '../errors.js';
import { baseName } from '../files.js';
import { isCtable, readCtable } from './ctableGrid.js';
import { isTiff, readGeotiffGrid } from './geotiffGrid.js';
import { isNtv2, readNtv2 } from './ntv2Grid.js';
import type { ShiftGrid } from './types.js';

export type { ShiftGrid } from './types.js';

/** The least that any of the formats needs for its first header. */
const SHORTEST_BYTES = 160;

/**
 * Reads a datum shift grid: CTABLE V2, NTv2 (.gsb) or GeoTIFF, told apart by content. `name` is the path, for messages
 * and for the `shift` attribute. `datums` overrides what the file says it leads between. Throws UserError
 * `grid_file_invalid` for any other file and for a damaged one.
 */
export async function readShiftGrid(name: string, bytes: Uint8Array, datums?: { readonly from: string; readonly to: string }): Promise<ShiftGrid> {
  const label = `grid ${baseName(name)}`;
  if (bytes.length >= SHORTEST_BYTES) {
    if (isCtable(bytes)) return readCtable(name, bytes, { label, datums });
    if (isNtv2(bytes)) return readNtv2(name, bytes, { label, datums });
    if (isTiff(bytes)) return readGeotiffGrid(name, bytes, { label, datums });
  }
  throw new UserError({
    code: 'grid_file_invalid', where: name, found: `${bytes.length} bytes of another format`,
    wanted: 'a datum shift grid in CTABLE V2, NTv2 (.gsb) or GeoTIFF form',
  });
}
