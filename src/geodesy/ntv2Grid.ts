import { UserError } from '../errors.js';
import { type GridNaming, gridAccuracy, gridDatum } from './gridIdentity.js';
import { shiftGrid, type OffsetTable } from './offsetTables.js';
import type { ShiftGrid } from './types.js';

const RECORD_BYTES = 16;
const HEADER_RECORDS = 11;
const DEG_PER_UNIT: Readonly<Record<string, number>> = { SECONDS: 1 / 3600, MINUTES: 1 / 60, DEGREES: 1 };

export function isNtv2(bytes: Uint8Array): boolean {
  return key(bytes, 0) === 'NUM_OREC' && bytes.length >= 2 * HEADER_RECORDS * RECORD_BYTES && endian(bytes) !== null;
}

/**
 * Reads an NTv2 grid (.gsb) with its sub-grids, of either byte order: records of 16 bytes, longitudes positive west,
 * nodes from the south-east, westward, then northward. The finest table that holds a place counts.
 * Source: National Transformation version 2 developer's guide, Geodetic Survey of Canada.
 */
export function readNtv2(name: string, bytes: Uint8Array, { label, datums }: GridNaming): ShiftGrid {
  const little = endian(bytes);
  if (little === null) throw damaged(name, 'a header of neither byte order');
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const header = fields(view, bytes, 0, little);
  const unit = DEG_PER_UNIT[header.text('GS_TYPE')];
  if (unit === undefined) throw damaged(name, `offsets in ${JSON.stringify(header.text('GS_TYPE'))}`);
  const tables: OffsetTable[] = [];
  let offset = HEADER_RECORDS * RECORD_BYTES;
  for (let file = 0; file < header.integer('NUM_FILE'); file++) {
    const table = readTable({ name, view, bytes, offset, little, unit });
    tables.push(table);
    offset += (HEADER_RECORDS + table.width * table.height) * RECORD_BYTES;
  }
  if (tables.length === 0) throw damaged(name, 'no grid');
  const from = datums?.from ?? gridDatum(header.text('SYSTEM_F'));
  const to = datums?.to ?? gridDatum(header.text('SYSTEM_T'));
  if (from === '' || to === '') throw damaged(name, 'a grid that does not name the datums it leads between');
  return shiftGrid({ name: label, from, to, ...gridAccuracy(name) }, tables);
}

interface Place {
  readonly name: string;
  readonly view: DataView;
  readonly bytes: Uint8Array;
  readonly offset: number;
  readonly little: boolean;
  readonly unit: number;
}

/** A node may miss its place on the even grid by this part of a step, which is rounding; more is a damaged header. */
const STEP_TOLERANCE = 1e-3;

function readTable({ name, view, bytes, offset, little, unit }: Place): OffsetTable {
  if (offset + HEADER_RECORDS * RECORD_BYTES > bytes.length) throw damaged(name, `${bytes.length} bytes, fewer than its header tells of`);
  const header = fields(view, bytes, offset, little);
  const [south, north, east, west, stepLat, stepLon] = ['S_LAT', 'N_LAT', 'E_LONG', 'W_LONG', 'LAT_INC', 'LONG_INC'].map((word) => header.number(word) * unit) as
    [number, number, number, number, number, number];
  const columns = (west - east) / stepLon;
  const rows = (north - south) / stepLat;
  const width = Math.round(columns) + 1;
  const height = Math.round(rows) + 1;
  const count = header.integer('GS_COUNT');
  if (!(width > 1 && height > 1 && Math.abs(columns - width + 1) < STEP_TOLERANCE && Math.abs(rows - height + 1) < STEP_TOLERANCE && count === width * height)) {
    throw damaged(name, `sub-grid ${header.text('SUB_NAME')} of ${count} nodes over ${columns + 1} by ${rows + 1} steps`);
  }
  const start = offset + HEADER_RECORDS * RECORD_BYTES;
  if (start + count * RECORD_BYTES > bytes.length) throw damaged(name, `${bytes.length} bytes, fewer than its header tells of`);
  const dLonDeg = new Float64Array(count);
  const dLatDeg = new Float64Array(count);
  for (let row = 0; row < height; row++) {
    for (let fromEast = 0; fromEast < width; fromEast++) {
      const at = start + (row * width + fromEast) * RECORD_BYTES;
      const node = row * width + (width - 1 - fromEast);
      dLatDeg[node] = view.getFloat32(at, little) * unit;
      dLonDeg[node] = -view.getFloat32(at + 4, little) * unit;
    }
  }
  return { west: -west, south, stepLonDeg: stepLon, stepLatDeg: stepLat, width, height, dLonDeg, dLatDeg };
}

interface Fields {
  text(word: string): string;
  integer(word: string): number;
  number(word: string): number;
}

/** The eleven records at `offset`, by name; a name that is missing reads as NaN or an empty text, which the checks above refuse. */
function fields(view: DataView, bytes: Uint8Array, offset: number, little: boolean): Fields {
  const at = new Map<string, number>();
  for (let record = 0; record < HEADER_RECORDS; record++) at.set(key(bytes, offset + record * RECORD_BYTES), offset + record * RECORD_BYTES + 8);
  return {
    text: (word) => (at.has(word) ? key(bytes, at.get(word)!) : ''),
    integer: (word) => (at.has(word) ? view.getInt32(at.get(word)!, little) : NaN),
    number: (word) => (at.has(word) ? view.getFloat64(at.get(word)!, little) : NaN),
  };
}

/** True for little-endian, false for big, null where the first record is not that of NTv2. */
function endian(bytes: Uint8Array): boolean | null {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (view.getInt32(8, true) === HEADER_RECORDS) return true;
  return view.getInt32(8, false) === HEADER_RECORDS ? false : null;
}

function key(bytes: Uint8Array, offset: number): string {
  return String.fromCharCode(...bytes.subarray(offset, offset + 8)).replace(/[\0 ]+$/, '').trim();
}

function damaged(name: string, found: string): UserError {
  return new UserError({ code: 'grid_file_invalid', where: name, found, wanted: 'a whole NTv2 grid' });
}
