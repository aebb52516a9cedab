/** Cells along each side of the square that the curve fills: 16 bits a side, 32 in all. */
const SIDE = 2 ** 16 - 1;

/**
 * Place of a box's middle along the Hilbert curve through an extent, as an integer from 0 to 2³² − 1. Neighbours on the
 * curve are neighbours on the ground, so boxes sorted by it make tight nodes.
 * Source: public-domain bit-parallel algorithm of "Fast Hilbert Curve Generation" (github.com/rawrunprotected/hilbert_curves).
 */
export function hilbertOf(box: ArrayLike<number>, extent: ArrayLike<number>): number {
  const width = extent[2]! - extent[0]!;
  const height = extent[3]! - extent[1]!;
  const x = width > 0 ? Math.floor((SIDE * ((box[0]! + box[2]!) / 2 - extent[0]!)) / width) : 0;
  const y = height > 0 ? Math.floor((SIDE * ((box[1]! + box[3]!) / 2 - extent[1]!)) / height) : 0;
  return hilbertIndex(x, y);
}

/** Place along the curve of the cell x, y, each from 0 to 65535. */
export function hilbertIndex(x: number, y: number): number {
  let a = x ^ y;
  let b = 0xffff ^ a;
  let c = 0xffff ^ (x | y);
  let d = x & (y ^ 0xffff);
  let na = a | (b >> 1);
  let nb = (a >> 1) ^ a;
  let nc = ((c >> 1) ^ (b & (d >> 1))) ^ c;
  let nd = ((a & (c >> 1)) ^ (d >> 1)) ^ d;
  for (const shift of [2, 4]) {
    [a, b, c, d] = [na, nb, nc, nd];
    na = (a & (a >> shift)) ^ (b & (b >> shift));
    nb = (a & (b >> shift)) ^ (b & ((a ^ b) >> shift));
    nc ^= (a & (c >> shift)) ^ (b & (d >> shift));
    nd ^= (b & (c >> shift)) ^ ((a ^ b) & (d >> shift));
  }
  [a, b, c, d] = [na, nb, nc, nd];
  nc ^= (a & (c >> 8)) ^ (b & (d >> 8));
  nd ^= (b & (c >> 8)) ^ ((a ^ b) & (d >> 8));
  a = nc ^ (nc >> 1);
  b = nd ^ (nd >> 1);
  const i0 = spread(x ^ y);
  const i1 = spread(b | (0xffff ^ ((x ^ y) | a)));
  return ((i1 << 1) | i0) >>> 0;
}

/** The 16 bits of a number with a zero before each. */
function spread(bits: number): number {
  let spreadOut = bits;
  spreadOut = (spreadOut | (spreadOut << 8)) & 0x00ff00ff;
  spreadOut = (spreadOut | (spreadOut << 4)) & 0x0f0f0f0f;
  spreadOut = (spreadOut | (spreadOut << 2)) & 0x33333333;
  return (spreadOut | (spreadOut << 1)) & 0x55555555;
}
