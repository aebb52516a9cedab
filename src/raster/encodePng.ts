/** Source: PNG, third edition (W3C 2025), clauses 5 and 11. */
const SIGNATURE = [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a];
const EIGHT_BITS = 8;
const TRUECOLOUR_WITH_ALPHA = 6;
/** Filter `Up`: difference from the row above, which suits maps with smooth colours and wide empty margins. */
const FILTER_UP = 2;
/** CRC-32 polynomial of PNG and zlib, reversed. */
const CRC_POLYNOMIAL = 0xedb88320;

/**
 * RGBA pixels, rows from the top, as PNG. `deflate` makes a zlib stream. Nothing about time or program is written, so
 * equal pixels give equal bytes.
 */
export function encodePng(rgba: Uint8Array, size: { width: number; height: number }, deflate: (bytes: Uint8Array) => Uint8Array): Uint8Array {
  const { width, height } = size;
  if (rgba.length !== width * height * 4 || rgba.length === 0) throw new Error(`${rgba.length} bytes are no ${width} × ${height} RGBA pixels`);
  const stride = width * 4;
  const rows = new Uint8Array((stride + 1) * height);
  for (let row = 0; row < height; row += 1) {
    const out = row * (stride + 1);
    rows[out] = FILTER_UP;
    for (let i = 0; i < stride; i += 1) {
      const at = row * stride + i;
      rows[out + 1 + i] = rgba[at]! - (row > 0 ? rgba[at - stride]! : 0);
    }
  }
  const head = new Uint8Array(13);
  const view = new DataView(head.buffer);
  view.setUint32(0, width);
  view.setUint32(4, height);
  head.set([EIGHT_BITS, TRUECOLOUR_WITH_ALPHA], 8);
  const parts = [Uint8Array.from(SIGNATURE), chunk('IHDR', head), chunk('IDAT', deflate(rows)), chunk('IEND', new Uint8Array(0))];
  const file = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    file.set(part, at);
    at += part.length;
  }
  return file;
}

function chunk(name: string, content: Uint8Array): Uint8Array {
  const bytes = new Uint8Array(12 + content.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, content.length);
  bytes.set(new TextEncoder().encode(name), 4);
  bytes.set(content, 8);
  view.setUint32(8 + content.length, crc32(bytes.subarray(4, 8 + content.length)));
  return bytes;
}

function crc32(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (const byte of bytes) {
    crc ^= byte;
    for (let bit = 0; bit < 8; bit += 1) crc = (crc >>> 1) ^ (CRC_POLYNOMIAL & -(crc & 1));
  }
  return ~crc >>> 0;
}
