import { cellValue } from './cellValue.js';
import type { Field, Layer } from './types.js';

/** Longest text, since its length is one byte with 255 kept free. */
const TEXT_BYTES = 254;
/** Holds every double at its shortest (`-1.2345678901234567e-100`); GDAL writes the same. */
const REAL_WIDTH = 24;
/** Holds every safe integer with its sign; wider than 9, so that readers take 64 bits. */
const INTEGER_WIDTH = 18;
/** Decimals stated in the header for a real without a stated number of them; the text itself is the shortest exact one. */
const OPEN_DECIMALS = 15;
const SPACE = 0x20;
const HEADER_BYTES = 32;
const FIELD_BYTES = 32;

interface Column {
  readonly field: Field;
  readonly kind: 'C' | 'N';
  readonly width: number;
  readonly decimals: number;
  readonly cells: readonly Uint8Array[];
}

/**
 * The attributes of a layer as a dBASE III table in UTF-8. A real has its field's decimals, or without them its shortest
 * exact text; no value is blank. A text beyond 254 bytes is cut at a whole letter and ends in an ellipsis, as the
 * format holds no more; the other formats keep it whole. The date of the last change is fixed, since bytes must not hang on a clock.
 * Source: dBASE III file structure, as read by shapelib.
 */
export function encodeDbf(layer: Layer): Uint8Array {
  const columns = layer.fields.map(field => columnOf(field, layer));
  const rows = layer.features.length;
  const recordBytes = columns.reduce((sum, { width }) => sum + width, 1);
  const headBytes = HEADER_BYTES + FIELD_BYTES * columns.length + 1;
  const bytes = new Uint8Array(headBytes + recordBytes * rows + 1).fill(SPACE, headBytes);
  const view = new DataView(bytes.buffer);
  // Version 3, and the first day of 2000 (years count from 1900).
  bytes.set([3, 100, 1, 1]);
  view.setUint32(4, rows, true);
  view.setUint16(8, headBytes, true);
  view.setUint16(10, recordBytes, true);
  for (const [i, { field, kind, width, decimals }] of columns.entries()) {
    const at = HEADER_BYTES + FIELD_BYTES * i;
    for (let j = 0; j < field.name.length; j++) bytes[at + j] = field.name.charCodeAt(j);
    bytes[at + 11] = kind.charCodeAt(0);
    bytes[at + 16] = width;
    bytes[at + 17] = decimals;
  }
  bytes[headBytes - 1] = 0x0d;
  let offset = headBytes + 1;
  for (const { kind, width, cells } of columns) {
    for (const [row, cell] of cells.entries()) bytes.set(cell, offset + row * recordBytes + (kind === 'N' ? width - cell.length : 0));
    offset += width;
  }
  bytes[bytes.length - 1] = 0x1a;
  return bytes;
}

function columnOf(field: Field, layer: Layer): Column {
  const encoder = new TextEncoder();
  const cells = layer.features.map(feature => {
    const value = cellValue(field, feature);
    return value === null ? new Uint8Array(0) : typeof value === 'string' ? cut(value) : encoder.encode(numberText(value, field));
  });
  const longest = cells.reduce((most, cell) => Math.max(most, cell.length), 1);
  if (field.type === 'text') return { field, kind: 'C', width: longest, decimals: 0, cells };
  if (field.type === 'integer') return { field, kind: 'N', width: INTEGER_WIDTH, decimals: 0, cells };
  if (field.decimals === undefined) return { field, kind: 'N', width: REAL_WIDTH, decimals: OPEN_DECIMALS, cells };
  return { field, kind: 'N', width: Math.max(longest, field.decimals + 2), decimals: field.decimals, cells };
}

function numberText(value: number, { type, decimals }: Field): string {
  if (type === 'integer' || decimals === undefined) return String(value);
  const text = value.toFixed(decimals);
  return text.length <= REAL_WIDTH ? text : String(value);
}

function cut(text: string): Uint8Array {
  const encoder = new TextEncoder();
  const whole = encoder.encode(text);
  if (whole.length <= TEXT_BYTES) return whole;
  const ellipsis = encoder.encode('…');
  const room = new Uint8Array(TEXT_BYTES - ellipsis.length);
  // Writes whole letters only.
  const { written } = encoder.encodeInto(text, room);
  return Uint8Array.of(...room.subarray(0, written), ...ellipsis);
}
