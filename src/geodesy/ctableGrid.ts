import { UserError } from '../errors.js';
import { type GridNaming, gridAccuracy } from './gridIdentity.js';
import { shiftGrid, type OffsetTable } from './offsetTables.js';
import type { ShiftGrid } from './types.js';

const SIGNATURE = 'CTABLE V2';
const HEADER_BYTES = 160;
const NODE_BYTES = 8;
const DEG = 180 / Math.PI;

/** The format names no datums; these are the titles that NOAA's NADCON grids for NAD27 carry in it. */
const NAD27_TITLES = new Set(['Conterminous United States', 'Alaska']);

export function isCtable(bytes: Uint8Array): boolean {
  return text(bytes, 0, SIGNATURE.length) === SIGNATURE;
}

/**
 * Reads a CTABLE V2 grid: little-endian; title, south-west corner, steps (radians, doubles) and counts in a header of
 * 160 bytes, then pairs of floats in radians, row by row from the south, longitude positive west.
 * Source: PROJ, description of the format in its source and documentation.
 */
export function readCtable(name: string, bytes: Uint8Array, { label, datums }: GridNaming): ShiftGrid {
  const title = text(bytes, 16, 80).split('\n')[0]!.trim();
  if (bytes.length < HEADER_BYTES) throw damaged(name, `${bytes.length} bytes`);
  const known = datums ?? (NAD27_TITLES.has(title) ? { from: 'NAD27', to: 'NAD83' } : undefined);
  if (known === undefined) {
    throw new UserError({
      code: 'grid_file_invalid', where: name, found: `a CTABLE V2 grid titled ${JSON.stringify(title)}, which does not say between which datums it leads`,
      wanted: 'a grid that names its datums', advice: 'take its GeoTIFF or NTv2 form',
    });
  }
  return shiftGrid({ name: label, ...known, ...gridAccuracy(title) }, [readTable(name, bytes)]);
}

function readTable(name: string, bytes: Uint8Array): OffsetTable {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const [west, south, stepLonDeg, stepLatDeg] = [96, 104, 112, 120].map((at) => view.getFloat64(at, true) * DEG) as [number, number, number, number];
  const width = view.getInt32(128, true);
  const height = view.getInt32(132, true);
  const wanted = HEADER_BYTES + width * height * NODE_BYTES;
  if (!(width > 1 && height > 1 && stepLonDeg > 0 && stepLatDeg > 0) || bytes.length < wanted) {
    throw damaged(name, `${width} by ${height} nodes in ${bytes.length} bytes`);
  }
  const dLonDeg = new Float64Array(width * height);
  const dLatDeg = new Float64Array(width * height);
  for (let node = 0; node < width * height; node++) {
    dLonDeg[node] = -view.getFloat32(HEADER_BYTES + node * NODE_BYTES, true) * DEG;
    dLatDeg[node] = view.getFloat32(HEADER_BYTES + node * NODE_BYTES + 4, true) * DEG;
  }
  return { west, south, stepLonDeg, stepLatDeg, width, height, dLonDeg, dLatDeg };
}

function damaged(name: string, found: string): UserError {
  return new UserError({ code: 'grid_file_invalid', where: name, found, wanted: 'a whole CTABLE V2 grid' });
}

function text(bytes: Uint8Array, from: number, length: number): string {
  return String.fromCharCode(...bytes.subarray(from, from + length)).replace(/\0.*$/s, '');
}
