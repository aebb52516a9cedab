import { STEEL_KG_PER_M3 } from './casing.js';

/** nT of induction in one A/m of field: µ0 × 10⁹. */
const NT_PER_A_PER_M = 400 * Math.PI;

/**
 * Moment, A·m², that the main field alone induces in a solid steel sphere: 3 V H, since a highly permeable sphere is
 * held back by its own demagnetising factor of 1/3. The least that a lump of steel of this mass can have; remanence and
 * a stretched shape make it ten to a hundred times more.
 *
 * Source: Blakely (1995), ch. 5 (uniformly magnetised sphere); demagnetising factor of a sphere, any text on magnetism.
 */
export function inducedSphereMoment(massKg: number, totalNT: number): number {
  return 3 * (massKg / STEEL_KG_PER_M3) * (totalNT / NT_PER_A_PER_M);
}
